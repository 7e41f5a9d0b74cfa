package fit

import (
	"context"
	"errors"
	"math"
	"math/rand/v2"

	"arrowroot/compile/causal"
	"arrowroot/compile/effect"
	"arrowroot/compile/graph"
	"arrowroot/compile/model"
	"arrowroot/compile/study"
	"arrowroot/infer"
	"arrowroot/infer/summary"
)

// An Effect is the answer to a question: three numbers side by side and what
// they may be read as (SEMANTICS B8).
type Effect struct {
	Identified   bool     // the arrows allow the effect to be had from what was measured
	Refusal      string   // why there is no full-model number; "" if there is one
	Held         []string // the set of the held number
	HeldProposed bool     // nobody said what to hold: the reading's proposal was taken
	HeldValid    bool     // holding it makes the effect readable
	LawsDisagree bool     // held and full differ by more than two combined sds: neither is headlined

	Crude, Adjusted, Full *Number // nil where not computed; Adjusted is the held number
	Notes                 []string
}

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

// Headline is the number to show first: the full model's, or the held one
// where the full model may not be simulated; nil when laws disagree or nothing
// may be read as an effect.
func (e *Effect) Headline() *Number {
	switch {
	case e.LawsDisagree || !e.Identified:
		return nil
	case e.Full != nil:
		return e.Full
	case e.Adjusted != nil && e.HeldValid:
		return e.Adjusted
	}
	return nil
}

// disagreement is how many combined sds make "laws disagree".
const disagreement = 2

func contrasts(ctx context.Context, req *Request, g *graph.Graph, full *Fitted, watch func(infer.Progress)) (*Effect, error) {
	q := req.question()
	x, y := g.Index(q.Exposure), g.Index(q.Outcome)
	reading := Read(g, &q, 1, 0)
	e := &Effect{Identified: reading.Identifiable, Held: q.Held, HeldValid: reading.HeldValid}
	if q.Held == nil && len(reading.Sets) > 0 {
		best := reading.Sets[max(reading.Precise, 0)]
		e.HeldProposed, e.HeldValid = true, true
		e.Held = []string{}
		for _, v := range best {
			e.Held = append(e.Held, g.Names[v])
		}
	}
	held := q
	held.Held = e.Held
	if held.Held == nil {
		held.Held = []string{}
	}

	var err error
	if e.Crude, err = oneLaw(ctx, req, q, model.Crude, "crude", watch); err != nil {
		return nil, err
	}
	if len(held.Held) > 0 {
		if e.Adjusted, err = oneLaw(ctx, req, held, model.Held, "held", watch); err != nil {
			return nil, err
		}
	} else if e.Crude != nil {
		same := *e.Crude
		e.Adjusted = &same
	}
	if e.Crude != nil {
		e.Crude.Association = !causal.ValidAdjustment(g, x, y, nil)
	}
	if e.Adjusted != nil {
		e.Adjusted.Association = !e.HeldValid
	} else {
		e.Notes = append(e.Notes, "The run was stopped before there was a held number to compare with.")
	}

	kind, district, reason := causal.InterventionCase(g, x, y)
	switch {
	case !e.Identified:
		e.Refusal = "not identified: " + reading.Verdict.Sentence
	case kind == causal.NotSimulated:
		e.Refusal = "identified; not computed by this version: " + reason
	default:
		names := make([]string, len(district))
		for i, v := range district {
			names[i] = g.Names[v]
		}
		c, err := effect.Simulate(context.WithoutCancel(ctx), full.Model, kind, names, q, full.Pooled(), source(req, "full"), effect.Options{})
		var not *effect.NotSimulated
		switch {
		case errors.As(err, &not):
			e.Refusal = "identified; not computed by this version: " + err.Error()
		case err != nil:
			return nil, err
		default:
			e.Full = number(c, full, req)
		}
	}
	if e.Full != nil && e.Adjusted != nil && e.HeldValid {
		gap := math.Abs(e.Full.Centre - e.Adjusted.Centre)
		e.LawsDisagree = gap > disagreement*math.Hypot(e.Full.Spread, e.Adjusted.Spread)
	}
	return e, nil
}

// oneLaw fits the outcome's law alone and gives its contrast; nil if ctx is
// cancelled before there are draws.
func oneLaw(ctx context.Context, req *Request, q study.Question, kind model.Kind, purpose string, watch func(infer.Progress)) (*Number, error) {
	if ctx.Err() != nil {
		return nil, nil
	}
	m, problems := model.Build(req.Study, req.Rival, q, req.Table, kind)
	if m == nil || model.Stops(problems) {
		return nil, &Blocked{problems}
	}
	f, err := sampleModel(ctx, m, req, purpose, watch)
	if errors.Is(err, ErrNoDraws) {
		return nil, nil
	}
	if err != nil {
		return nil, err
	}
	c, err := effect.FromLaw(context.WithoutCancel(ctx), m, q, f.Pooled(), source(req, purpose), effect.Options{})
	if err != nil {
		return nil, err
	}
	return number(c, f, req), nil
}

func source(req *Request, purpose string) rand.Source {
	return rand.NewChaCha8(infer.Key(req.Seed, 0, "effect", purpose))
}

// number summarises a contrast, chain by chain as its draws came.
func number(c *effect.Contrast, f *Fitted, req *Request) *Number {
	level := req.Level()
	chains := regroup(c.Values, c.Draws, f)
	n := &Number{
		Summary: summary.Of(chains, level), Draws: c.Values, Words: c.Words, Rows: c.Rows,
		From: summary.Of(regroup(c.Expected.From, c.Draws, f), level),
		To:   summary.Of(regroup(c.Expected.To, c.Draws, f), level),
	}
	n.Trust = summary.Judge(n.Summary, f.Sampling)
	return n
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
