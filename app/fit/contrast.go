package fit

import (
	"context"
	"errors"
	"fmt"
	"math"
	"strings"

	"arrowroot/compile/causal"
	"arrowroot/compile/effect"
	"arrowroot/compile/graph"
	"arrowroot/compile/model"
	"arrowroot/compile/sensitivity"
	"arrowroot/compile/study"
	"arrowroot/infer"
	"arrowroot/infer/summary"
)

// An Effect is the answer to a question: three numbers side by side and what
// they may be read as (SEMANTICS B8).
type Effect struct {
	Identified   bool     // the arrows allow the effect to be had from what was measured
	None         bool     // no arrows lead from exposure to outcome: the full model says exactly no change
	Held         []string // the set of the held number
	HeldProposed bool     // nobody said what to hold: the reading's proposal was taken
	HeldValid    bool     // holding it makes the effect readable
	LawsDisagree bool     // held and full differ by more than two combined sds: neither is headlined
	Cut          bool     // the run was cancelled before all numbers were there: none is headlined

	// Nil where not computed, each with its reason, which is "" beside a
	// number. Adjusted is the held number; Refusal speaks of Full.
	Crude, Adjusted, Full                  *Number
	CrudeRefusal, AdjustedRefusal, Refusal string

	// How strong an unmeasured cause would have to be to explain the answer
	// away; nil with a reason.
	Sensitivity   *sensitivity.Result
	NoSensitivity string

	Notes []string
}

// Headline is the number to show first: the full model's, or the held one
// where the full model may not be simulated; nil when laws disagree, nothing
// may be read as an effect, its computation cannot be trusted, or the run was
// cut short.
func (e *Effect) Headline() *Number {
	if n := e.answer(); n != nil && n.Trust.Verdict < summary.Unusable {
		return n
	}
	return nil
}

// answer is the number that would be shown first if it can be trusted.
func (e *Effect) answer() *Number {
	switch {
	case e.Cut || e.LawsDisagree || !e.Identified:
		return nil
	case e.Full != nil:
		return e.Full
	case e.HeldValid:
		return e.Adjusted
	}
	return nil
}

// disagreement is how many combined sds make "laws disagree".
const disagreement = 2

// stopped is why a number is missing after a cancel.
const stopped = "the run was stopped before it was computed"

func contrasts(ctx context.Context, req *Request, g *graph.Graph, full *Fitted, watch func(infer.Progress)) (*Effect, error) {
	q := req.question()
	claim := claimed(g, &q, limitsOf(req.Study, req.Rival, g))
	claim.leaveOut(g, &q, req.Study, full.Model)
	e := &Effect{
		Identified: claim.identified, None: claim.none,
		Held: claim.held, HeldProposed: claim.proposed, HeldValid: claim.heldValid, Notes: claim.notes,
	}
	held := q
	held.Held = e.Held
	if held.Held == nil {
		held.Held = []string{}
	}

	late, cancel := grace(ctx, req.afterCancel())
	defer cancel()
	one := &oneLaw{req: req, full: full, watch: watch}
	var err error
	if direct(&q) {
		e.CrudeRefusal = "not for a direct effect, since the outcome's law on the exposure alone does not read what is fixed"
	} else if e.Crude, e.CrudeRefusal, err = one.number(ctx, late, q, model.Crude, "crude"); err != nil {
		return nil, err
	}
	if len(held.Held) > 0 || direct(&q) {
		if e.Adjusted, e.AdjustedRefusal, err = one.number(ctx, late, held, model.Held, "held"); err != nil {
			return nil, err
		}
	} else {
		e.AdjustedRefusal = e.CrudeRefusal
		if e.Crude != nil {
			same := *e.Crude
			e.Adjusted = &same
		}
	}
	if e.Crude != nil {
		e.Crude.Association = e.None || !claim.crudeValid
	}
	if e.Adjusted != nil {
		e.Adjusted.Association = e.None || !e.HeldValid
	}
	if err := e.simulate(late, req, g, claim, full); err != nil {
		return nil, err
	}
	if asked := full.Model.Asked; asked != nil {
		for _, l := range asked.Lacking {
			e.Notes = append(e.Notes, fmt.Sprintf("%d of the used rows lack %s and are not among those asked about", l.Rows, l.Variable))
		}
	}
	e.Cut = full.Cut || ctx.Err() != nil
	if e.Cut {
		e.Notes = append(e.Notes, "The run was stopped before the numbers could be set beside each other: none of them is the answer yet.")
	}
	if e.Full != nil && e.Adjusted != nil && e.HeldValid && e.Full.Trust.Verdict < summary.Unusable && e.Adjusted.Trust.Verdict < summary.Unusable {
		gap := math.Abs(e.Full.Centre - e.Adjusted.Centre)
		e.LawsDisagree = gap > disagreement*math.Hypot(e.Full.Spread, e.Adjusted.Spread)
	}
	e.howWrong(q, full.Model)
	return e, nil
}

// simulate fills in the full model's number, or why there is none.
func (e *Effect) simulate(ctx context.Context, req *Request, g *graph.Graph, claim *claims, full *Fitted) error {
	q := req.question()
	x, y := g.Index(q.Exposure), g.Index(q.Outcome)
	kind, districts, reason := effect.Districts(causal.AsFitted(g, x, y), &q, y)
	var c *effect.Contrast
	var err error
	switch {
	case e.None:
		c, err = effect.NoChange(ctx, full.Model, q, full.Pooled(), source(req, "full"), options(req))
	case !e.Identified:
		// Said once, in front.
		e.Refusal = "not identified: " + strings.Replace(claim.why, "The effect is not identified: what", "What", 1)
		if strings.HasPrefix(claim.why, "The direct effect") { // which says so itself
			e.Refusal = claim.why
		}
		return nil
	case claim.fullWhy != "":
		e.Refusal = "not that of all rows: " + claim.fullWhy
		return nil
	case kind == causal.NotSimulated:
		e.Refusal = "identified; not computed by this version: " + reason
		return nil
	default:
		c, err = effect.Simulate(ctx, full.Model, kind, districts, q, full.Pooled(), source(req, "full"), options(req))
	}
	var not *effect.NotSimulated
	switch {
	case errors.As(err, &not):
		e.Refusal = "identified; not computed by this version: " + err.Error()
	case err != nil && ctx.Err() != nil:
		e.Refusal = stopped
	case err != nil:
		return err
	default:
		e.Full, e.Refusal = number(c, full, req, q.Exposure+" → "+q.Outcome+", full model")
		if q.Groups == study.NewGroups && len(c.New) == 0 && !e.None {
			e.Notes = append(e.Notes, fmt.Sprintf("nothing on the way from %s to %s varies by a plate, so new groups are like these", q.Exposure, q.Outcome))
		}
	}
	return nil
}

func options(req *Request) effect.Options { return effect.Options{Level: req.Level()} }
