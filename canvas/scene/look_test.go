package scene

import (
	"image/png"
	"os"
	"testing"

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
