package infer

import "math"

// maxEnergyError is where a trajectory counts as divergent.
const maxEnergyError = 1000

// A point of phase space with the gradient there.
type point struct {
	q, p, g []float64
	value   float64 // log density
}

func newPoint(dim int) *point {
	block := make([]float64, 3*dim)
	return &point{q: block[:dim], p: block[dim : 2*dim], g: block[2*dim:]}
}

func (a *point) copyFrom(b *point) {
	copy(a.q, b.q)
	copy(a.p, b.p)
	copy(a.g, b.g)
	a.value = b.value
}

// A span is a stretch of a trajectory: momenta at both ends, their sum over
// all its points, one point drawn from it by weight, and its total weight.
type span struct {
	first, last []float64
	sum         []float64
	drawn       []float64
	gradient    []float64 // at drawn
	value       float64   // log density at drawn
	logWeight   float64
}

func newSpan(dim int) *span {
	block := make([]float64, 5*dim)
	return &span{
		first: block[:dim], last: block[dim : 2*dim], sum: block[2*dim : 3*dim],
		drawn: block[3*dim : 4*dim], gradient: block[4*dim:],
	}
}

// A walker makes No-U-Turn iterations for one chain. It allocates nothing
// after newWalker.
type walker struct {
	target Target
	random *random
	metric *metric
	step   float64
	depth  int // limit

	moving    *point    // the end that is being extended
	ends      [2]*point // backward, forward
	whole     *span
	subtrees  []*span // one for each depth, plus the growing one
	energy    float64 // at the start of the iteration
	leapfrogs int
	accept    float64 // sum of acceptance statistics
	divergent bool
	direction float64
	stop      func() bool // asked once for each leapfrog step
	stopped   bool
	gradients int // over the walker's life
}

func newWalker(t Target, r *random, m *metric, maxDepth int, stop func() bool) *walker {
	dim := t.Dim()
	w := &walker{target: t, random: r, metric: m, depth: maxDepth, step: 1, stop: stop,
		moving: newPoint(dim), ends: [2]*point{newPoint(dim), newPoint(dim)}, whole: newSpan(dim)}
	for range maxDepth + 1 {
		w.subtrees = append(w.subtrees, newSpan(dim))
	}
	return w
}

// An iteration is what one step of the chain did.
type iteration struct {
	depth     int
	energy    float64
	accept    float64 // mean acceptance statistic of its trajectory
	divergent bool
}

// iterate moves at.q to the next draw, with its gradient and log density. It
// reports false, with at unchanged, if stop asked it to give up.
func (w *walker) iterate(at *point) (iteration, bool) {
	w.refresh(at)
	w.energy = w.hamiltonian(at)
	w.ends[0].copyFrom(at)
	w.ends[1].copyFrom(at)
	copy(w.whole.first, at.p)
	copy(w.whole.last, at.p)
	copy(w.whole.sum, at.p)
	copy(w.whole.drawn, at.q)
	copy(w.whole.gradient, at.g)
	w.whole.value = at.value
	w.whole.logWeight = 0
	w.leapfrogs, w.accept, w.divergent, w.stopped = 0, 0, false, false

	depth := 0
	for depth < w.depth {
		forward := 0
		if w.random.uniform() < 0.5 {
			forward = 1
		}
		w.direction = float64(2*forward - 1)
		w.moving, w.ends[forward] = w.ends[forward], w.moving
		grown := w.subtrees[depth]
		ok := w.build(depth, grown)
		w.moving, w.ends[forward] = w.ends[forward], w.moving
		if w.stopped {
			return iteration{}, false
		}
		if !ok {
			break
		}
		depth++
		if forward == 0 { // keep first the earliest, last the latest
			w.whole.first, w.whole.last = w.whole.last, w.whole.first
		}
		// Biased progressive sampling (Betancourt 2017, appendix A.3.2).
		if grown.logWeight >= w.whole.logWeight || w.random.uniform() < math.Exp(grown.logWeight-w.whole.logWeight) {
			w.whole.takeDraw(grown)
		}
		turned := w.joinTurns(w.whole, grown)
		w.whole.join(grown)
		if forward == 0 {
			w.whole.first, w.whole.last = w.whole.last, w.whole.first
		}
		if turned {
			break
		}
	}
	copy(at.q, w.whole.drawn)
	copy(at.g, w.whole.gradient)
	at.value = w.whole.value
	it := iteration{depth: depth, energy: w.energy, divergent: w.divergent}
	if w.leapfrogs > 0 {
		it.accept = w.accept / float64(w.leapfrogs)
	}
	return it, true
}

