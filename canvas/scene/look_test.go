package scene

import (
	"image/png"
	"math/rand/v2"
	"os"
	"testing"
	"time"

	"arrowroot/canvas/draw"
	"arrowroot/compile/study"
)

func save(t *testing.T, name string, in Input, scale float64) {
	l, _ := Build(in)
	f, err := os.Create("/tmp/arrowroot/" + name + ".png")
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	png.Encode(f, draw.Raster(l, scale))
}

func TestLook(t *testing.T) {
	in := hedgeInput(Light())
	save(t, "s1", in, 1)
	in.Paint = hedgePaint()
	in.Hover = Target{Kind: OnArrow, Pair: [2]string{"hedge", "bees"}}
	in.Selected.Nodes = []string{"flowers"}
	save(t, "s2", in, 2)
	in.Palette = Dark()
	save(t, "s2d", in, 2)
	in = hedgeInput(Light())
	in.Question.Held = []string{"pesticide", "soil"}
	in.Reading = reading(in.Rival, handPath{1, "soil", []string{"hedge", "soil", "flowers", "bees"}})
	in.LitPath = 0
	in.Rival.Diagram.Arcs = []*study.Arc{{A: "arable", B: "soil"}, {A: "hedge", B: "bees"}}
	arrow(in.Rival, "soil", "flowers").Form = "steps"
	arrow(in.Rival, "hedge", "flowers").VariesBy = []string{"farm"}
	arrow(in.Rival, "arable", "hedge").Form = "offset"
	arrow(in.Rival, "flowers", "bees").With = []string{"hedge"}
	in.Findings = map[string]string{"flowers": "flowers ~ beta: 9 rows are exactly 0"}
	in.Hover = Target{Kind: OnEdge, Node: "flowers"}
	in.Rival.Layout.At["flowers"] = study.Point{X: 520, Y: 224}
	save(t, "s3", in, 1.5)
	in.View = View{Zoom: 0.5}
	save(t, "s4", in, 1)
}

// big is 28 nodes and 99 arrows drawn at random.
func big() *study.Study {
	rng := rand.New(rand.NewPCG(7, 9))
	s := &study.Study{}
	words := []string{"income", "education", "age", "smoking", "diet", "exercise", "housing", "noise", "air quality", "traffic", "stress", "sleep", "weight", "pressure", "lipids", "glucose", "medicine", "visits", "insurance", "region", "climate", "green space", "income support", "parents", "school", "work hours", "illness", "recovery"}
	r := &study.Rival{Name: "big", Diagram: &study.Diagram{}}
	for i, w := range words {
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
	s.Questions = []*study.Question{{Exposure: "diet", Outcome: "illness"}}
	return s
}

func fitted(in Input) Input {
	in.View = Fit(in)
	return in
}

func TestLookBig(t *testing.T) {
	s := big()
	in := Input{Study: s, Rival: s.Rivals[0], Question: s.Questions[0], LitPath: NoPath, Palette: Light(), Width: 1100, Height: 640}
	start := time.Now()
	Build(in)
	t.Log("build with layout", time.Since(start))
	in.At = Places(s, s.Rivals[0], s.Questions[0])
	start = time.Now()
	Build(in)
	t.Log("build", time.Since(start))
	save(t, "big", fitted(in), 1)
	in = hedgeInput(Light())
	in.Rival.Layout = nil
	save(t, "auto", fitted(in), 1)
}
