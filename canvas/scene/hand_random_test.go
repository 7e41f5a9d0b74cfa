package scene

import (
	"testing"

	"arrowroot/canvas/draw"
	"arrowroot/compile/study"
	"pgregory.net/rapid"
)

// Whatever hands and keys do in whatever order, no gesture panics, every edit
// can be applied, and the study stays sound.
func TestRandomGestures(t *testing.T) {
	keys := []string{"Escape", "Delete", "F2", "Return", "Left", "Right", "Up", "Down", "X"}
	tools := []Tool{SelectTool, VariableTool, ArrowTool, CauseTool, PlateTool}
	rapid.Check(t, func(r *rapid.T) {
		s := newScript(t, hedgerows())
		place := func() draw.Point {
			if rapid.Bool().Draw(r, "on a node") {
				n := rapid.SampledFrom(append(s.in.Rival.Diagram.Nodes, &study.Node{Variable: "nobody"})).Draw(r, "node")
				at := s.node(n.Variable)
				return at.Add(draw.Point{X: rapid.SampledFrom([]float64{0, 40, -47}).Draw(r, "dx")})
			}
			return draw.Point{X: rapid.Float64Range(-50, 950).Draw(r, "x"), Y: rapid.Float64Range(-50, 650).Draw(r, "y")}
		}
		for range rapid.IntRange(1, 30).Draw(r, "events") {
			switch rapid.IntRange(0, 9).Draw(r, "what") {
			case 0:
				s.hand.Take(rapid.SampledFrom(tools).Draw(r, "tool"))
			case 1:
				s.play(Event{Kind: Key, Key: rapid.SampledFrom(keys).Draw(r, "key"), Shift: rapid.Bool().Draw(r, "shift"), Ctrl: rapid.Bool().Draw(r, "ctrl")})
			case 2:
				s.play(Event{Kind: Wheel, At: place(), Turn: rapid.Float64Range(-8, 8).Draw(r, "turn")})
			case 3:
				if s.name != nil {
					s.enter(rapid.SampledFrom([]string{"hedge", "new one", "farm", "", "bees", "x"}).Draw(r, "name"))
					s.name = nil
				}
			default:
				kind := rapid.SampledFrom([]EventKind{Press, Move, Release, DoubleClick, Leave}).Draw(r, "kind")
				s.play(Event{Kind: kind, At: place(), Button: rapid.SampledFrom([]Button{Primary, Primary, Middle, Secondary}).Draw(r, "button"), Shift: rapid.Bool().Draw(r, "shift")})
			}
			if err := study.Check(s.in.Study); err != nil {
				r.Fatal(err)
			}
		}
	})
}
