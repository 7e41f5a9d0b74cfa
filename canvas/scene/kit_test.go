package scene

import (
	"math"
	"math/rand/v2"

	"arrowroot/compile/causal"
	"arrowroot/compile/graph"
	"arrowroot/compile/study"
)

// hedgerows is a study of our own invention, laid out by hand.
func hedgerows() *study.Study {
	at := map[string]study.Point{
		"arable": {X: 152, Y: 120}, "attitude": {X: 328, Y: 72}, "pesticide": {X: 528, Y: 104}, "hedge": {X: 328, Y: 224},
		"bees": {X: 712, Y: 224}, "soil": {X: 152, Y: 328}, "flowers": {X: 512, Y: 336},
	}
	s := &study.Study{
		Title: "Hedgerows and wild bees",
		Variables: []*study.Variable{
			{ID: "hedge", Unit: "m/ha", Scale: study.Real}, {ID: "bees", Scale: study.Count},
			{ID: "flowers", Scale: study.Proportion}, {ID: "pesticide", Scale: study.Real},
			{ID: "soil", Scale: study.Category}, {ID: "arable", Scale: study.Proportion},
			{ID: "attitude", Scale: study.Real, Unmeasured: true},
		},
		Plates:    []*study.Plate{{Name: "farm"}},
		Questions: []*study.Question{{Exposure: "hedge", Outcome: "bees"}},
	}
	r := &study.Rival{Name: "Nest and feed", Layout: &study.Layout{At: at}, Diagram: &study.Diagram{}}
	for _, v := range s.Variables {
		r.Diagram.Nodes = append(r.Diagram.Nodes, &study.Node{Variable: v.ID})
	}
	for _, a := range [][2]string{
		{"arable", "pesticide"}, {"arable", "hedge"}, {"attitude", "hedge"}, {"attitude", "pesticide"}, {"pesticide", "bees"},
		{"hedge", "bees"}, {"hedge", "flowers"}, {"flowers", "bees"}, {"soil", "hedge"}, {"soil", "flowers"},
	} {
		r.Diagram.Arrows = append(r.Diagram.Arrows, &study.Arrow{From: a[0], To: a[1]})
	}
	s.Rivals = []*study.Rival{r}
	return s
}

// arrow finds an arrow of a rival.
func arrow(r *study.Rival, from, to string) *study.Arrow {
	for _, a := range r.Diagram.Arrows {
		if a.From == from && a.To == to {
			return a
		}
	}
	return nil
}

// reading lists paths by hand, so that the picture is tested apart from the
// algorithms: names joined in walking order, arrows looked up in the rival.
func reading(r *study.Rival, paths ...handPath) *causal.Reading {
	spec := graph.Spec{}
	index := map[string]int{}
	for i, n := range r.Diagram.Nodes {
		spec.Names = append(spec.Names, n.Variable)
		index[n.Variable] = i
	}
	for _, a := range r.Diagram.Arrows {
		spec.Arrows = append(spec.Arrows, [2]int{index[a.From], index[a.To]})
	}
	g, err := graph.New(spec)
	if err != nil {
		panic(err)
	}
	read := &causal.Reading{Graph: g}
	for _, p := range paths {
		path := causal.Path{Kind: p.kind, Open: p.closedAt == ""}
		for i, name := range p.nodes {
			path.Nodes = append(path.Nodes, index[name])
			if i == 0 {
				continue
			}
			e := causal.Edge{From: index[p.nodes[i-1]], To: index[name]}
			if arrow(r, p.nodes[i-1], name) == nil {
				e.From, e.To = e.To, e.From
			}
			path.Edges = append(path.Edges, e)
		}
		if p.closedAt != "" {
			path.ClosedAt = []causal.Stop{{Node: index[p.closedAt]}}
		}
		read.Paths = append(read.Paths, path)
	}
	return read
}

type handPath struct {
	kind     causal.PathKind
	closedAt string
	nodes    []string
}

