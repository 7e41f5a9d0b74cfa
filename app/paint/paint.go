// Package paint turns what a fit says of arrows and nodes into colours, signs
// and words for the sheet (SEMANTICS G). The window and the report both paint
// from here.
//
// Read paint.go (the sheet), strength.go, checks.go and differences.go (plots).
package paint

import (
	"fmt"
	"math"
	"strings"

	"arrowroot/app/fit"
	"arrowroot/app/words"
	"arrowroot/canvas/scene"
	"arrowroot/infer/summary"
)

// Effects are in plausible widths of the child. Under small a change is no
// change to speak of; from large on it is a large one.
const (
	small = 0.02
	large = 0.10
)

// Of paints a result. stale dims it.
func Of(r *fit.Result, kind scene.PaintKind, stale bool) *scene.Paint {
	p := &scene.Paint{
		Kind: kind, Stale: stale,
		Nodes:  make(map[string]scene.NodePaint),
		Arrows: make(map[[2]string]scene.ArrowPaint),
	}
	for _, n := range r.Nodes {
		p.Nodes[n.Variable] = node(r, n, kind)
	}
	for _, a := range r.Arrows {
		p.Arrows[[2]string{a.From, a.To}] = arrow(a, kind)
	}
	return p
}

// trustSigns tell the verdicts apart without colour.
var trustSigns = map[summary.Verdict]string{summary.Sound: "✓", summary.Caution: "!", summary.Unusable: "×"}

func node(r *fit.Result, n fit.NodePaint, kind scene.PaintKind) scene.NodePaint {
	switch kind {
	case scene.LearnedPaint:
		if !n.Modelled || math.IsNaN(n.Learned) {
			return scene.NodePaint{Plain: true, Words: "given, not modelled"}
		}
		return scene.NodePaint{Bin: fourth(n.Learned), Words: learnedWords(n.Learned)}
	case scene.TrustPaint:
		if !n.Modelled {
			return scene.NodePaint{Plain: true, Words: "given, not modelled"}
		}
		return scene.NodePaint{Bin: int(n.Trust.Verdict), Sign: trustSigns[n.Trust.Verdict], Words: n.Trust.String()}
	}
	if q := r.Question; q != nil && q.Exposure == n.Variable {
		return scene.NodePaint{Plain: true, Words: "the exposure: it is set"}
	}
	switch {
	case n.Refused:
		return scene.NodePaint{Plain: true, Words: "its change cannot be had from this fit"}
	case n.Plain:
		return scene.NodePaint{Plain: true, Words: "does not descend from the exposure"}
	}
	bin, sign, unsure := effectBin(n.Summary, n.Unsigned)
	return scene.NodePaint{Bin: bin, Sign: sign, Hatched: unsure, Words: widths(n.Summary)}
}

func arrow(a fit.ArrowPaint, kind scene.PaintKind) scene.ArrowPaint {
	switch kind {
	case scene.LearnedPaint:
		if math.IsNaN(a.Learned) {
			return scene.ArrowPaint{Words: "nothing to learn: no coefficient of its own"}
		}
		return scene.ArrowPaint{Bin: fourth(a.Learned), Width: 1.5 + 2*a.Learned, Words: learnedWords(a.Learned)}
	case scene.TrustPaint:
		return scene.ArrowPaint{Bin: int(a.Trust.Verdict), Words: a.Trust.String()}
	}
	bin, _, unsure := effectBin(a.Summary, a.Unsigned)
	text := "direct, " + a.Words
	if a.Association {
		text = "association, " + strings.TrimPrefix(text, "direct, ")
	}
	return scene.ArrowPaint{
		Bin: bin, Hatched: unsure, Association: a.Association, Words: text,
		Width: 1.5 + 4*math.Min(1, math.Abs(a.Centre)/0.4),
	}
}

// effectBin sorts a change into −2…2. It is too unsure to say when the
// interval holds both nothing and a change worth the name of either sign.
func effectBin(s summary.Summary, unsigned bool) (bin int, sign string, unsure bool) {
	size := math.Abs(s.Centre)
	switch {
	case size >= large:
		bin = 2
	case size >= small:
		bin = 1
	}
	if unsigned {
		return bin, map[bool]string{true: "±"}[bin > 0], s.Low < small && s.High > large
	}
	if s.Low < 0 && s.High > 0 && (s.Low < -small || s.High > small) {
		return 0, "", true
	}
	if bin == 0 {
		return 0, "", false
	}
	if s.Centre < 0 {
		return -bin, "−", false
	}
	return bin, "+", false
}

func fourth(share float64) int { return min(3, max(0, int(4*share))) }

func learnedWords(share float64) string {
	return fmt.Sprintf("the data narrowed the prior by %.0f %%", 100*share)
}

func widths(s summary.Summary) string {
	return fmt.Sprintf("%s plausible widths (%s %s to %s)", words.Number(s.Centre), words.Percent(s.Level), words.Number(s.Low), words.Number(s.High))
}
