package infer

import "math"

// A spread keeps running means and variances of draws and of gradients
// (Welford 1962).
type spread struct {
	n           int
	meanQ, sumQ []float64
	meanG, sumG []float64
}

func newSpread(dim int) *spread {
	return &spread{
		meanQ: make([]float64, dim), sumQ: make([]float64, dim),
		meanG: make([]float64, dim), sumG: make([]float64, dim),
	}
}

func (s *spread) reset() {
	s.n = 0
	clear(s.meanQ)
	clear(s.sumQ)
	clear(s.meanG)
	clear(s.sumG)
}

func (s *spread) add(q, g []float64) {
	s.n++
	w := 1 / float64(s.n)
	for i := range q {
		d := q[i] - s.meanQ[i]
		s.meanQ[i] += d * w
		s.sumQ[i] += d * (q[i] - s.meanQ[i])
		d = g[i] - s.meanG[i]
		s.meanG[i] += d * w
		s.sumG[i] += d * (g[i] - s.meanG[i])
	}
}

// A metric adapts the diagonal inverse mass matrix: the square root of the
// variance of draws over the variance of gradients, which for a normal target
// is its variance and needs far fewer draws than the variance alone. Two
// windows overlap, so that the estimate never starts from nothing: the younger
// one takes over when it is full.
type metric struct {
	inverse []float64 // inverse mass, one for each coordinate
	root    []float64 // square root of the mass, for drawing momenta
	older   *spread
	younger *spread
	minimal int // draws that an estimate needs
}

const (
	minInverse = 1e-20
	maxInverse = 1e20
)

func newMetric(dim int) *metric {
	m := &metric{
		inverse: make([]float64, dim), root: make([]float64, dim),
		older: newSpread(dim), younger: newSpread(dim),
		minimal: 4,
	}
	for i := range m.inverse {
		m.set(i, 1)
	}
	return m
}

func (m *metric) set(i int, inverse float64) {
	if math.IsNaN(inverse) {
		return
	}
	inverse = math.Min(math.Max(inverse, minInverse), maxInverse)
	m.inverse[i] = inverse
	m.root[i] = 1 / math.Sqrt(inverse)
}

// start takes the gradient where the chain begins as the first guess.
func (m *metric) start(g []float64) {
	for i, x := range g {
		if x != 0 {
			m.set(i, 1/math.Abs(x))
		}
	}
}

// learn takes one more draw and renews the metric.
func (m *metric) learn(q, g []float64) {
	m.older.add(q, g)
	m.younger.add(q, g)
	if m.older.n < m.minimal {
		return
	}
	for i := range m.inverse {
		vq, vg := m.older.sumQ[i], m.older.sumG[i]
		if vq > 0 && vg > 0 {
			m.set(i, math.Sqrt(vq/vg))
		}
	}
}

// turn lets the younger window take over.
func (m *metric) turn() {
	m.older, m.younger = m.younger, m.older
	m.younger.reset()
}
