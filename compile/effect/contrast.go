package effect

import (
	"context"
	"fmt"
	"math"
	"math/rand/v2"
	"runtime"
	"slices"
	"sync"

	"arrowroot/compile/causal"
	"arrowroot/compile/model"
	"arrowroot/compile/study"
)

// Limits of simulation. A unit of work is one evaluation of a law at one row,
// 20 to 50 ns.
const (
	defaultBudget = 5e7
	fewestDraws   = 1000 // before rows are thinned: enough for an interval with an effective size of 400
	fewestRows    = 2000
	pilotDraws    = 64   // draws that show how large the simulation error is
	tolerance     = 0.05 // simulation error allowed, in posterior sds (SEMANTICS B1)
	rounding      = 1e-9 // of the values compared: not worth a replicate
	moreWork      = 3    // budgets that further replicates may take
)

// quantileWork is what simulating one value costs, in units of work, where it
// is far from one (measured).
var quantileWork = map[string]float64{
	"Student t": 160, "gamma": 80, "beta": 80, "negative binomial": 50, "half-t": 160, "Poisson": 12, "binomial": 20,
}

// Simulate gives the contrast of a full model: expected outcomes with the
// exposure set, what descends from it simulated from the fitted laws in order,
// everything else at row values (SEMANTICS B1–B7). The case and the members of
// the exposure's district, by variable ID, come from causal.InterventionCase;
// in case (c) the error is a *NotSimulated. Rows are the fitted ones; for a
// question about a population like these, each draw weighs the outermost
// groups by a Bayesian bootstrap. The same source gives the same values.
func Simulate(ctx context.Context, m *model.Model, c causal.Case, district []string, q study.Question, draws [][]float64, src rand.Source, opt Options) (*Contrast, error) {
	if c == causal.NotSimulated {
		return nil, &NotSimulated{q.Exposure, q.Outcome}
	}
	if c != causal.ObservedForDistrict {
		district = nil
	}
	return contrast(ctx, m, district, q, draws, src, opt, false)
}

// FromLaw gives the contrast of a held or crude model: the outcome's law with
// the exposure set, mediators left out, averaged over the same rows.
func FromLaw(ctx context.Context, m *model.Model, q study.Question, draws [][]float64, src rand.Source, opt Options) (*Contrast, error) {
	return contrast(ctx, m, nil, q, draws, src, opt, true)
}

func contrast(ctx context.Context, m *model.Model, district []string, q study.Question, draws [][]float64, src rand.Source, opt Options, alone bool) (*Contrast, error) {
	p, err := newPlanner(m)
	if err != nil {
		return nil, err
	}
	exposure, outcome, err := p.ends(&q)
	if err != nil {
		return nil, err
	}
	plan, err := p.plan(exposure, outcome, p.indices(district), alone)
	if err != nil {
		return nil, err
	}
	s, err := p.scaleOf(outcome, q.OutcomeLevels)
	if err != nil {
		return nil, err
	}
	if s.parts() > 1 {
		return nil, fmt.Errorf("%s has levels; say the probability of which of them is asked for", q.Outcome)
	}
	from, to, err := arms(m.Variables[exposure], &q)
	if err != nil {
		return nil, err
	}
	sim := &simulation{
		planner: p, plan: plan, scale: s, arms: []arm{from, to}, draws: draws, opt: opt,
		bootstrap: q.Over == study.PopulationAlike,
		summary: func(sides [][]float64) float64 {
			if q.As == study.Ratio {
				return sides[1][0] / sides[0][0]
			}
			return sides[1][0] - sides[0][0]
		},
	}
	if err := sim.run(ctx, src); err != nil {
		return nil, err
	}
	c := &Contrast{Values: sim.values, Draws: sim.picked, Rows: sim.rows.n, Error: sim.noise, Words: sim.words()}
	for i := range sim.values {
		c.Expected.From = append(c.Expected.From, sim.mean(i, 0)[0])
		c.Expected.To = append(c.Expected.To, sim.mean(i, 1)[0])
	}
	return c, nil
}

