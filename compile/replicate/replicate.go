// Package replicate asks whether a fitted model can reproduce the data: it
// holds each modelled variable against values drawn from its own law at the
// rows' own parent values (posterior predictive checks: Rubin 1984; Gelman,
// Meng & Stern 1996), with checks that suit its type.
//
// Read the files in this order: replicate.go (what comes out), sample.go (data
// and replicates side by side), checks.go (which checks), statistics.go (their
// numbers), pictures.go, verdict.go (many checks, one error rate), bands.go.
package replicate

import (
	"context"
	"errors"
	"math/rand/v2"

	"arrowroot/compile/effect"
	"arrowroot/compile/model"
)

// Replicates is how many draws are replicated where nobody asks for another
// number.
const Replicates = 200

// Kept is how many replicates of each variable stay to be written out.
const Kept = 20

// Kind says what a check looks at.
type Kind string

// The kinds.
const (
	Zeros       Kind = "share of zeros"
	Dispersion  Kind = "variance over mean"
	Largest     Kind = "largest"
	Smallest    Kind = "smallest"
	Spread      Kind = "standard deviation"
	Shares      Kind = "share of a level"
	Counts      Kind = "how often each count"
	Calibration Kind = "predicted against happened"
	Shape       Kind = "shape"
	Groups      Kind = "groups"
	Trend       Kind = "trend"
)

// A Check compares one number of the data with the same number of each
// replicate.
type Check struct {
	Variable  string
	Kind      Kind
	Of        string // the level of a share, the plate of groups, the other variable of a trend
	Parent    bool   // Of is read by the law; false: it is left out
	Observed  float64
	Low, High float64 // of 95 % of the replicates
	Centre    float64 // their median
	Tail      float64 // share of replicates at least as far out, in two directions unless Upward
	Beyond    int     // replicates at least as far out, on the side of the data
	Upward    bool    // only a large number speaks against the model
	Distance  float64 // from the centre, in half widths of 95 % of the replicates on that side, over 1.96
	Far       float64 // Distance over what all checks together allow: above 1 is not reproduced
	Failed    bool
	Words     string // "reproduced", or "not reproduced: more zeros than the model gives"
	Picture   Picture

	scores []float64 // of the replicates, as Distance
}

// A Variable is what was found of one of them.
type Variable struct {
	ID       string
	Units    int      // values compared
	Observed int      // of so many observed
	Checks   []*Check // worst first; nil with Refusal
	Figure   Picture  // data over replicates, as suits its type
	Refusal  string   // why none was made
	Rows     []int    // the used row of each value
	Data     []float64
	Values   [][]float64 // the first Kept replicates
}

// Failed reports whether some check was not reproduced.
func (v *Variable) Failed() bool { return len(v.Checks) > 0 && v.Checks[0].Failed }

// Checks is what was found of a fit.
type Checks struct {
	Variables  []*Variable // worst first, those without checks last
	Replicates int
	Made       int     // checks
	Allowed    float64 // distance that all checks together allow
}

// Failed lists the checks that were not reproduced, worst first.
func (c *Checks) Failed() []*Check {
	var out []*Check
	for _, v := range c.Variables {
		for _, k := range v.Checks {
			if k.Failed {
				out = append(out, k)
			}
		}
	}
	sortWorst(out)
	return out
}

// Options of Run.
type Options struct {
	Progress func(done, of int) // called from one goroutine at a time
	Budget   float64            // law evaluations for each variable; 0 = as effect.Options
}

// Run checks every modelled variable of a fit. draws are natural values of all
// parameters (effect's order), already as few as wanted; source gives each
// variable randomness of its own, so that leaving one out changes no other.
// Two checks of one fit are never independent, and there can be dozens: what is
// not reproduced is further out than the worst check of 95 % of the replicates,
// each of which is put in the place of the data (verdict.go).
func Run(ctx context.Context, m *model.Model, draws [][]float64, source func(variable string) rand.Source, opt Options) (*Checks, error) {
	out := &Checks{Replicates: len(draws)}
	total := len(m.Laws) * len(draws)
	for k, l := range m.Laws {
		id := m.Variables[l.Variable].ID
		src := source(id)
		tell := effect.Options{Budget: opt.Budget}
		if opt.Progress != nil {
			tell.Progress = func(done, _ int) { opt.Progress(k*len(draws)+done, total) }
		}
		r, err := effect.Replicate(ctx, m, l.Variable, draws, src, tell)
		if refused := new(effect.NotReplicated); errors.As(err, &refused) {
			out.Variables = append(out.Variables, &Variable{ID: id, Refusal: refused.Reason})
			continue
		}
		if err != nil {
			return nil, err
		}
		if len(r.Rows) < fewest {
			out.Variables = append(out.Variables, &Variable{ID: id, Refusal: "it has too few values to check"})
			continue
		}
		s := newSample(m, l, r, src)
		v := &Variable{ID: id, Units: len(r.Rows), Observed: r.Units, Rows: r.Rows, Data: r.Observed}
		v.Checks = s.checks(k)
		v.Figure = s.figure(v.Checks)
		v.Values = append(v.Values, r.Values[:min(Kept, len(r.Values))]...)
		out.Variables = append(out.Variables, v)
		if err := ctx.Err(); err != nil {
			return nil, err
		}
	}
	out.judge()
	return out, nil
}

// fewest values are needed before anything can be said of them.
const fewest = 5
