package fit

import (
	"context"
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"strings"

	"arrowroot/compile/causal"
	"arrowroot/compile/study"
	"arrowroot/compile/table"
	"arrowroot/infer"
	"arrowroot/infer/score"
	"arrowroot/infer/summary"
)

// A CompareRequest says which rivals are to be set against each other by how
// well they predict the question's outcome.
type CompareRequest struct {
	Study       *study.Study
	Rivals      []string // nil = all of the study
	Question    *study.Question
	Table       *table.Table
	Seed        uint64
	Chains      int                // 0 = 4
	Draws       int                // per chain; 0 = until every quantity is precise enough
	KnownGroups bool               // predict new rows of the groups that are there, not new groups
	Have        map[string]*Result // fits that need not be made again, by rival
}

func (r *CompareRequest) question() study.Question {
	if r.Question == nil {
		return study.Question{}
	}
	return *r.Question
}

// ComparingProgress says how far a comparison has come.
type ComparingProgress struct {
	Doing    string // "fitting Feed only"
	Done, Of int    // parts, of which each rival has one
	Within   infer.Progress
}

// A Comparison says how well rivals predict an outcome that they have not seen
// (SEMANTICS D). It never changes.
type Comparison struct {
	Question  study.Question
	Outcome   string
	Plate     string // each unit left out is one of its levels; "" = one entry of the outcome
	KnownOnly bool   // the outcome varies by groups, and new rows of known ones were predicted
	Units     []string
	Entries   int // recorded outcomes that were scored
	Rivals    []*Scored
	Pairs     []Pair   // every two with a score, the higher one first
	Better    string   // the one rival that predicts better than every other; "" = none is named
	NoBetter  []string // why
	Weights   []float64
	NoWeights string // why there are none
	Seed      uint64
}

// A Scored rival with what must stand beside its score.
type Scored struct {
	Rival    string
	Unit     []float64 // log predictive density of each unit when it is left out
	Score    float64   // their sum
	Error    float64   // its standard error
	Withheld string    // why Score is not to be used; "" = it is

	Parameters float64 // effective number
	K          []float64
	Limit      float64  // of K, above which reweighting cannot be relied on
	Refitted   []string // units that were left out for true
	Doubtful   []string // units whose score cannot be relied on

	WideScore  float64 // by the widely applicable information criterion, for reference
	WideShaky  int     // units for which that is not to be trusted
	Draws      int     // scored
	Replicates int     // fresh group effects averaged over in each draw; 0 = none
	Simulation float64 // simulation error of Score for it

	Identified bool // the question can be answered from this rival's arrows …
	None       bool // … which say that there is no effect
	HeldEnough bool // holding what the question holds is enough
	Why        string

	Trust  summary.Trust
	Fitted *Fitted
	Reused bool // it was there before
}

// A Pair is two rivals by the difference in their scores.
type Pair struct {
	Higher, Lower     string
	Difference, Error float64
	Undecided         string // why neither is said to predict better; "" = the first does
	ByLaws            bool   // they imply the same independences (SEMANTICS D2)
}

// mostRefits is how many units are left out for true, where reweighting cannot
// be relied on, before the score is withheld.
const mostRefits = 10

// roughest is the simulation error that a score may have beside differences of
// score.Small and more.
const roughest = 1

// Compare fits rivals, or takes the fits it is given, and scores how well each
// predicts the outcome of units that it has not seen. An *Incomparable error
// says why they cannot be scored against each other, before anything is
// fitted. A cancelled comparison gives nothing but ctx's error.
func Compare(ctx context.Context, req CompareRequest, watch func(ComparingProgress)) (*Comparison, error) {
	if req.Rivals == nil {
		for _, r := range req.Study.Rivals {
			req.Rivals = append(req.Rivals, r.Name)
		}
	}
	all, units, err := line(&req)
	if err != nil {
		return nil, err
	}
	first := all[0]
	out := &Comparison{
		Question: req.question(), Outcome: req.question().Outcome, Plate: units.plate, Units: units.names, Entries: len(first.observed), Seed: req.Seed,
		KnownOnly: req.KnownGroups && slices.ContainsFunc(all, func(c *contender) bool { return len(c.variedBy()) > 0 }),
	}
	made := make(map[string]*Fitted) // by fingerprint
	for i, c := range all {
		tell := func(doing string) func(infer.Progress) {
			p := ComparingProgress{Doing: doing, Done: i, Of: len(all)}
			if watch == nil {
				return nil
			}
			watch(p)
			return func(within infer.Progress) {
				p.Within = within
				watch(p)
			}
		}
		s, err := c.score(ctx, &req, units, made, tell)
		if err != nil {
			return nil, fmt.Errorf("%s: %w", c.rival, err)
		}
		out.Rivals = append(out.Rivals, s)
		made[c.model.Fingerprint()] = s.Fitted
	}
	out.pair(all)
	out.judge()
	return out, nil
}

