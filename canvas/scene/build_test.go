package scene

import (
	"bytes"
	"testing"

	"arrowroot/canvas/draw"
	"arrowroot/canvas/internal/golden"
	"arrowroot/compile/causal"
	"arrowroot/compile/study"
)

// The golden pictures were looked at, at both scales and in both palettes,
// when they were made.
func TestPictures(t *testing.T) {
	for _, c := range []struct {
		name  string
		scale float64
		in    func() Input
	}{
		{"paths", 1, func() Input { return hedgeInput(Light()) }},
		{"paths_dark", 1, func() Input { return hedgeInput(Dark()) }},
		{"paint", 2, func() Input { return painted(Light()) }},
		{"paint_dark", 2, func() Input { return painted(Dark()) }},
		{"marks", 1.5, marks},
		{"marks_small", 1, func() Input { in := marks(); in.View.Zoom = 0.5; return in }},
		{"arranged", 1, func() Input {
			in := hedgeInput(Light())
			in.Rival.Layout = nil
			return fitted(in)
		}},
		{"plates", 1, plates},
		{"pointed", 1.5, func() Input { return pointed(Light()) }},
		{"pointed_dark", 1, func() Input { return pointed(Dark()) }},
		{"gestures", 1, gestures},
		{"big", 1, func() Input { return fitted(bigInput()) }},
	} {
		l, _ := Build(c.in())
		golden.Image(t, c.name, draw.Raster(l, c.scale))
	}
	l, _ := Build(painted(Light()))
	var b bytes.Buffer
	if err := draw.WriteSVG(&b, l); err != nil {
		t.Fatal(err)
	}
	golden.Text(t, "paint.svg", b.Bytes())
}

func painted(p Palette) Input {
	in := hedgeInput(p)
	in.Paint = hedgePaint()
	in.Paint.Nodes["pesticide"] = NodePaint{Hatched: true}
	in.Hover = Target{Kind: OnArrow, Pair: [2]string{"hedge", "bees"}}
	in.Selected.Nodes = []string{"flowers"}
	return in
}

// marks shows held nodes, forms, arcs, a finding and a closed path.
func marks() Input {
	in := hedgeInput(Light())
	in.Question.Held = []string{"pesticide", "soil"}
	in.Reading = reading(in.Rival, handPath{causal.BackDoor, "soil", []string{"hedge", "soil", "flowers", "bees"}})
	in.LitPath = 0
	in.Rival.Diagram.Arcs = []*study.Arc{{A: "arable", B: "soil"}, {A: "hedge", B: "bees"}}
	arrow(in.Rival, "soil", "flowers").Form = "steps"
	arrow(in.Rival, "hedge", "flowers").VariesBy = []string{"farm"}
	arrow(in.Rival, "arable", "hedge").Form = "offset"
	arrow(in.Rival, "flowers", "bees").With = []string{"hedge"}
	in.Findings = map[string]string{"flowers": "flowers ~ beta: 9 rows are exactly 0, which a beta law cannot be. Allow exact zeros, or nudge them to 0.001."}
	in.Hover = Target{Kind: OnEdge, Node: "flowers"}
	in.Rival.Layout.At["flowers"] = study.Point{X: 520, Y: 224}
	in.Limits = []string{"arable"}
	in.Study.Variable("flowers").Computed = "hedge * 2"
	return in
}

// pointed shows every kind of mark that a list beside the sheet can set.
func pointed(p Palette) Input {
	in := hedgeInput(p)
	in.Mark = &Mark{
		Trails: []Trail{
			{Look: EffectTrail, Legs: []Leg{{From: "hedge", To: "bees"}}},
			{Look: ClosedTrail, Legs: []Leg{{From: "soil", To: "hedge"}, {From: "soil", To: "flowers"}}, Stops: []string{"soil"}},
		},
		Ring: []string{"bees"}, Box: []string{"soil"},
		Outer: []string{"attitude", "hedge", "pesticide"}, Inner: []string{"attitude", "pesticide"},
		Turn: [][2]string{{"arable", "pesticide"}}, Apart: [][2]string{{"arable", "soil"}}, Offer: [][2]string{{"flowers", "pesticide"}},
	}
	return in
}