// ends finds a question's exposure and outcome.
func (p *planner) ends(q *study.Question) (exposure, outcome int, err error) {
	for _, end := range []struct {
		id string
		to *int
	}{{q.Exposure, &exposure}, {q.Outcome, &outcome}} {
		v, ok := p.variables[end.id]
		if !ok {
			return 0, 0, fmt.Errorf("%s is not in this fit", end.id)
		}
		*end.to = v
	}
	return exposure, outcome, nil
}

func (p *planner) indices(ids []string) []int {
	var out []int
	for _, id := range ids {
		if v, ok := p.variables[id]; ok { // the unmeasured members have no law here
			out = append(out, v)
		}
	}
	return out
}

// A simulation evaluates one plan under several arms for many draws.
type simulation struct {
	*planner
	plan      *plan
	scale     *scale
	arms      []arm
	draws     [][]float64
	opt       Options
	bootstrap bool
	summary   func(sides [][]float64) float64 // of the arms' parts

	rows    *rowset
	picked  []int // draws used
	seeds   []uint64
	perDraw int       // rounds
	sums    []float64 // draw, arm, part: summed over rounds
	rounds  []float64 // draw, round: the summary of that round alone
	values  []float64
	noise   float64 // simulation error of a value
}

// run fills values. If something is simulated, a pilot over some of the draws
// tells how many rounds of replicates keep the simulation error small beside
// the posterior sd.
func (s *simulation) run(ctx context.Context, src rand.Source) error {
	most := s.thin()
	if s.rows.n == 0 || len(s.picked) == 0 {
		return fmt.Errorf("there are no rows or no draws to average over")
	}
	s.seeds = make([]uint64, len(s.picked))
	for i := range s.seeds {
		s.seeds[i] = src.Uint64()
	}
	rounds := 1
	if s.plan.random > 0 {
		noise, spread, size, err := s.pilot(ctx)
		if err != nil {
			return err
		}
		if ratio := noise / (tolerance * spread); ratio > 1 && noise > rounding*size {
			rounds = int(math.Min(float64(most), math.Ceil(ratio*ratio)))
		}
		s.noise = noise / math.Sqrt(float64(rounds))
	}
	return s.all(ctx, rounds)
}

// pilot runs two rounds of a few draws and gives the simulation error of one
// round, the spread over draws without it, and the size of the averages.
func (s *simulation) pilot(ctx context.Context) (noise, spread, size float64, err error) {
	p := *s
	p.picked, p.seeds, p.opt.Progress = nil, nil, nil
	n := min(pilotDraws, len(s.picked))
	for i := range n {
		at := i * len(s.picked) / n
		p.picked = append(p.picked, s.picked[at])
		p.seeds = append(p.seeds, s.seeds[at])
	}
	if err := p.all(ctx, 2); err != nil {
		return 0, 0, 0, err
	}
	within, between, mean := 0.0, 0.0, 0.0
	for i, v := range p.values {
		d := p.rounds[2*i] - p.rounds[2*i+1]
		within += d * d / 2 / float64(n)
		mean += v / float64(n)
	}
	for _, v := range p.values {
		between += (v - mean) * (v - mean) / math.Max(1, float64(n-1))
	}
	for _, x := range p.sums {
		size = math.Max(size, math.Abs(x))
	}
	return math.Sqrt(within), math.Sqrt(math.Max(0, between-within/2)), size, nil
}

