package effect

import (
	"context"
	"fmt"
	"math"
	"math/rand/v2"
	"runtime"
	"sync"

	"arrowroot/compile/model"
)

// Limits of simulation. A unit of work is one evaluation of a law at one row,
// 20 to 50 ns.
const (
	defaultBudget = 5e7
	fewestDraws   = 1000 // before rows are thinned: enough for an interval with an effective size of 400
	fewestRows    = 2000
	pilotDraws    = 64   // draws that show how large the simulation error is
	unsure        = 1.2  // on a pilot's error, itself known to a tenth: what it may grow by
	tolerance     = 0.05 // simulation error allowed, in posterior sds (SEMANTICS B1)
	sideTolerance = 0.15 // likewise of each arm alone: its sd grows by 1 %
	rounding      = 1e-9 // of the values compared: not worth a replicate
	enoughRows    = 1000 // rows × rounds of a simulation without a summary
	moreWork      = 3    // budgets that further replicates may take
)

// quantileWork is what simulating one value costs, in units of work, where it
// is far from one (measured).
var quantileWork = map[string]float64{
	"Student t": 160, "gamma": 80, "beta": 80, "negative binomial": 50, "half-t": 160, "Poisson": 12, "binomial": 20,
	"skew normal": 1500, "von Mises": 1500, "beta-binomial": 400, "inverse gamma": 80, "geometric": 12, "ordered probit": 12,
}

// A simulation evaluates one plan under several arms for many draws.
type simulation struct {
	*planner
	plan      *plan
	arms      []arm
	draws     [][]float64
	opt       Options
	bootstrap bool
	newGroups bool // levels of plates are fresh ones (SEMANTICS B5)
	every     bool // average over every used row, whatever the question asks about
	byGroups  bool // each level of the outermost plate counts the same
	// summary is the number whose simulation error is kept small, of the arms'
	// parts. Nil: there is none, and rounds are chosen by the number of rows.
	summary func(sides [][]float64) float64

	outer   []int // outermost plates, for weights
	fresh   []freshVector
	rows    *rowset
	picked  []int // draws used
	seeds   []uint64
	perDraw int       // rounds
	mirrors int       // 2: each round has the mirror images of its uniforms as well
	sums    []float64 // draw, arm, part: summed over rounds
	rounds  []float64 // draw, round: the summary of that round alone
	plain   []float64 // draw, round: the summary and each arm without mirror images; nil outside the pilot
	values  []float64 // per draw: the summary
	noise   float64   // its simulation error
}

// run fills values. If something is simulated, a pilot over some of the draws
// tells how many rounds of replicates keep the simulation error small beside
// the posterior sd.
func (s *simulation) run(ctx context.Context, src rand.Source) error {
	if s.newGroups {
		var err error
		if s.fresh, err = s.freshOf(s.plan); err != nil {
			return err
		}
	}
	most := s.thin()
	if s.rows.n == 0 || len(s.picked) == 0 {
		return fmt.Errorf("there are no rows or no draws to average over")
	}
	s.outer = s.m.Outermost()
	if s.byGroups && len(s.outer) != 1 {
		return fmt.Errorf("groups can count the same only where one plate holds all others")
	}
	s.seeds = make([]uint64, len(s.picked))
	for i := range s.seeds {
		s.seeds[i] = src.Uint64()
	}
	rounds := 1
	s.mirrors = 2
	switch {
	case !s.chance():
		s.mirrors = 1
	case s.summary == nil:
		rounds = min(most, max(1, enoughRows/s.rows.n))
	default:
		noise, err := s.pilot(ctx)
		if err != nil {
			return err
		}
		rounds = min(most, noise.rounds())
		// Mirror images cost as much again and are left out where they gain
		// nothing: where a single set of uniforms is precise enough.
		if noise.plainEnough {
			s.mirrors, rounds, noise.error = 1, 1, noise.plain
		}
		s.noise = noise.error / math.Sqrt(float64(rounds))
	}
	return s.all(ctx, rounds)
}

// A noisiness is what a pilot finds of one round.
type noisiness struct {
	error       float64 // simulation error of the summary
	spread      float64 // of the summary over draws, without simulation error
	size        float64 // of the averages
	plain       float64 // error without mirror images
	plainEnough bool    // and it is small enough, for the summary and for each arm
}

// rounds is how many keep the simulation error small.
func (n *noisiness) rounds() int {
	ratio := n.error / (tolerance * n.spread)
	if !(ratio > 1) || n.error <= rounding*n.size {
		return 1
	}
	return int(math.Min(math.MaxInt32, math.Ceil(ratio*ratio)))
}