// plates has nested and crossed levels.
func plates() Input {
	s := &study.Study{
		Plates: []*study.Plate{{Name: "region"}, {Name: "farm", Within: "region"}, {Name: "observer"}},
		Variables: []*study.Variable{
			{ID: "rain", Plates: []string{"region"}}, {ID: "size", Plates: []string{"farm"}}, {ID: "skill", Plates: []string{"observer"}},
			{ID: "hedge"}, {ID: "bees"},
		},
	}
	r := &study.Rival{Name: "one", Diagram: &study.Diagram{}}
	for _, v := range s.Variables {
		r.Diagram.Nodes = append(r.Diagram.Nodes, &study.Node{Variable: v.ID})
	}
	for _, a := range [][2]string{{"rain", "hedge"}, {"size", "hedge"}, {"hedge", "bees"}, {"skill", "bees"}} {
		r.Diagram.Arrows = append(r.Diagram.Arrows, &study.Arrow{From: a[0], To: a[1]})
	}
	s.Rivals = []*study.Rival{r}
	return fitted(Input{
		Study: s, Rival: r, LitPath: NoPath, Palette: Light(), Width: 640, Height: 480,
		PlateCounts: map[string]int{"region": 6, "farm": 84, "observer": 5},
		Selected:    Selection{Nodes: []string{"rain"}}, Hover: Target{Kind: OnNode, Node: "skill"},
	})
}

func gestures() Input {
	in := hedgeInput(Light())
	in.Reading = nil
	in.Selected.Arrows = [][2]string{{"hedge", "bees"}}
	in.Preview.Draw = &Draft{From: "bees", To: "arable", Refuse: "would close a cycle"}
	box := draw.Rect{X: 40, Y: 250, W: 300, H: 130}
	in.Preview.Box = &box
	in.Preview.Ghost = &study.Point{X: 700, Y: 340}
	in.Focused = true
	return in
}

// Over five open confounding paths only the one picked out is marked.
func TestManyPaths(t *testing.T) {
	in := hedgeInput(Light())
	var many []handPath
	for range mostPaths + 1 {
		many = append(many, handPath{causal.BackDoor, "", []string{"hedge", "soil", "flowers", "bees"}})
	}
	amber := func(in Input) (n int) {
		l, _ := Build(in)
		for _, item := range l.Items {
			if s, ok := item.(*draw.Shape); ok && s.Fill == in.Palette.Halo && !s.Path.Empty() {
				n++
			}
		}
		return n
	}
	in.Reading = reading(in.Rival, many[1:]...)
	if amber(in) != 1 {
		t.Error("five open paths are not marked")
	}
	in.Reading = reading(in.Rival, many...)
	if amber(in) != 0 {
		t.Error("six open paths are marked at once")
	}
	in.LitPath = 2
	if amber(in) != 1 {
		t.Error("the path picked out is not marked")
	}
}

// Names never fall below 11 dips, and no dots are drawn below 70 %.
func TestZoomRules(t *testing.T) {
	for _, zoom := range []float64{MinZoom, 0.5, 0.69, 0.7, 1, 2, MaxZoom} {
		in := hedgeInput(Light())
		in.View.Zoom = zoom
		in.Width, in.Height = 4000, 3000
		l, _ := Build(in)
		names, strips := 0, 0
		for _, item := range l.Items {
			switch it := item.(type) {
			case *draw.Text:
				if in.Study.Variable(it.Text) == nil {
					continue
				}
				names++
				if it.Size < 11 {
					t.Errorf("zoom %g: the name %s is %.1f dips", zoom, it.Text, it.Size)
				}
			case *draw.Discs:
				strips++
			}
		}
		if names != 7 {
			t.Errorf("zoom %g: %d names", zoom, names)
		}
		if (strips > 0) != (zoom >= 0.7) {
			t.Errorf("zoom %g: %d strips of dots", zoom, strips)
		}
	}
}

