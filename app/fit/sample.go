package fit

import (
	"context"
	"errors"
	"fmt"
	"math"
	"strings"
	"sync"
	"time"

	"arrowroot/compile/density"
	"arrowroot/compile/model"
	"arrowroot/infer"
	"arrowroot/infer/summary"
)

// The stopping rule of SEMANTICS E.
const (
	roundSteps = 250
	wantedESS  = 1000
	maxSteps   = 20000
)

// A Fitted model is a model with its draws.
type Fitted struct {
	Model      *model.Model
	Density    *density.Density
	Chains     [][][]float64 // chain, step, natural value in the order of Density.Quantities
	Quantities []Quantity
	Sampling   summary.Sampling // over all blocks
	Trust      summary.Trust
	Cut        bool
	Gradients  int
	Warmup     int // of Gradients
}

// Pooled is every draw, chain after chain.
func (f *Fitted) Pooled() [][]float64 {
	var all [][]float64
	for _, c := range f.Chains {
		all = append(all, c...)
	}
	return all
}

// Steps is the number of draws of each chain.
func (f *Fitted) Steps() int { return len(f.Chains[0]) }

// A blockRun is one independent block on its way.
type blockRun struct {
	block   *density.Block
	run     *infer.Run
	natural [][]float64 // chain → steps × quantities, row after row
	have    int         // steps in natural
	pending []int       // places in block.Quantities not yet precise enough
	draws   *infer.Draws
}

// sampleModel lowers a model and samples its blocks, all to the same length
// (SEMANTICS A9), in rounds until every quantity is precise or the length is
// what was asked for.
func sampleModel(ctx context.Context, m *model.Model, req *Request, purpose string, watch func(infer.Progress)) (*Fitted, error) {
	d, err := density.Lower(m)
	if err != nil {
		return nil, err
	}
	var runs []*blockRun
	for _, b := range d.Blocks {
		r := infer.NewRun(infer.Problem{
			Name:   purpose + "\x00" + strings.Join(b.Names, " "),
			Target: func() infer.Target { return b.Evaluator() },
			Blame:  b.Blame,
		}, settingsFor(d, b, req))
		br := &blockRun{block: b, run: r, natural: make([][]float64, r.Settings().Chains)}
		for i, q := range b.Quantities {
			if !d.Quantities[q].Constant {
				br.pending = append(br.pending, i)
			}
		}
		runs = append(runs, br)
	}
	err = advance(ctx, d, runs, req, watch)
	if start := new(infer.StartError); errors.As(err, &start) {
		return nil, fmt.Errorf("%w. Change that prior, law or formula, or the plausible ranges that it was made from", err)
	}
	cut := errors.Is(err, context.Canceled) || errors.Is(err, context.DeadlineExceeded)
	if err != nil && !cut {
		return nil, err
	}
	f := gather(m, d, runs, req)
	if cut {
		f.Cut = true
		if f.Steps() < 4 {
			return nil, ErrNoDraws
		}
	}
	f.summarise(req.Level(), runs)
	return f, nil
}

func advance(ctx context.Context, d *density.Density, runs []*blockRun, req *Request, watch func(infer.Progress)) error {
	w := newWatcher(runs, watch)
	w.expect(max(req.Draws, roundSteps))
	for steps := 0; ; {
		// A fixed length is sampled in rounds too, so that a cancel finds
		// draws of every chain and block.
		round := roundSteps
		if req.Draws > 0 {
			round = min(round, req.Draws-steps)
		}
		w.expect(steps + round)
		for _, r := range runs {
			if err := w.during(func() error { return r.run.Advance(ctx, round) }); err != nil {
				return err
			}
		}
		steps += round
		switch {
		case steps == req.Draws:
			return nil
		case req.Draws > 0:
			continue
		}
		worst, name := math.Inf(1), ""
		for _, r := range runs {
			r.collect()
			ess, at := r.check()
			if ess < worst {
				worst, name = ess, d.Quantities[r.block.Quantities[at]].Symbol
			}
		}
		if math.IsInf(worst, 1) || steps+roundSteps > maxSteps {
			return nil
		}
		w.round(steps, worst, name)
	}
}

// carefulAcceptance is the step-size target for group effects, whose spread can
// come near zero: at the default of 0.8 two of three seeds gave a divergence on
// six batches of five (testdata/studies/dyestuff_oneway); at 0.9 none did, for a
// fifth more gradients.
const carefulAcceptance = 0.9

func settingsFor(d *density.Density, b *density.Block, req *Request) infer.Settings {
	s := infer.Settings{Seed: req.Seed, Chains: req.Chains}
	for _, q := range b.Quantities {
		if d.Model.Parameters[d.Quantities[q].Parameter].Shape == model.ByPlate {
			s.Acceptance = carefulAcceptance
		}
	}
	return s
}

