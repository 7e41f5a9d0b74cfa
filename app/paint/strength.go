package paint

import (
	"arrowroot/canvas/draw"
	"arrowroot/compile/sensitivity"
)

// Strength is the picture of how strong an unmeasured cause would have to be,
// with each held variable and what is 2 and 3 times as strong as it.
func Strength(r *sensitivity.Result) draw.Strength {
	out := draw.Strength{
		Across: "share of what is left of " + r.Input.ExposureName, Up: "share of what is left of " + r.Input.OutcomeName + " that it explains",
		Edges: []draw.Edge{{Label: "no effect left", At: r.Edge}},
	}
	if r.Robustness != nil && r.Robustness.Limit > 0 {
		out.Edges = append(out.Edges, draw.Edge{Label: "interval reaches none", At: r.EdgeOfLimit})
	}
	for _, b := range r.Benchmarks {
		t := draw.Trail{Label: b.Name}
		for _, k := range b.Times {
			if !k.Impossible {
				t.Points = append(t.Points, draw.Point{X: k.WithExposure, Y: k.WithOutcome})
			}
		}
		out.Trails = append(out.Trails, t)
	}
	return out
}
