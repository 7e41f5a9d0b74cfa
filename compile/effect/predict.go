package effect

import (
	"context"
	"fmt"
	"math"
	"math/rand/v2"
	"runtime"
	"sync"

	"arrowroot/compile/kernel"
	"arrowroot/compile/model"
)

// Units says which entries of an outcome are predicted together (SEMANTICS D3).
type Units struct {
	Of    []int32 // of each entry, at the outcome's own level; -1 = not scored
	Count int
	New   bool // units are new groups: what varies by a plate is integrated over fresh draws
}

// A Predicted holds the log density of each unit's observed outcomes under the
// outcome's law, by draw.
type Predicted struct {
	Log        [][]float64 // unit, draw
	Replicates int         // fresh values of group effects averaged over; 0 = none were drawn
	Error      float64     // simulation error of the sum over units (standard deviation)
}

// Limits of the integration over new groups.
const (
	fewestReplicates = 64   // in each of two halves
	mostReplicates   = 2048 // likewise
	replicateError   = 0.1  // of the sum over units: small beside the least difference that counts
	replicatePilot   = 16   // draws that show the error
	predictBudget    = 1e9  // law evaluations
)

// Predict gives the log densities of an outcome's observed entries under its
// law, the values that the law reads as they are in the data, or as the draw
// fills them in. For new groups the likelihood of a unit is averaged over
// effects drawn from their mean and sd, the same standard scores for every
// draw and, source being given the plate's name, for every rival; their number
// is doubled until two halves agree.
func Predict(ctx context.Context, m *model.Model, outcome string, draws [][]float64, units Units, source func(name string) rand.Source, opt Options) (*Predicted, error) {
	p, err := newPlanner(m)
	if err != nil {
		return nil, err
	}
	at, ok := p.variables[outcome]
	if !ok {
		return nil, &unknownError{outcome}
	}
	if p.laws[at] == nil {
		return nil, fmt.Errorf("%s has no law in this fit", outcome)
	}
	if len(units.Of) != len(m.Variables[at].Values) {
		return nil, fmt.Errorf("%d entries of %s were to be scored, and there are %d", len(units.Of), outcome, len(m.Variables[at].Values))
	}
	s := &predictor{planner: p, law: p.laws[at], values: m.Variables[at].Values, units: units, rows: rowsOf(m, nil, 0)}
	if s.form, err = formOf(s.law); err != nil {
		return nil, fmt.Errorf("the law of %s: %w", outcome, err)
	}
	s.place()
	if units.New {
		if err := s.renew(at); err != nil {
			return nil, err
		}
	}
	out := &Predicted{}
	if len(s.fresh) > 0 {
		n := fewestReplicates
		budget := opt.Budget
		if budget <= 0 {
			budget = predictBudget
		}
		for ; ; n *= 2 {
			s.score(source, n)
			if out.Error, err = s.pilot(ctx, draws); err != nil {
				return nil, err
			}
			next := float64(2*n*halves) * float64(s.rows.n) * float64(len(draws))
			if out.Error <= replicateError || n >= mostReplicates || next > budget {
				break
			}
		}
		out.Replicates = halves * n
	}
	out.Log, err = s.all(ctx, draws, opt)
	return out, err
}

// halves are independent sets of fresh values, whose difference tells the error.
const halves = 2

// A predictor evaluates one law at the observed entries of its variable.
type predictor struct {
	*planner
	law    *law
	form   *kernel.Density
	values []float64
	units  Units
	rows   *rowset
	row    []int // a row of each entry

	fresh  []freshVector
	scores [halves][][]float64 // standard scores: per fresh vector those of each level, replicates side by side
	n      int                 // replicates in each half
}

// formOf is the density that takes a law's predictors on the link scale, or its
// natural arguments.
func formOf(l *law) (*kernel.Density, error) {
	form := l.Family.Natural
	if len(l.predictors) > 0 {
		form = l.Family.Linked
	}
	if form == nil {
		return nil, fmt.Errorf("it has no density")
	}
	return form, nil
}

// place finds a row that has each entry.
func (s *predictor) place() {
	s.row = make([]int, len(s.values))
	for i := range s.row {
		s.row[i] = i
	}
	if s.law.Plate >= 0 {
		for i, level := range s.rows.of[s.law.Plate] {
			s.row[level] = i
		}
	}
}

// renew finds the vectors that are drawn anew. One that another law reads too
// would be known from there, and is no new group's.
func (s *predictor) renew(outcome int) error {
	var err error
	if s.fresh, err = s.vectorsOf(s.law); err != nil {
		return err
	}
	for v, l := range s.laws {
		if v == outcome || l == nil {
			continue
		}
		shared, err := s.vectorsOf(l)
		if err != nil {
			return err
		}
		for _, a := range shared {
			for _, b := range s.fresh {
				if a.at == b.at {
					return fmt.Errorf("the laws of %s and %s share effects of %s, so that those of a group left out would be known from the other law",
						s.m.Variables[outcome].ID, s.m.Variables[v].ID, s.m.Plates[a.plate].Name)
				}
			}
		}
	}
	return nil
}