// line builds every rival's model and finds out whether they can be compared.
func line(req *CompareRequest) ([]*contender, *leaving, error) {
	no := &Incomparable{}
	if req.question().Outcome == "" {
		no.because("Ask a question first: its outcome is what is predicted.")
	}
	if len(req.Rivals) < 2 {
		no.because("There is only one rival: nothing to compare it with.")
	}
	if err := no.orNil(); err != nil {
		return nil, nil, err
	}
	var all []*contender
	for i, rival := range req.Rivals {
		if slices.Contains(req.Rivals[:i], rival) {
			no.because("%s is named twice.", rival)
			continue
		}
		c, err := contend(req, rival, no)
		if err != nil {
			return nil, nil, err
		}
		if c != nil {
			all = append(all, c)
		}
	}
	if err := no.orNil(); err != nil {
		return nil, nil, err
	}
	sameTask(req, all, no)
	units := leave(req, all, no)
	return all, units, no.orNil()
}

// score fits one rival, if that has not been done, and scores it.
func (c *contender) score(ctx context.Context, req *CompareRequest, units *leaving, made map[string]*Fitted, tell func(string) func(infer.Progress)) (*Scored, error) {
	run := Request{Study: req.Study, Rival: c.rival, Question: req.Question, Table: req.Table, Seed: req.Seed, Chains: req.Chains, Draws: req.Draws}
	s := &Scored{Rival: c.rival}
	if r := req.Have[c.rival]; r != nil && !r.Full.Cut && r.Seed == req.Seed && r.Fingerprint == c.model.Fingerprint() {
		s.Fitted, s.Reused = r.Full, true
	} else if f := made[c.model.Fingerprint()]; f != nil { // of a rival that says the same
		s.Fitted = f
	} else {
		f, err := whole(sampleModel(ctx, c.model, &run, "full", tell("fitting "+c.rival)))
		if err != nil {
			return nil, stoppedOr(ctx, err)
		}
		s.Fitted = f
	}
	s.Trust = s.Fitted.Trust
	c.claim(req, s)
	tell("scoring " + c.rival)
	p := &predicting{contender: c, req: req, run: &run, units: units}
	if err := p.fill(ctx, s, tell); err != nil {
		return nil, stoppedOr(ctx, err)
	}
	switch {
	case s.Trust.Verdict == summary.Unusable:
		s.Withheld = fmt.Sprintf("the fit of %s cannot be trusted", c.rival)
	case slices.ContainsFunc(s.Unit, func(x float64) bool { return math.IsNaN(x) || math.IsInf(x, 0) }):
		s.Withheld = fmt.Sprintf("%s rules out some of what was recorded", c.rival)
	case s.Simulation > roughest:
		s.Withheld = fmt.Sprintf("averaging over new groups leaves the score of %s unsure by %.1f", c.rival, s.Simulation)
	case len(s.Doubtful) > 0:
		s.Withheld = fmt.Sprintf("%s of %s hang on draws that hardly occur (tail above %.2f), too many to leave each out for true",
			plural(len(s.Doubtful), "unit"), c.rival, s.Limit)
	}
	return s, nil
}

// whole refuses a fit that was cut short: half a fit predicts something else.
func whole(f *Fitted, err error) (*Fitted, error) {
	if err == nil && f.Cut {
		return nil, ErrNoDraws
	}
	return f, err
}

// stoppedOr is the reason of a cancel where there was one.
func stoppedOr(ctx context.Context, err error) error {
	if ctx.Err() != nil {
		return ctx.Err()
	}
	return err
}