// chance reports whether rounds differ: something is simulated, or groups are
// drawn.
func (s *simulation) chance() bool { return s.plan.random > 0 || len(s.fresh) > 0 }

// asked is the subset that is averaged over; nil = every used row.
func (s *simulation) asked() *model.Subset {
	if s.every {
		return nil
	}
	return s.m.Asked
}

// pilot runs two rounds of a few draws.
func (s *simulation) pilot(ctx context.Context) (*noisiness, error) {
	p := *s
	p.picked, p.seeds, p.opt.Progress = nil, nil, nil
	n := min(pilotDraws, len(s.picked))
	for i := range n {
		at := i * len(s.picked) / n
		p.picked = append(p.picked, s.picked[at])
		p.seeds = append(p.seeds, s.seeds[at])
	}
	width := 1 + len(s.arms)
	p.plain = make([]float64, 2*n*width)
	if err := p.all(ctx, 2); err != nil {
		return nil, err
	}
	out := &noisiness{plainEnough: true}
	for _, x := range p.sums {
		out.size = math.Max(out.size, math.Abs(x))
	}
	out.error, out.spread = apart(n, func(i, round int) float64 { return p.rounds[2*i+round] })
	for k := range width {
		noise, spread := apart(n, func(i, round int) float64 { return p.plain[(2*i+round)*width+k] })
		allowed := sideTolerance
		if k == 0 {
			out.plain, allowed = noise, tolerance
		}
		if unsure*noise > math.Max(allowed*spread, rounding*out.size) {
			out.plainEnough = false
		}
	}
	return out, nil
}

// apart tells the error of one round from the spread over draws, from two
// rounds of each of n draws.
func apart(n int, of func(draw, round int) float64) (noise, spread float64) {
	within, between, mean := 0.0, 0.0, 0.0
	middle := func(i int) float64 { return (of(i, 0) + of(i, 1)) / 2 }
	for i := range n {
		d := of(i, 0) - of(i, 1)
		within += d * d / 2 / float64(n)
		mean += middle(i) / float64(n)
	}
	for i := range n {
		between += (middle(i) - mean) * (middle(i) - mean) / math.Max(1, float64(n-1))
	}
	return math.Sqrt(within), math.Sqrt(math.Max(0, between-within/2))
}

// thin chooses draws and rows so that the work fits the budget, evenly and
// without chance: draws down to fewestDraws first, then rows. It gives the
// number of rounds that can be afforded when one does not suffice.
func (s *simulation) thin() (most int) {
	budget := s.opt.Budget
	if budget <= 0 {
		budget = defaultBudget
	}
	work := float64(len(s.plan.targets))
	perRow := float64(len(s.arms)) * work
	if s.chance() {
		for _, st := range s.plan.steps {
			work++
			if st.law != nil {
				work += quantileWork[st.law.Family.Name]
			}
		}
		perRow = float64(len(s.arms)*s.replicates()) * 2 * work // mirrored
	}
	rows := s.m.Rows.Used
	if s.asked() != nil {
		rows = len(s.asked().Rows)
	}
	afford := int(budget / (perRow * float64(max(rows, 1))))
	stride := max(1, len(s.draws)/max(afford, fewestDraws))
	for i := 0; i < len(s.draws); i += stride {
		s.picked = append(s.picked, i)
	}
	if cost := perRow * float64(rows) * float64(len(s.picked)); cost > budget {
		rows = min(rows, max(fewestRows, int(float64(rows)*budget/cost)))
	}
	s.rows = rowsOf(s.m, s.asked(), rows)
	return max(1, int(moreWork*budget/(perRow*float64(s.rows.n)*float64(len(s.picked)))))
}

// all evaluates that many rounds of every draw, on all cores, and sets values.
// What a draw gives depends on its seed and rounds alone.
func (s *simulation) all(ctx context.Context, rounds int) error {
	s.perDraw = rounds
	s.sums = make([]float64, len(s.picked)*len(s.arms)*s.plan.parts)
	if s.summary != nil {
		s.rounds = make([]float64, len(s.picked)*rounds)
	}
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
	if s.summary == nil {
		return ctx.Err()
	}
	s.values = make([]float64, len(s.picked))
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
	k := s.plan.parts
	out := make([]float64, k)
	for j := range out {
		out[j] = s.sums[(len(s.arms)*i+arm)*k+j] / float64(s.perDraw)
	}
	return out
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
