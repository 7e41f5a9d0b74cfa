package fit

import (
	"fmt"
	"math/rand/v2"
	"strconv"
	"strings"

	"arrowroot/compile/effect"
	"arrowroot/compile/study"
	"arrowroot/infer"
	"arrowroot/infer/summary"
)

// A Number is one contrast with its interval, its level and its trust.
type Number struct {
	summary.Summary
	Trust       summary.Trust
	Draws       []float64
	Association bool   // not to be read as an effect
	Words       string // population and what was averaged
	Rows        int
	From, To    summary.Summary // expected outcomes under both settings
}

func source(req *Request, purpose string) rand.Source {
	return rand.NewChaCha8(infer.Key(req.Seed, 0, "effect", purpose))
}

// number summarises a contrast, chain by chain as its draws came; name is what
// its reasons call it. A ratio whose parts may be zero is refused with words.
func number(c *effect.Contrast, f *Fitted, req *Request, name string) (*Number, string) {
	level := req.Level()
	chains := regroup(c.Values, c.Draws, f)
	n := &Number{
		Summary: summary.Of(chains, level), Draws: c.Values, Words: c.Words, Rows: c.Rows,
		From: summary.Of(regroup(c.Expected.From, c.Draws, f), level),
		To:   summary.Of(regroup(c.Expected.To, c.Draws, f), level),
	}
	if q := req.question(); q.As == study.Ratio {
		for _, side := range []summary.Summary{n.From, n.To} {
			if side.Low <= 0 && side.High >= 0 {
				return nil, fmt.Sprintf("a ratio means nothing here: expected %s lies between %s and %s (%s %%), which has 0 in it; ask for the difference instead",
					q.Outcome, digits(side.Low), digits(side.High), strconv.FormatFloat(100*level, 'g', 4, 64))
			}
		}
	}
	n.Constant = n.Constant || c.Exact
	n.Trust = summary.Judge(n.Summary, f.Sampling)
	for i, r := range n.Trust.Reasons {
		n.Trust.Reasons[i] = name + ": " + r
	}
	return n, ""
}

// digits writes a number with three digits that count.
func digits(x float64) string {
	return strings.ReplaceAll(strconv.FormatFloat(x, 'g', 3, 64), "-", "−")
}

// regroup puts values of pooled draws back into chains of equal length.
func regroup(values []float64, draws []int, f *Fitted) [][]float64 {
	chains := make([][]float64, len(f.Chains))
	for i, v := range values {
		at := i
		if draws != nil {
			at = draws[i]
		}
		c := at / f.Steps()
		chains[c] = append(chains[c], v)
	}
	shortest := len(values)
	for _, c := range chains {
		shortest = min(shortest, len(c))
	}
	for i := range chains {
		chains[i] = chains[i][:shortest]
	}
	return chains
}
