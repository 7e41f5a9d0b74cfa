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

// Limits of simulation.
const (
	defaultBudget = 4e7  // law evaluations
	fewestDraws   = 1000 // before rows are thinned: enough for an interval with an effective size of 400
	fewestRows    = 2000
	firstRounds   = 2    // replicates that show how large the simulation error is
	moreWork      = 4    // budgets that further replicates may take
	tolerance     = 0.05 // simulation error allowed, in posterior sds (SEMANTICS B1)
	quantileCost  = 4    // of simulating a value, in law evaluations
)

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
	rounds  int
	sums    []float64 // draw, arm, part: summed over rounds
	squares []float64 // draw: sums of the rounds' contrasts and of their squares
	values  []float64
	noise   float64 // simulation error of a value
	clock   progress
}

// run fills values. Rounds of replicates are added until the simulation error
// is small beside the posterior sd.
func (s *simulation) run(ctx context.Context, src rand.Source) error {
	most := s.thin()
	if s.rows.n == 0 || len(s.picked) == 0 {
		return fmt.Errorf("there are no rows or no draws to average over")
	}
	s.seeds = make([]uint64, len(s.picked))
	for i := range s.seeds {
		s.seeds[i] = src.Uint64()
	}
	s.sums = make([]float64, len(s.picked)*len(s.arms)*s.scale.parts())
	s.squares = make([]float64, len(s.picked)*2)
	s.values = make([]float64, len(s.picked))
	target := 1
	if s.plan.random > 0 && s.plan.moves {
		target = firstRounds
	}
	s.clock = progress{tell: s.opt.Progress, of: target * len(s.picked)}
	for s.rounds < target {
		if err := s.add(ctx, target-s.rounds); err != nil {
			return err
		}
		s.rounds = target
		spread := s.conclude()
		if target == 1 || target >= most || !(s.noise > tolerance*spread) || spread == 0 {
			return nil
		}
		ratio := s.noise / (tolerance * spread)
		target = min(most, max(target+1, int(math.Ceil(float64(target)*ratio*ratio))))
		s.clock.of = target * len(s.picked)
	}
	return nil
}

// thin chooses draws and rows so that the work fits the budget, evenly and
// without chance: draws down to fewestDraws first, then rows. It gives the
// number of rounds that can be afforded when two do not suffice.
func (s *simulation) thin() (most int) {
	budget := s.opt.Budget
	if budget <= 0 {
		budget = defaultBudget
	}
	perRow := float64(len(s.arms))
	if s.plan.random > 0 {
		perRow *= 2 * firstRounds * float64(1+quantileCost*s.plan.random)
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
	perRound := perRow / firstRounds * float64(s.rows.n) * float64(len(s.picked))
	return max(firstRounds, int(moreWork*budget/perRound))
}

// mean is the average of an arm's parts over the rounds of draw i.
func (s *simulation) mean(i, arm int) []float64 {
	k := s.scale.parts()
	out := make([]float64, k)
	for j := range out {
		out[j] = s.sums[(len(s.arms)*i+arm)*k+j] / float64(s.rounds)
	}
	return out
}

// conclude sets values and error from what was summed, and gives the spread
// of the values over draws without their simulation error.
func (s *simulation) conclude() float64 {
	n, r := float64(len(s.values)), float64(s.rounds)
	within, mean := 0.0, 0.0
	sides := make([][]float64, len(s.arms))
	for i := range s.values {
		for a := range sides {
			sides[a] = s.mean(i, a)
		}
		s.values[i] = s.summary(sides)
		mean += s.values[i] / n
		if s.rounds > 1 {
			sum, square := s.squares[2*i], s.squares[2*i+1]
			within += math.Max(0, square-sum*sum/r) / (r - 1) / n
		}
	}
	s.noise = math.Sqrt(within / r)
	between := 0.0
	for _, v := range s.values {
		between += (v - mean) * (v - mean) / math.Max(1, n-1)
	}
	return math.Sqrt(math.Max(0, between-within/r))
}

// add evaluates more rounds of every draw, on all cores. What a draw gives
// depends on its seed and round alone.
func (s *simulation) add(ctx context.Context, rounds int) error {
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
					b.round(i, s.rounds+r)
					s.clock.tick()
				}
			}
		}()
	}
	wait.Wait()
	return ctx.Err()
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
	c := b.summary(b.sides)
	b.squares[2*i] += c
	b.squares[2*i+1] += c * c
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
		average(b.part, w.eval(p.computed), b.weights)
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
