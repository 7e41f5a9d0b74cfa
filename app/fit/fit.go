// Package fit runs one question of one rival from study and table to draws,
// summaries, effects and paint. The window and the batch program both come
// through here, so that they cannot say different things.
//
// Read fit.go (what goes in and comes out), question.go (questions that cannot
// be answered yet), sample.go (blocks in rounds), quantities.go (parameters as
// numbers), contrast.go (crude, held and full model side by side), claims.go and
// limited.go (what the arrows allow to be said of them), onelaw.go (one of them),
// number.go (a contrast as a number), howwrong.go (how strong an unmeasured cause
// would have to be), paint.go (what the data taught), replicate.go (can the model
// reproduce its data); compare.go (rivals by how well they predict), comparable.go (which
// can be compared), predicting.go (the score of one).
package fit

import (
	"cmp"
	"context"
	"errors"
	"fmt"
	"time"

	"arrowroot/compile/causal"
	"arrowroot/compile/graph"
	"arrowroot/compile/model"
	"arrowroot/compile/study"
	"arrowroot/compile/table"
	"arrowroot/infer"
	"arrowroot/infer/summary"
)

// A Request says what to fit and how long.
type Request struct {
	Study     *study.Study
	Rival     string
	Question  *study.Question // nil = none: the rival is fitted, no effect is computed
	Table     *table.Table
	Seed      uint64
	Chains    int  // 0 = 4
	Draws     int  // per chain; 0 = until every shown quantity is precise enough
	NoEffects bool // leave out crude, held and full model: the quantities are all that is wanted
	NoPaint   bool // leave out what paints the sheet
	Answer    bool // nothing is wanted but an answer: a question that lacks something is a *Blocked error

	grace time.Duration // 0 = afterCancel; tests, which must not depend on the machine's speed, give more
}

func (r *Request) afterCancel() time.Duration { return cmp.Or(r.grace, afterCancel) }

// Level is the credible level of intervals.
func (r *Request) Level() float64 {
	if r.Question != nil && r.Question.Level > 0 && r.Question.Level < 1 {
		return r.Question.Level
	}
	return defaultLevel
}

const defaultLevel = 0.9

func (r *Request) question() study.Question {
	if r.Question == nil {
		return study.Question{}
	}
	return *r.Question
}

// A Result is everything that one fit gave. It never changes.
type Result struct {
	Rival       string
	Question    *study.Question
	Seed        uint64
	Full        *Fitted
	Effect      *Effect  // nil without a complete question
	Unanswered  *Blocked // what the question lacks, where it was asked and Effect is nil for it
	Arrows      []ArrowPaint
	Nodes       []NodePaint
	Fingerprint string // of the full model: a result is stale when the study's differs
	Cut         bool   // the run was cancelled and what it had was kept
	Took        time.Duration
}

// Trust is the verdict that stands on the whole result: the effect's where
// there is one, else the fit's.
func (r *Result) Trust() summary.Trust {
	if r.Effect != nil {
		if n := r.Effect.answer(); n != nil {
			return summary.Worst(n.Trust, r.Full.Trust)
		}
	}
	return r.Full.Trust
}

// A Blocked request has problems that only the user can mend.
type Blocked struct {
	Problems []model.Problem
}

func (e *Blocked) Error() string {
	for _, p := range e.Problems {
		if p.Stops {
			return p.Message
		}
	}
	return "the study has problems"
}

// ErrNoDraws means that a run was cancelled before it had any draws.
var ErrNoDraws = errors.New("cancelled in warm-up: there are no draws to keep")

// afterCancel is how long effects, and then the paint, may still take after a
// cancel: what the draws so far can say at once is said.
const afterCancel = time.Second

// Run fits the request. A *Blocked error lists what stops it; a question that
// lacks something does not, and stands in Unanswered. When ctx is cancelled
// the draws so far are kept: the result comes with Cut set, or ErrNoDraws if
// the warm-up was not over. Crude and held numbers that need fits of their own
// are then left out, and so is whatever takes more than a second.
func Run(ctx context.Context, req Request, watch func(infer.Progress)) (*Result, error) {
	began := time.Now()
	q := req.question()
	m, problems := model.Build(req.Study, req.Rival, q, req.Table, model.Full)
	problems, asked := model.Apart(problems)
	if req.Question != nil {
		asked = append(asked, model.HalfAsked(q)...)
	}
	lacking := lacks(asked)
	if m == nil && lacking != nil && !model.Stops(problems) {
		// The question alone is at fault: the rival can be fitted without it.
		m, problems = model.Build(req.Study, req.Rival, study.Question{}, req.Table, model.Full)
	}
	if m == nil || model.Stops(problems) {
		return nil, &Blocked{problems}
	}
	g, err := req.Study.Graph(req.Rival)
	if err != nil {
		return nil, err
	}
	if req.Answer && lacking != nil {
		return nil, lacking
	}
	full, err := sampleModel(ctx, m, &req, "full", watch)
	if err != nil {
		return nil, err
	}
	r := &Result{
		Rival: req.Rival, Question: req.Question, Seed: req.Seed, Full: full, Unanswered: lacking,
		Fingerprint: m.Fingerprint(),
	}
	if req.Question != nil && lacking == nil && !req.NoEffects {
		if r.Effect, err = contrasts(ctx, &req, g, full, watch); err != nil {
			return nil, fmt.Errorf("effect of %s on %s: %w", q.Exposure, q.Outcome, err)
		}
		r.Effect.Notes = append(r.Effect.Notes, remarks(problems)...)
	}
	r.Cut = full.Cut || ctx.Err() != nil
	if !req.NoPaint {
		if err := r.paint(ctx, &req, causal.AsFitted(g, g.Index(q.Exposure), g.Index(q.Outcome))); err != nil {
			return nil, fmt.Errorf("paint: %w", err)
		}
	}
	r.Took = time.Since(began)
	return r, nil
}

// remarks are what must be said beside an answer: that it reaches beyond the
// data, or hangs on which word counts as 1.
func remarks(problems []model.Problem) []string {
	var out []string
	for _, p := range problems {
		if p.Code == "overlap" || p.Code == "which-is-one" {
			out = append(out, p.Message)
		}
	}
	return out
}

// grace gives a context that outlives ctx's cancel by some time, so that draws
// that were kept can be read.
func grace(ctx context.Context, by time.Duration) (context.Context, context.CancelFunc) {
	late, cancel := context.WithCancel(context.WithoutCancel(ctx))
	stop := context.AfterFunc(ctx, func() {
		timer := time.AfterFunc(by, cancel)
		context.AfterFunc(late, func() { timer.Stop() })
	})
	return late, func() { stop(); cancel() }
}

// Read gives the reading of a question on a rival's graph, with the question's
// own held marks.
func Read(g *graph.Graph, q *study.Question, maxPaths, maxSets int) *causal.Reading {
	query := causal.Query{Exposure: -1, Outcome: -1, MaxPaths: maxPaths, MaxSets: maxSets}
	if q != nil {
		query.Exposure, query.Outcome = g.Index(q.Exposure), g.Index(q.Outcome)
		for _, id := range q.Held {
			if v := g.Index(id); v >= 0 {
				query.Held = append(query.Held, v)
			} else if p := g.Plate(id); p >= 0 {
				query.Within = append(query.Within, p)
			}
		}
	}
	return causal.Read(g, query)
}