// No arrow passes behind a node that is not its end.
func TestArrowsPassNodes(t *testing.T) {
	for _, in := range []Input{hedgeInput(Light()), marks(), plates(), bigInput(), fitted(bigInput())} {
		_, m := Build(in)
		for _, l := range m.arrows {
			for _, n := range m.nodes {
				if n == l.from || n == l.to {
					continue
				}
				for _, p := range sample(l.run, 3) {
					if n.depth(p) < 0 {
						t.Errorf("%s → %s passes behind %s", l.pair[0], l.pair[1], n.id)
						break
					}
				}
			}
		}
	}
}

// An empty or missing rival, missing variables and arrows without ends make a
// picture all the same.
func TestBuildOfLittle(t *testing.T) {
	Build(Input{})
	s := study.New()
	Build(Input{Study: s, Rival: s.Rivals[0], Palette: Light(), Width: 10, Height: 10})
	r := &study.Rival{Diagram: &study.Diagram{
		Nodes:  []*study.Node{{Variable: "ghost"}},
		Arrows: []*study.Arrow{{From: "ghost", To: "nobody"}, {From: "ghost", To: "ghost"}},
		Arcs:   []*study.Arc{{A: "ghost", B: "nobody"}},
	}}
	Build(Input{Study: s, Rival: r, Palette: Dark(), Width: 10, Height: 10, LitPath: 7})
	if v := Fit(Input{Study: s, Rival: s.Rivals[0], Width: 500, Height: 300}); v != (View{}) {
		t.Errorf("the view of an empty sheet is %v", v)
	}
	// Nodes on top of one another have no arrow to draw between them.
	same := hedgeInput(Light())
	for id := range same.Rival.Layout.At {
		same.Rival.Layout.At[id] = study.Point{X: 100, Y: 100}
	}
	Build(same)
}

// Fit shows everything inside the widget.
func TestFit(t *testing.T) {
	for _, in := range []Input{hedgeInput(Light()), bigInput(), plates()} {
		for _, size := range [][2]float64{{833, 400}, {1100, 640}, {500, 700}} {
			in.Width, in.Height = size[0], size[1]
			in.View = Fit(in)
			_, m := Build(in)
			r, _ := m.Bounds()
			if in.View.Zoom > MinZoom && (r.X < 0 || r.Y < 0 || r.X+r.W > in.Width || r.Y+r.H > in.Height) {
				t.Errorf("%s in %v: %v at %v", in.Rival.Name, size, r, in.View)
			}
		}
	}
}

// A finding about an arrow is a small mark on it; its words come with the
// pointer.
func TestFindingOnAnArrow(t *testing.T) {
	s := hedgerows()
	in := Input{Study: s, Rival: s.Rivals[0], Palette: Light(), Width: 900, Height: 500, LitPath: NoPath}
	count := func() (marks, words int) {
		list, _ := Build(in)
		for _, item := range list.Items {
			if text, ok := item.(*draw.Text); ok {
				if text.Text == "!" {
					marks++
				}
				if text.Text == "bees come first" {
					words++
				}
			}
		}
		return marks, words
	}
	if m, _ := count(); m != 0 {
		t.Fatal("a mark without a finding")
	}
	in.ArrowFindings = map[[2]string]string{{"hedge", "bees"}: "bees come first"}
	if m, w := count(); m != 1 || w != 0 {
		t.Errorf("%d marks, %d words", m, w)
	}
	in.Hover = Target{Kind: OnArrow, Pair: [2]string{"hedge", "bees"}}
	if m, w := count(); m != 1 || w != 1 {
		t.Errorf("under the pointer %d marks, %d words", m, w)
	}
}
