package scene

import (
	"fmt"
	"image"
	"image/draw"
	"math/rand/v2"
	"testing"

	ours "arrowroot/canvas/draw"
	"arrowroot/compile/study"
)

// fifty is a sheet of 50 nodes and 100 arrows with dots, roles and a plate,
// spread over 1366×768.
func fifty() Input {
	rng := rand.New(rand.NewPCG(50, 100))
	s := &study.Study{Plates: []*study.Plate{{Name: "farm"}}}
	r := &study.Rival{Name: "fifty", Layout: &study.Layout{At: map[string]study.Point{}}, Diagram: &study.Diagram{}}
	dots := map[string][]float64{}
	for i := range 50 {
		id := fmt.Sprintf("variable_%d", i)
		s.Variables = append(s.Variables, &study.Variable{ID: id, Unmeasured: i%10 == 9})
		r.Diagram.Nodes = append(r.Diagram.Nodes, &study.Node{Variable: id})
		r.Layout.At[id] = study.Point{X: 90 + float64(i%10)*132, Y: 70 + float64(i/10)*146 + float64(i%2)*24}
		dots[id] = someDots()["hedge"]
	}
	for len(r.Diagram.Arrows) < 100 {
		i, j := rng.IntN(50), rng.IntN(50)
		if i%10 < j%10 && j%10-i%10 < 4 {
			r.Diagram.Arrows = append(r.Diagram.Arrows, &study.Arrow{From: s.Variables[i].ID, To: s.Variables[j].ID})
		}
	}
	s.Rivals = []*study.Rival{r}
	return Input{
		Study: s, Rival: r, Question: &study.Question{Exposure: "variable_10", Outcome: "variable_29"},
		Dots: dots, LitPath: NoPath, Palette: Light(), Width: 1366, Height: 768,
	}
}

// A frame of the sheet beside a plain copy of its pixels, which no way of
// drawing can undercut.
func BenchmarkFrame(b *testing.B) {
	in := fifty()
	list, _ := Build(in)
	for _, scale := range []float64{1, 2} {
		size := image.Rect(0, 0, int(1366*scale), int(768*scale))
		dst, src := image.NewRGBA(size), image.NewRGBA(size)
		painter := ours.NewPainter()
		b.Run(fmt.Sprintf("build%gx", scale), func(b *testing.B) {
			for b.Loop() {
				Build(in)
			}
		})
		b.Run(fmt.Sprintf("paint%gx", scale), func(b *testing.B) {
			for b.Loop() {
				painter.Paint(dst, list, scale)
			}
		})
		b.Run(fmt.Sprintf("copy%gx", scale), func(b *testing.B) {
			for b.Loop() {
				draw.Draw(dst, size, src, image.Point{}, draw.Src)
			}
		})
	}
}