// score draws n standard scores for each level in each half, stratified.
func (s *predictor) score(source func(name string) rand.Source, n int) {
	s.n = n
	for h := range s.scores {
		s.scores[h] = nil
		seen := make(map[int]int) // vectors of each plate
		for _, f := range s.fresh {
			rng := rand.New(source(fmt.Sprintf("%s\x00%d\x00%d\x00%d", s.m.Plates[f.plate].Name, seen[f.plate], h, n)))
			seen[f.plate]++
			z := make([]float64, f.size*n)
			for level := range f.size {
				u := z[level*n : (level+1)*n]
				stratified(u, rng)
				for i, x := range u {
					u[i] = math.Sqrt2 * math.Erfinv(2*x-1)
				}
			}
			s.scores[h] = append(s.scores[h], z)
		}
	}
}

// pilot tells the simulation error of the sum over units from a few draws.
func (s *predictor) pilot(ctx context.Context, draws [][]float64) (float64, error) {
	b := newReckoner(s)
	gap := make([]float64, s.units.Count)
	n := min(replicatePilot, len(draws))
	for i := range n {
		if ctx.Err() != nil {
			return 0, ctx.Err()
		}
		b.reckon(draws[i*len(draws)/n])
		for u := range gap {
			gap[u] += (b.half[0][u] - b.half[1][u]) / halves / float64(n)
		}
	}
	square := 0.0
	for _, g := range gap {
		square += g * g
	}
	return math.Sqrt(square), nil
}

// all evaluates every draw, on all cores.
func (s *predictor) all(ctx context.Context, draws [][]float64, opt Options) ([][]float64, error) {
	out := make([][]float64, s.units.Count)
	for u := range out {
		out[u] = make([]float64, len(draws))
	}
	clock := progress{tell: opt.Progress, of: len(draws)}
	workers := min(runtime.GOMAXPROCS(0), len(draws))
	var wait sync.WaitGroup
	for g := range workers {
		wait.Go(func() {
			b := newReckoner(s)
			for i := g; i < len(draws) && ctx.Err() == nil; i += workers {
				b.reckon(draws[i])
				for u, x := range b.log {
					out[u][i] = x
				}
				clock.tick()
			}
		})
	}
	wait.Wait()
	return out, ctx.Err()
}

// A reckoner is one goroutine's work space.
type reckoner struct {
	*predictor
	w        *worker
	rows     *rowset // with the draw's values in the places of missing entries
	unknowns []unknown
	columns  [][]float64 // arguments of the form, over rows
	args     [][]float64 // of one row
	scratch  []float64
	drawn    []float64
	log      []float64         // by unit
	once     []float64         // by unit, of one replicate
	half     [halves][]float64 // by unit: the likelihood averaged over one half
}

func newReckoner(s *predictor) *reckoner {
	b := &reckoner{predictor: s, unknowns: s.rows.unknowns(s.resolver), scratch: make([]float64, 4*kernel.BlockRows),
		log: make([]float64, s.units.Count), once: make([]float64, s.units.Count)}
	b.rows = s.rows.own(b.unknowns)
	b.w = newWorker(b.rows, s.slots)
	for h := range b.half {
		b.half[h] = make([]float64, s.units.Count)
	}
	return b
}

// reckon fills log for one draw.
func (b *reckoner) reckon(draw []float64) {
	b.rows.fill(b.unknowns, draw)
	copy(b.w.columns, b.rows.columns)
	b.w.draw = draw
	if len(b.fresh) == 0 {
		b.add(b.log)
		return
	}
	b.drawn = append(b.drawn[:0], draw...)
	b.w.draw = b.drawn
	for h, scores := range b.scores {
		log := b.half[h]
		for i := range log {
			log[i] = math.Inf(-1)
		}
		for r := range b.n {
			for k, f := range b.fresh {
				mean := 0.0
				if f.mean >= 0 {
					mean = draw[f.mean]
				}
				for j := range f.size {
					b.drawn[f.at+j] = mean + draw[f.sd]*scores[k][j*b.n+r]
				}
			}
			b.add(b.once)
			for u, x := range b.once {
				log[u] = logAdd(log[u], x)
			}
		}
		for u := range log {
			log[u] -= math.Log(float64(b.n))
		}
	}
	for u := range b.log {
		b.log[u] = logAdd(b.half[0][u], b.half[1][u]) - math.Log(halves)
	}
}

// add sums the log densities of each unit's entries under the current draw.
func (b *reckoner) add(log []float64) {
	clear(log)
	e := b.w.natural(b.law)
	b.columns = append(b.columns[:0], e.predictors...)
	for i := range e.cuts {
		b.columns = append(b.columns, e.cuts[i:i+1])
	}
	for _, x := range e.arguments {
		if x != nil { // else the predictor is in its place
			b.columns = append(b.columns, x)
		}
	}
	if len(b.args) != len(b.columns) {
		b.args = make([][]float64, len(b.columns))
	}
	for entry, unit := range b.units.Of {
		if unit < 0 {
			continue
		}
		i := b.row[entry]
		for k, x := range b.columns {
			if len(x) > 1 {
				x = x[i : i+1]
			}
			b.args[k] = x
		}
		log[unit] += b.form.Block(1, b.values[entry:entry+1], b.args, nil, nil, nil, b.scratch)
	}
}

// logAdd is the log of the sum of two numbers given by their logs.
func logAdd(a, b float64) float64 {
	if a < b {
		a, b = b, a
	}
	if math.IsInf(b, -1) {
		return a
	}
	return a + math.Log1p(math.Exp(b-a))
}