// claim says what a rival's arrows allow to be said of the question: to
// predict better is not to be right about causes.
func (c *contender) claim(req *CompareRequest, s *Scored) {
	q := req.question()
	if q.Exposure == "" || c.graph.Index(q.Exposure) < 0 {
		s.Why = "the question has no exposure on this sheet"
		return
	}
	claim := claimed(c.graph, &q, limitsOf(req.Study, c.rival, c.graph))
	s.Identified, s.None, s.HeldEnough = claim.identified, claim.none, claim.heldValid
	if !s.Identified {
		s.Why = claim.why
	}
}

// pair sets every two usable scores against each other.
func (o *Comparison) pair(all []*contender) {
	for i, a := range o.Rivals {
		for j, b := range o.Rivals[:i] {
			if a.Withheld != "" || b.Withheld != "" {
				continue
			}
			high, low := b, a
			if a.Score > b.Score {
				high, low = a, b
			}
			d, err := score.Compare(&score.By{Unit: high.Unit}, &score.By{Unit: low.Unit})
			if err != nil { // units are the same
				panic(err)
			}
			p := Pair{Higher: high.Rival, Lower: low.Rival, Difference: d.Score, Error: d.StandardError}
			same := causal.SameIndependences(all[j].graph, all[i].graph)
			p.ByLaws = same.Same
			p.Undecided = undecided(d)
			o.Pairs = append(o.Pairs, p)
		}
	}
	place := func(rival string) int {
		return slices.IndexFunc(o.Rivals, func(s *Scored) bool { return s.Rival == rival })
	}
	slices.SortStableFunc(o.Pairs, func(a, b Pair) int {
		if x, y := o.Rivals[place(a.Higher)].Score, o.Rivals[place(b.Higher)].Score; x != y {
			return sign(y - x)
		}
		return sign(a.Difference - b.Difference)
	})
}

// undecided says why a difference names nobody; "" if it does.
func undecided(d score.Difference) string {
	if d.Score == 0 && d.StandardError == 0 {
		return "they predict the same"
	}
	var reasons []string
	if math.Abs(d.Score) <= score.Small {
		reasons = append(reasons, fmt.Sprintf("a difference up to %d is too small to matter", score.Small))
	}
	if math.Abs(d.Score) <= 2*d.StandardError {
		reasons = append(reasons, "it lies within two standard errors")
	}
	if d.Units < score.Few {
		reasons = append(reasons, fmt.Sprintf("with %s the standard error is itself too unsure (%d are asked for)", plural(d.Units, "unit"), score.Few))
	}
	return strings.Join(reasons, ", and ")
}

func sign(x float64) int {
	switch {
	case x < 0:
		return -1
	case x > 0:
		return 1
	}
	return 0
}

// judge names the rival that predicts better, and gives weights, or says why
// not.
func (o *Comparison) judge() {
	var best *Scored
	var scores [][]float64
	for _, s := range o.Rivals {
		scores = append(scores, s.Unit)
		if s.Withheld != "" {
			o.NoBetter = append(o.NoBetter, s.Withheld)
		} else if best == nil || s.Score > best.Score {
			best = s
		}
	}
	laws := false
	for _, p := range o.Pairs {
		laws = laws || p.ByLaws
		if best != nil && p.Higher == best.Rival && p.Undecided != "" {
			o.NoBetter = append(o.NoBetter, fmt.Sprintf("%s against %s is undecided", p.Higher, p.Lower))
		}
	}
	if o.NoBetter == nil {
		o.Better = best.Rival
	}
	switch {
	case slices.ContainsFunc(o.Rivals, func(s *Scored) bool { return s.Withheld != "" }):
		o.NoWeights = "a score is withheld"
	case laws:
		o.NoWeights = "rivals that imply the same independences differ by laws, not by arrows, and weights between them would say nothing of the arrows"
	default:
		o.Weights = score.Stack(scores)
	}
}

// sourceOf gives the random numbers of new groups: the same for every rival.
func sourceOf(seed uint64) func(name string) rand.Source {
	return func(name string) rand.Source { return rand.NewChaCha8(infer.Key(seed, 0, "predict", name)) }
}