// build grows a subtree of 2^depth points from the moving end into out. It
// reports false if the subtree turned back on itself, diverged or was stopped;
// out is then worthless.
func (w *walker) build(depth int, out *span) bool {
	if depth == 0 {
		return w.leaf(out)
	}
	if !w.build(depth-1, out) {
		return false
	}
	// The growing span of this depth is out, never subtrees[depth-1].
	right := w.subtrees[depth-1]
	if !w.build(depth-1, right) {
		return false
	}
	total := logAdd(out.logWeight, right.logWeight)
	if w.random.uniform() < math.Exp(right.logWeight-total) {
		out.takeDraw(right)
	}
	turned := w.joinTurns(out, right)
	out.join(right)
	return !turned
}

func (w *walker) leaf(out *span) bool {
	if w.stop != nil && w.stop() {
		w.stopped = true
		return false
	}
	w.leapfrog(w.moving)
	w.leapfrogs++
	change := w.hamiltonian(w.moving) - w.energy
	if math.IsNaN(change) || change > maxEnergyError {
		w.divergent = true
		return false
	}
	w.accept += math.Min(1, math.Exp(-change))
	copy(out.first, w.moving.p)
	copy(out.last, w.moving.p)
	copy(out.sum, w.moving.p)
	copy(out.drawn, w.moving.q)
	copy(out.gradient, w.moving.g)
	out.value = w.moving.value
	out.logWeight = -change
	return true
}

// takeDraw makes b's drawn point a's. b is scratch afterwards.
func (a *span) takeDraw(b *span) {
	a.drawn, b.drawn = b.drawn, a.drawn
	a.gradient, b.gradient = b.gradient, a.gradient
	a.value = b.value
}

// join makes a the union of a and the b that follows it. b is scratch afterwards.
func (a *span) join(b *span) {
	for i, x := range b.sum {
		a.sum[i] += x
	}
	a.last, b.last = b.last, a.last
	a.logWeight = logAdd(a.logWeight, b.logWeight)
}

// joinTurns reports whether the union of a and the b that follows it makes a
// U-turn: as a whole, or between either part and the first point of the other
// (the momentum sum's angle with the velocity at both ends, Betancourt 2017,
// appendix A.4.2). One pass over the coordinates.
func (w *walker) joinTurns(a, b *span) bool {
	var whole1, whole2, left1, left2, right1, right2 float64
	inverse := w.metric.inverse
	for i, inv := range inverse {
		sa, sb := a.sum[i], b.sum[i]
		af, al, bf, bl := a.first[i]*inv, a.last[i]*inv, b.first[i]*inv, b.last[i]*inv
		s := sa + sb
		whole1 += s * af
		whole2 += s * bl
		s = sa + b.first[i]
		left1 += s * af
		left2 += s * bf
		s = sb + a.last[i]
		right1 += s * al
		right2 += s * bl
	}
	return !(whole1 > 0 && whole2 > 0 && left1 > 0 && left2 > 0 && right1 > 0 && right2 > 0)
}

func (w *walker) leapfrog(x *point) {
	step := w.direction * w.step
	half := 0.5 * step
	inverse := w.metric.inverse
	for i := range x.p {
		x.p[i] += half * x.g[i]
		x.q[i] += step * inverse[i] * x.p[i]
	}
	x.value = w.target.LogDensity(x.g, x.q)
	w.gradients++
	for i := range x.p {
		x.p[i] += half * x.g[i]
	}
}

// hamiltonian is minus the log density plus the kinetic energy.
func (w *walker) hamiltonian(x *point) float64 {
	kinetic := 0.0
	for i, p := range x.p {
		kinetic += p * p * w.metric.inverse[i]
	}
	return 0.5*kinetic - x.value
}

func (w *walker) refresh(x *point) {
	for i := range x.p {
		x.p[i] = w.random.normal() * w.metric.root[i]
	}
}

// firstStep looks for a step whose first leapfrog is accepted about half of
// the time (Hoffman & Gelman 2014, algorithm 4).
func (w *walker) firstStep(at *point) float64 {
	w.step, w.direction = 0.1, 1
	grow := 0.0
	for range 60 {
		w.refresh(at)
		before := w.hamiltonian(at)
		w.moving.copyFrom(at)
		w.leapfrog(w.moving)
		change := before - w.hamiltonian(w.moving)
		if math.IsNaN(change) {
			change = math.Inf(-1)
		}
		want := -1.0
		if change > math.Log(0.5) {
			want = 1
		}
		if grow == 0 {
			grow = want
		}
		if want != grow {
			break
		}
		w.step *= math.Pow(2, grow)
	}
	return w.step
}

func logAdd(a, b float64) float64 {
	if a < b {
		a, b = b, a
	}
	if math.IsInf(a, -1) {
		return a
	}
	return a + math.Log1p(math.Exp(b-a))
}
