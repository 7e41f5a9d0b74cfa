package paint

import (
	"arrowroot/app/words"
	"arrowroot/canvas/draw"
	"arrowroot/canvas/scene"
	"arrowroot/compile/replicate"
)

// FitWords name the bins of the paint "fit", and FitSigns tell them apart
// without colour.
var (
	FitWords = [4]string{"reproduced", "just reproduced", "not reproduced", "far off"}
	FitSigns = [4]string{"✓", "·", "!", "×"}
)

// farOff is when a check is further out than so many times what is allowed;
// nearly is when it comes close to that.
const (
	farOff = 2
	nearly = 0.75
)

// Fit paints each node by the check that the model reproduces worst.
func Fit(c *replicate.Checks, stale bool) *scene.Paint {
	p := &scene.Paint{Kind: scene.FitPaint, Stale: stale, Nodes: make(map[string]scene.NodePaint)}
	if c == nil {
		return p
	}
	for _, v := range c.Variables {
		if len(v.Checks) == 0 {
			p.Nodes[v.ID] = scene.NodePaint{Plain: true, Words: "no check: " + v.Refusal}
			continue
		}
		bin := FitBin(v)
		text := v.Checks[0].Words
		if bin < 2 {
			text = FitWords[bin] + " in " + words.Plural(len(v.Checks), "check")
		}
		p.Nodes[v.ID] = scene.NodePaint{Bin: bin, Sign: FitSigns[bin], Words: text}
	}
	return p
}

// FitBin is the bin of a variable with checks.
func FitBin(v *replicate.Variable) int {
	switch worst := v.Checks[0]; {
	case worst.Failed && worst.Far > farOff:
		return 3
	case worst.Failed:
		return 2
	case worst.Far > nearly:
		return 1
	}
	return 0
}

// Replicates draws data over replicates.
func Replicates(width, height float64, p *replicate.Picture, s draw.Style) *draw.List {
	kinds := map[replicate.PictureKind]draw.ProfileKind{
		replicate.Bars: draw.ProfileBars, replicate.Points: draw.ProfilePoints, replicate.Intervals: draw.ProfileIntervals, replicate.Line: draw.ProfileLine,
	}
	switch p.Kind {
	case replicate.NoPicture:
		return &draw.List{Width: width, Height: height, Background: s.Ground}
	case replicate.Tally:
		return draw.HeapPlot(width, height, draw.Heap{Across: p.Across, Values: p.Values, At: p.At, Label: "data " + words.Number(p.At)}, s)
	}
	return draw.ProfilePlot(width, height, draw.Profile{
		Kind: kinds[p.Kind], Across: p.Across, Up: p.Up, X: p.X, Labels: p.Labels,
		Observed: p.Observed, Low: p.Low, Middle: p.Middle, High: p.High,
	}, s)
}