// thin chooses draws and rows so that the work fits the budget, evenly and
// without chance: draws down to fewestDraws first, then rows. It gives the
// number of rounds that can be afforded when one does not suffice.
func (s *simulation) thin() (most int) {
	budget := s.opt.Budget
	if budget <= 0 {
		budget = defaultBudget
	}
	perRow := float64(len(s.arms))
	if s.plan.random > 0 {
		work := 1.0
		for _, st := range s.plan.steps {
			work++
			if st.law != nil {
				work += quantileWork[st.law.Family.Name]
			}
		}
		perRow *= 2 * work // mirrored
	}
	rows := s.m.Rows.Used
	afford := int(budget / (perRow * float64(max(rows, 1))))
	stride := 1
	if afford < len(s.draws) {
		stride = (len(s.draws) + max(afford, fewestDraws) - 1) / max(afford, fewestDraws)
	}
	for i := 0; i < len(s.draws); i += stride {
		s.picked = append(s.picked, i)
	}
	if cost := perRow * float64(rows) * float64(len(s.picked)); cost > budget {
		rows = min(rows, max(fewestRows, int(float64(rows)*budget/cost)))
	}
	s.rows = rowsOf(s.m, rows)
	return max(1, int(moreWork*budget/(perRow*float64(s.rows.n)*float64(len(s.picked)))))
}

// all evaluates that many rounds of every draw, on all cores, and sets values.
// What a draw gives depends on its seed and rounds alone.
func (s *simulation) all(ctx context.Context, rounds int) error {
	s.perDraw = rounds
	s.sums = make([]float64, len(s.picked)*len(s.arms)*s.scale.parts())
	s.rounds = make([]float64, len(s.picked)*rounds)
	s.values = make([]float64, len(s.picked))
	clock := progress{tell: s.opt.Progress, of: len(s.picked)}
	workers := min(runtime.GOMAXPROCS(0), len(s.picked))
	var wait sync.WaitGroup
	for g := range workers {
		wait.Add(1)
		go func() {
			defer wait.Done()
			b := newBench(s)
			for i := g; i < len(s.picked); i += workers {
				for r := range rounds {
					if ctx.Err() != nil {
						return
					}
					b.round(i, r)
				}
				clock.tick()
			}
		}()
	}
	wait.Wait()
	sides := make([][]float64, len(s.arms))
	for i := range s.values {
		for a := range sides {
			sides[a] = s.mean(i, a)
		}
		s.values[i] = s.summary(sides)
	}
	return ctx.Err()
}

// mean is the average of an arm's parts over the rounds of draw i.
func (s *simulation) mean(i, arm int) []float64 {
	k := s.scale.parts()
	out := make([]float64, k)
	for j := range out {
		out[j] = s.sums[(len(s.arms)*i+arm)*k+j] / float64(s.perDraw)
	}
	return out
}

// change is the difference between two averages or, of several levels, the
// total variation between them.
func change(s *scale, low, high []float64) float64 {
	if s.parts() == 1 {
		return high[0] - low[0]
	}
	total := 0.0
	for k := range low {
		total += math.Abs(high[k]-low[k]) / 2
	}
	return total
}

// A bench is one goroutine's work space.
type bench struct {
	*simulation
	w        *worker
	weights  []float64
	uniforms [][]float64 // per simulated step
	changed  [][]float64 // per step: the column under the intervention
	exposed  []float64
	part     []float64
	sides    [][]float64 // a round's averages, by arm
}

func newBench(s *simulation) *bench {
	b := &bench{simulation: s, w: newWorker(s.rows, s.slots), weights: make([]float64, s.rows.n), exposed: make([]float64, s.rows.n)}
	for _, st := range s.plan.steps {
		b.changed = append(b.changed, make([]float64, s.rows.n))
		n := s.rows.n
		if st.law != nil && st.law.Plate >= 0 {
			n = len(s.m.Plates[st.law.Plate].Levels)
		}
		b.uniforms = append(b.uniforms, make([]float64, n))
	}
	k := s.scale.parts()
	b.part = make([]float64, k)
	for range s.arms {
		b.sides = append(b.sides, make([]float64, k))
	}
	return b
}