func hedgePaths(r *study.Rival) *causal.Reading {
	return reading(r,
		handPath{causal.Causal, "", []string{"hedge", "bees"}},
		handPath{causal.Causal, "", []string{"hedge", "flowers", "bees"}},
		handPath{causal.BackDoor, "", []string{"hedge", "soil", "flowers", "bees"}},
		handPath{causal.BackDoor, "", []string{"hedge", "arable", "pesticide", "bees"}},
		handPath{causal.BackDoor, "", []string{"hedge", "attitude", "pesticide", "bees"}},
	)
}

// someDots are quantiles of invented data.
func someDots() map[string][]float64 {
	shape := func(power, scale float64) []float64 {
		q := make([]float64, 20)
		for i := range q {
			u := (float64(i) + 0.5) / 20
			q[i] = scale * math.Pow(u, power)
		}
		return q
	}
	bell := make([]float64, 20)
	for i := range bell {
		u := (float64(i) + 0.5) / 20
		bell[i] = math.Log(u / (1 - u))
	}
	return map[string][]float64{
		"hedge": shape(2, 180), "bees": shape(3, 120), "flowers": bell, "arable": bell, "pesticide": shape(1.6, 10),
		"soil": {1, 1, 1, 1, 1, 1, 1, 2, 2, 2, 2, 2, 2, 2, 2, 3, 3, 3, 3, 3},
	}
}

// hedgeInput is the scene that the golden pictures show.
func hedgeInput(p Palette) Input {
	s := hedgerows()
	return Input{
		Study: s, Rival: s.Rivals[0], Question: s.Questions[0], Reading: hedgePaths(s.Rivals[0]),
		Dots: someDots(), PlateCounts: map[string]int{"farm": 84}, Missing: map[string]float64{"bees": 0.06},
		LitPath: NoPath, Palette: p, Width: 833, Height: 400,
	}
}

func hedgePaint() *Paint {
	return &Paint{
		Kind: EffectPaint,
		Nodes: map[string]NodePaint{
			"bees": {Bin: 1, Sign: "+"}, "flowers": {Bin: 1, Sign: "+"}, "soil": {Plain: true},
		},
		Arrows: map[[2]string]ArrowPaint{
			{"hedge", "bees"}:       {Bin: 1, Width: 1.8, Words: "direct, ×1.02 per 10 m/ha (90 %: 0.99 to 1.05)"},
			{"hedge", "flowers"}:    {Bin: 2, Width: 3},
			{"flowers", "bees"}:     {Bin: 2, Width: 4},
			{"pesticide", "bees"}:   {Bin: -2, Width: 3},
			{"arable", "pesticide"}: {Hatched: true, Width: 2.5},
		},
	}
}

// big is 28 nodes and 99 arrows drawn at random: the largest published causal
// diagram of a review of 144 had so many (Tennant et al. 2021).
func big() *study.Study {
	rng := rand.New(rand.NewPCG(7, 9))
	s := &study.Study{}
	r := &study.Rival{Name: "big", Diagram: &study.Diagram{}}
	for i, w := range []string{
		"income", "education", "age", "smoking", "diet", "exercise", "housing", "noise", "air quality", "traffic", "stress",
		"sleep", "weight", "pressure", "lipids", "glucose", "medicine", "visits", "insurance", "region", "climate", "green space",
		"support", "parents", "school", "work hours", "illness", "recovery",
	} {
		id, _ := Identifier(w)
		s.Variables = append(s.Variables, &study.Variable{ID: id, Unmeasured: i%9 == 4})
		r.Diagram.Nodes = append(r.Diagram.Nodes, &study.Node{Variable: id})
	}
	for len(r.Diagram.Arrows) < 99 {
		i, j := rng.IntN(28), rng.IntN(28)
		if i < j && j-i < 12 && arrow(r, s.Variables[i].ID, s.Variables[j].ID) == nil {
			r.Diagram.Arrows = append(r.Diagram.Arrows, &study.Arrow{From: s.Variables[i].ID, To: s.Variables[j].ID})
		}
	}
	s.Rivals = []*study.Rival{r}
	s.Questions = []*study.Question{{Exposure: "exercise", Outcome: "illness"}}
	return s
}

func bigInput() Input {
	s := big()
	return Input{Study: s, Rival: s.Rivals[0], Question: s.Questions[0], LitPath: NoPath, Palette: Light(), Width: 1100, Height: 640}
}

func fitted(in Input) Input {
	in.View = Fit(in)
	return in
}