// collect turns the block's new draws into natural values.
func (r *blockRun) collect() {
	r.draws = r.run.Draws()
	n := len(r.block.Quantities)
	for c, trace := range r.draws.Chains {
		have := len(r.natural[c]) / max(n, 1)
		for i := have; i < r.draws.Steps; i++ {
			at := len(r.natural[c])
			r.natural[c] = append(r.natural[c], make([]float64, n)...)
			r.block.Natural(r.natural[c][at:], trace.At(i, r.draws.Dim))
		}
	}
	r.have = r.draws.Steps
}

// check drops from pending what is precise, and gives the smallest effective
// sample size among the rest; +Inf if none is left. It stops at the first
// eight that are not: their number does not matter.
func (r *blockRun) check() (worst float64, at int) {
	worst = math.Inf(1)
	kept := r.pending[:0:0]
	for i, q := range r.pending {
		if len(kept) >= 8 {
			kept = append(kept, r.pending[i:]...)
			break
		}
		ess := summary.LeastESS(r.chains(q))
		if ess >= wantedESS {
			continue
		}
		kept = append(kept, q)
		if !(ess >= worst) {
			worst, at = ess, q
		}
	}
	r.pending = kept
	return worst, at
}

func (r *blockRun) chains(q int) [][]float64 {
	n := len(r.block.Quantities)
	out := make([][]float64, len(r.natural))
	for c, flat := range r.natural {
		out[c] = make([]float64, r.have)
		for i := range out[c] {
			out[c][i] = flat[i*n+q]
		}
	}
	return out
}

// gather pairs the blocks' draws by chain and step, cut to the shortest.
func gather(m *model.Model, d *density.Density, runs []*blockRun, req *Request) *Fitted {
	f := &Fitted{Model: m, Density: d}
	chains := req.Chains
	if chains <= 0 {
		chains = infer.DefaultChains
	}
	steps := max(req.Draws, roundSteps)
	for i, r := range runs {
		r.collect()
		if i == 0 {
			steps = r.have
		}
		steps = min(steps, r.have)
		f.Gradients += r.draws.Total
		f.Warmup += r.draws.Warmup
	}
	width := len(d.Quantities)
	for c := range chains {
		flat := make([]float64, steps*width)
		rows := make([][]float64, steps)
		for i := range rows {
			rows[i] = flat[i*width : (i+1)*width]
			for _, r := range runs {
				n := len(r.block.Quantities)
				for k, q := range r.block.Quantities {
					rows[i][q] = r.natural[c][i*n+k]
				}
			}
		}
		f.Chains = append(f.Chains, rows)
	}
	return f
}

// A watcher reports progress while runs advance. What it sees never reaches a
// decision of the sampler.
type watcher struct {
	runs  []*blockRun
	tell  func(infer.Progress)
	began time.Time
	total int
	state infer.Progress
}

const tellEvery = 100 * time.Millisecond

func newWatcher(runs []*blockRun, tell func(infer.Progress)) *watcher {
	return &watcher{runs: runs, tell: tell, began: time.Now(), state: infer.Progress{TargetESS: wantedESS}}
}

func (w *watcher) expect(steps int) {
	w.total = max(w.total, w.iterations(steps))
}

func (w *watcher) iterations(steps int) int {
	n := 0
	for _, r := range w.runs {
		s := r.run.Settings()
		n += s.Chains * (s.Warmup + steps)
	}
	return n
}

// round notes the end of a round and guesses how many more are needed.
func (w *watcher) round(steps int, worst float64, name string) {
	w.state.Round++
	w.state.Worst, w.state.WorstESS = name, worst
	if worst > 0 {
		need := min(maxSteps, int(math.Ceil(float64(steps)*wantedESS/worst/roundSteps))*roundSteps)
		w.total = w.iterations(max(need, steps+roundSteps))
	}
}

func (w *watcher) during(work func() error) error {
	if w.tell == nil {
		return work()
	}
	done := make(chan struct{})
	var wait sync.WaitGroup
	wait.Go(func() {
		tick := time.NewTicker(tellEvery)
		defer tick.Stop()
		for {
			select {
			case <-done:
				return
			case <-tick.C:
				w.report()
			}
		}
	})
	err := work()
	close(done)
	wait.Wait()
	w.report()
	return err
}

func (w *watcher) report() {
	p := w.state
	warm := 0
	for _, r := range w.runs {
		p.Done += r.run.Done()
		p.Divergent += r.run.Divergent()
		s := r.run.Settings()
		warm += s.Chains * s.Warmup
	}
	p.Total = max(w.total, p.Done)
	p.Warming = p.Done < warm && p.Round == 0
	p.Elapsed = time.Since(w.began)
	if p.Done > 0 && p.Elapsed > time.Second/2 {
		p.Left = time.Duration(float64(p.Elapsed) * float64(p.Total-p.Done) / float64(p.Done))
	}
	w.tell(p)
}