// round adds one replicate of draw i: all arms, with the same uniforms and
// with their mirror images (antithetic variates), which cancel what is linear
// in the noise of mediators.
func (b *bench) round(i, round int) {
	b.w.draw = b.draws[b.picked[i]]
	b.weigh(b.seeds[i])
	mirrors := 1
	if b.plan.random > 0 {
		mirrors = 2
		rng := rand.New(rand.NewPCG(b.seeds[i], uint64(round)+1))
		for _, u := range b.uniforms {
			for j := range u {
				u[j] = open(rng)
			}
		}
	}
	for a, arm := range b.arms {
		clear(b.sides[a])
		arm.apply(b.exposed, b.rows.columns[b.plan.exposure])
		for mirror := range mirrors {
			b.expect(mirror == 1)
			for k, x := range b.part {
				b.sides[a][k] += x / float64(mirrors)
			}
		}
	}
	k := len(b.part)
	for a := range b.sides {
		for j, x := range b.sides[a] {
			b.sums[(len(b.arms)*i+a)*k+j] += x
		}
	}
	b.rounds[i*b.perDraw+round] = b.summary(b.sides)
}

// open is a uniform number strictly between 0 and 1.
func open(rng *rand.Rand) float64 { return (float64(rng.Uint64()>>11) + 0.5) / (1 << 53) }

// expect fills part with the outcome's average under the exposed column.
func (b *bench) expect(mirrored bool) {
	w, p := b.w, b.plan
	copy(w.columns, b.rows.columns)
	w.columns[p.exposure] = b.exposed
	for i, st := range p.steps {
		if st.law == nil {
			values := w.eval(st.computed)
			for j := range b.changed[i] {
				b.changed[i][j] = at(values, j)
			}
		} else {
			b.look(st.variable)
			w.simulate(b.changed[i], st.law, b.uniforms[i], mirrored)
		}
		w.columns[st.variable] = b.changed[i]
	}
	if p.outcome == nil || p.computed != nil {
		averageOf(b.part, w.eval(p.computed), b.weights)
		return
	}
	b.look(p.outcome.Variable)
	w.expected(b.part, p.outcome, b.scale, b.weights)
}

// look shows a law the exposure that it reads: as set, or as it was observed.
func (b *bench) look(variable int) {
	b.w.columns[b.plan.exposure] = b.exposed
	if b.plan.observed[variable] {
		b.w.columns[b.plan.exposure] = b.rows.columns[b.plan.exposure]
	}
}

// weigh gives every row its weight: alike, or by a Bayesian bootstrap (Rubin
// 1981) of the outermost groups; crossed ones multiply (Owen 2007).
func (b *bench) weigh(seed uint64) {
	n := float64(b.rows.n)
	for i := range b.weights {
		b.weights[i] = 1 / n
	}
	if !b.bootstrap {
		return
	}
	rng := rand.New(rand.NewPCG(seed, 0))
	outer := outermost(b.m)
	if len(outer) == 0 {
		for i := range b.weights {
			b.weights[i] = rng.ExpFloat64()
		}
	}
	for _, p := range outer {
		group := make([]float64, len(b.m.Plates[p].Levels))
		for g := range group {
			group[g] = rng.ExpFloat64()
		}
		for i, g := range b.rows.of[p] {
			b.weights[i] *= group[g]
		}
	}
	total := 0.0
	for _, x := range b.weights {
		total += x
	}
	for i := range b.weights {
		b.weights[i] /= total
	}
}

// outermost lists the plates that lie within no other plate.
func outermost(m *model.Model) []int {
	var out []int
	for i, p := range m.Plates {
		inside := false
		for j, q := range m.Plates {
			if i != j && within(p, q) && (j < i || !within(q, p)) {
				inside = true
			}
		}
		if !inside {
			out = append(out, i)
		}
	}
	return out
}

// within reports whether each level of p has all its rows in one level of q.
func within(p, q *model.Plate) bool {
	in := slices.Repeat([]int32{-1}, len(p.Levels))
	for row, level := range p.Of {
		if in[level] >= 0 && in[level] != q.Of[row] {
			return false
		}
		in[level] = q.Of[row]
	}
	return true
}

// progress counts finished work and tells it, one call at a time.
type progress struct {
	mu       sync.Mutex
	tell     func(done, of int)
	done, of int
}

func (p *progress) tick() {
	if p.tell == nil {
		return
	}
	p.mu.Lock()
	defer p.mu.Unlock()
	p.done++
	p.tell(p.done, p.of)
}
