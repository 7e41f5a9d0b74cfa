package kernel

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"
)

// A sample draws a value and arguments of a kernel from where its density is
// ordinary. smooth says whether it has a derivative in the value, fixed how
// many last arguments have none (trials).
type sample struct {
	kernel *Density
	smooth bool
	fixed  int
	draw   func(r *rand.Rand) (y float64, args []float64)
}

func samples() []sample {
	positive := func(r *rand.Rand) float64 { return math.Exp(0.8 * r.NormFloat64()) }
	eta := func(r *rand.Rand) float64 { return 1.5 * r.NormFloat64() }
	unit := func(r *rand.Rand) float64 { return 0.1 + 0.8*r.Float64() }
	count := func(r *rand.Rand) float64 { return math.Floor(math.Exp(3*r.Float64()) - 1) }
	levels := func(r *rand.Rand) (float64, []float64) {
		k := 2 + r.IntN(4)
		p := make([]float64, k)
		for i := range p {
			p[i] = unit(r) / float64(k)
		}
		return float64(r.IntN(k)), p
	}
	cuts := func(r *rand.Rand) (float64, []float64) {
		y, p := levels(r)
		p[0] = eta(r)
		cut := -2.0
		for i := range p[1:] {
			cut += positive(r)
			p[i+1] = cut
		}
		return y, p
	}
	realArgs := func(k *Density) sample {
		return sample{k, true, 0, func(r *rand.Rand) (float64, []float64) {
			return eta(r), []float64{eta(r), positive(r), 8 * positive(r)}[:k.Args]
		}}
	}
	return []sample{
		realArgs(Normal), realArgs(StudentT),
		{LogNormal, true, 0, func(r *rand.Rand) (float64, []float64) { return positive(r), []float64{positive(r), positive(r)} }},
		{LogNormalLog, true, 0, func(r *rand.Rand) (float64, []float64) { return positive(r), []float64{eta(r), positive(r)} }},
		{Gamma, true, 0, func(r *rand.Rand) (float64, []float64) { return positive(r), []float64{positive(r), 5 * positive(r)} }},
		{GammaLog, true, 0, func(r *rand.Rand) (float64, []float64) { return positive(r), []float64{eta(r), 5 * positive(r)} }},
		{Exponential, true, 0, func(r *rand.Rand) (float64, []float64) { return positive(r), []float64{positive(r)} }},
		{ExponentialLog, true, 0, func(r *rand.Rand) (float64, []float64) { return positive(r), []float64{eta(r)} }},
		{Beta, true, 0, func(r *rand.Rand) (float64, []float64) { return unit(r), []float64{unit(r), 10 * positive(r)} }},
		{BetaLogit, true, 0, func(r *rand.Rand) (float64, []float64) { return unit(r), []float64{eta(r), 10 * positive(r)} }},
		{Uniform, true, 0, func(r *rand.Rand) (float64, []float64) { return unit(r), []float64{-positive(r), 1 + positive(r)} }},
		{HalfNormal, true, 0, func(r *rand.Rand) (float64, []float64) { return positive(r), []float64{positive(r)} }},
		realArgs(Cauchy), realArgs(Laplace), realArgs(Logistic), realArgs(Gumbel),
		{SkewNormal, true, 0, func(r *rand.Rand) (float64, []float64) { return eta(r), []float64{eta(r), positive(r), 2 * eta(r)} }},
		{HalfCauchy, true, 0, func(r *rand.Rand) (float64, []float64) { return positive(r), []float64{positive(r)} }},
		{Weibull, true, 0, func(r *rand.Rand) (float64, []float64) { return positive(r), []float64{positive(r), positive(r)} }},
		{WeibullLog, true, 0, func(r *rand.Rand) (float64, []float64) { return positive(r), []float64{0.5 * eta(r), positive(r)} }},
		{InverseGamma, true, 0, func(r *rand.Rand) (float64, []float64) { return positive(r), []float64{positive(r), 5 * positive(r)} }},
		{Pareto, true, 0, func(r *rand.Rand) (float64, []float64) {
			m := positive(r)
			return m * (1.01 + positive(r)), []float64{m, positive(r)}
		}},
		{Triangular, true, 0, func(r *rand.Rand) (float64, []float64) {
			m := unit(r)
			if r.IntN(2) == 0 {
				return m - 0.05*(1+r.Float64()), []float64{m - 1 - positive(r), m + positive(r), m}
			}
			return m + 0.05*(1+r.Float64()), []float64{m - positive(r), m + 1 + positive(r), m}
		}},
		{VonMises, true, 0, func(r *rand.Rand) (float64, []float64) { return eta(r), []float64{eta(r), 8 * positive(r)} }},
		{Geometric, false, 0, func(r *rand.Rand) (float64, []float64) { return count(r), []float64{5 * positive(r)} }},
		{GeometricLog, false, 0, func(r *rand.Rand) (float64, []float64) { return count(r), []float64{eta(r)} }},
		{BetaBinomial, false, 1, func(r *rand.Rand) (float64, []float64) {
			y := count(r)
			return y, []float64{unit(r), 10 * positive(r), y + count(r)}
		}},
		{BetaBinomialLogit, false, 1, func(r *rand.Rand) (float64, []float64) {
			y := count(r)
			return y, []float64{eta(r), 10 * positive(r), y + count(r)}
		}},
		{HalfT, true, 0, func(r *rand.Rand) (float64, []float64) { return positive(r), []float64{positive(r), 8 * positive(r)} }},
		{Bernoulli, false, 0, func(r *rand.Rand) (float64, []float64) { return float64(r.IntN(2)), []float64{unit(r)} }},
		{BernoulliLogit, false, 0, func(r *rand.Rand) (float64, []float64) { return float64(r.IntN(2)), []float64{eta(r)} }},
		{Binomial, false, 1, func(r *rand.Rand) (float64, []float64) {
			y := count(r)
			return y, []float64{unit(r), y + count(r)}
		}},
		{BinomialLogit, false, 1, func(r *rand.Rand) (float64, []float64) {
			y := count(r)
			return y, []float64{eta(r), y + count(r)}
		}},
		{Poisson, false, 0, func(r *rand.Rand) (float64, []float64) { return count(r), []float64{5 * positive(r)} }},
		{PoissonLog, false, 0, func(r *rand.Rand) (float64, []float64) { return count(r), []float64{eta(r)} }},
		{NegativeBinomial, false, 0, func(r *rand.Rand) (float64, []float64) { return count(r), []float64{5 * positive(r), 3 * positive(r)} }},
		{NegativeBinomialLog, false, 0, func(r *rand.Rand) (float64, []float64) { return count(r), []float64{eta(r), 3 * positive(r)} }},
		{Categorical, false, 0, levels},
		{Ordered, false, 0, levels},
		{CategoricalSoftmax, false, 0, func(r *rand.Rand) (float64, []float64) {
			y, p := levels(r)
			for i := range p {
				p[i] = eta(r)
			}
			return y, p
		}},
		{OrderedLogit, false, 0, cuts}, {OrderedProbit, false, 0, cuts},
	}
}

// boundedSamples are densities made of others and their tails.
func boundedSamples() []sample {
	tails := map[*Density]Tails{Normal: NormalTails, Logistic: LogisticTails, LogNormal: LogNormalTails, LogNormalLog: LogNormalLogTails,
		Weibull: WeibullTails, WeibullLog: WeibullLogTails, Exponential: ExponentialTails, ExponentialLog: ExponentialLogTails}
	var out []sample
	for _, s := range samples() {
		of, ok := tails[s.kernel]
		if !ok {
			continue
		}
		with := func(k *Density, smooth bool, fixed int, bounds func(r *rand.Rand, y float64) []float64) {
			out = append(out, sample{k, smooth, fixed, func(r *rand.Rand) (float64, []float64) {
				y, args := s.draw(r)
				return y, append(args, bounds(r, y)...)
			}})
		}
		near := func(r *rand.Rand, y float64) []float64 { return []float64{y * (0.5 + r.Float64())} }
		with(LeftCensored(s.kernel, of), true, 1, near)
		with(RightCensored(s.kernel, of), true, 1, near)
		with(Censored(s.kernel, of), true, 1, func(r *rand.Rand, _ float64) []float64 { return []float64{float64(r.IntN(2))} })
		with(IntervalCensored(s.kernel, of), true, 1, func(r *rand.Rand, y float64) []float64 { return []float64{y + 0.1 + r.Float64()} })
		with(Truncated(s.kernel, of), true, 2, func(r *rand.Rand, y float64) []float64 {
			return []float64{y - (0.1+0.8*r.Float64())*math.Abs(y), y + 0.1 + r.Float64()}
		})
	}
	return out
}

// withZeroSamples are densities made of others, which no list holds.
func withZeroSamples() []sample {
	var out []sample
	for _, s := range samples() {
		counts := s.kernel == Poisson || s.kernel == PoissonLog || s.kernel == NegativeBinomialLog
		positive := s.kernel == GammaLog || s.kernel == LogNormal
		draw := func(r *rand.Rand) (float64, []float64) {
			y, args := s.draw(r)
			if r.IntN(3) == 0 {
				y = 0
			}
			return y, append(args, 0.1+0.8*r.Float64())
		}
		if counts {
			out = append(out, sample{ZeroInflated(s.kernel), false, 0, draw}, sample{Hurdle(s.kernel, true), false, 0, draw})
		}
		if positive { // the value has no derivative at 0
			out = append(out, sample{Hurdle(s.kernel, false), false, 0, draw})
		}
	}
	return out
}

// eachSample runs f once per kernel, and fails for a kernel without a sample.
func eachSample(t *testing.T, f func(t *testing.T, s sample, r *rand.Rand)) {
	seen := map[*Density]bool{}
	for _, s := range slices.Concat(samples(), withZeroSamples(), boundedSamples()) {
		seen[s.kernel] = true
		t.Run(s.kernel.Name, func(t *testing.T) { f(t, s, rand.New(rand.NewPCG(1, 2))) })
	}
	for _, k := range Densities() {
		if !seen[k] {
			t.Errorf("%s has no sample in this test", k.Name)
		}
	}
}

var testScratch = make([]float64, 4*BlockRows)

// at evaluates one row.
func (s sample) at(y float64, args []float64) float64 {
	return s.kernel.Block(1, []float64{y}, columns(args), nil, nil, nil, testScratch)
}

func columns(flat []float64) [][]float64 {
	out := make([][]float64, len(flat))
	for i := range flat {
		out[i] = flat[i : i+1]
	}
	return out
}

// slope differentiates f at x: central differences at two steps, whose
// leading errors cancel (Richardson).
func slope(f func(float64) float64, x float64) float64 {
	h := 1e-3 * min(1, math.Abs(x)+1e-3)
	d := func(h float64) float64 { return (f(x+h) - f(x-h)) / (2 * h) }
	return (4*d(h/2) - d(h)) / 3
}

// Oracle: finite differences of the kernel's own value.
func TestDerivatives(t *testing.T) {
	eachSample(t, func(t *testing.T, s sample, r *rand.Rand) {
		for range 200 {
			y, args := s.draw(r)
			d := make([]float64, len(args))
			dy := []float64{0}
			s.kernel.Block(1, []float64{y}, columns(args), dy, columns(d), nil, testScratch)
			check := func(what string, got, want float64) {
				if math.Abs(got-want) > 1e-7*max(1, math.Abs(want)) {
					t.Errorf("at %v %v: slope in %s %v, finite differences give %v", y, args, what, got, want)
				}
			}
			if s.smooth {
				check("y", dy[0], slope(func(v float64) float64 { return s.at(v, args) }, y))
			} else if dy[0] != 0 && y == 0 {
				t.Errorf("a discrete value has slope %v", dy[0])
			}
			for i := range args[:len(args)-s.fixed] {
				check("argument", d[i], slope(func(v float64) float64 {
					moved := append([]float64(nil), args...)
					moved[i] = v
					return s.at(y, moved)
				}, args[i]))
			}
		}
	})
}

// A block of columns is the sum of its rows, derivatives are added to what
// was there, and prepared terms change nothing. Oracle: rows one at a time.
func TestBlockIsSumOfRows(t *testing.T) {
	const n = 300
	eachSample(t, func(t *testing.T, s sample, r *rand.Rand) {
		y0, args0 := s.draw(r)
		width := len(args0)
		// Every pattern of columns and scalars; bit 0 is y, bit i+1 argument i.
		for pattern := range 1 << (width + 1) {
			y := make([]float64, 0, n)
			args := make([][]float64, width)
			for len(y) < n {
				v, a := s.draw(r)
				if len(a) != width {
					continue
				}
				y = append(y, v)
				for i := range a {
					args[i] = append(args[i], a[i])
				}
			}
			if pattern&1 == 0 {
				y = []float64{y0}
			}
			for i := range args {
				if pattern>>(i+1)&1 == 0 {
					args[i] = args0[i : i+1]
				}
			}
			dy, one := make([]float64, len(y)), []float64{0}
			dargs, ones := make([][]float64, width), make([][]float64, width)
			wantArgs := make([][]float64, width)
			for i := range args {
				dargs[i], wantArgs[i] = make([]float64, len(args[i])), make([]float64, len(args[i]))
				dargs[i][0], wantArgs[i][0] = 5, 5
				ones[i] = []float64{0}
			}
			want, wantY := 0.0, make([]float64, len(y))
			for i := range n {
				row := make([][]float64, width)
				for j := range args {
					k := i & mask(args[j])
					row[j] = args[j][k : k+1]
					ones[j][0] = 0
				}
				k := i & mask(y)
				one[0] = 0
				want += s.kernel.Block(1, y[k:k+1], row, one, ones, nil, testScratch)
				wantY[k] += one[0]
				for j := range args {
					wantArgs[j][i&mask(args[j])] += ones[j][0]
				}
			}
			got := s.kernel.Block(n, y, args, dy, dargs, nil, testScratch)
			if math.IsInf(want, -1) {
				if !math.IsInf(got, -1) {
					t.Fatalf("pattern %b: %v, want %v", pattern, got, want)
				}
				continue // trials below successes, cut points out of order
			}
			close := func(a, b float64) bool { return math.Abs(a-b) <= 1e-11*max(1, math.Abs(b)) }
			if !close(got, want) {
				t.Errorf("pattern %b: %v, want %v", pattern, got, want)
			}
			for i := range dy {
				if !close(dy[i], wantY[i]) {
					t.Fatalf("pattern %b: slope in y[%d] %v, want %v", pattern, i, dy[i], wantY[i])
				}
			}
			for j := range dargs {
				for i := range dargs[j] {
					if !close(dargs[j][i], wantArgs[j][i]) {
						t.Fatalf("pattern %b: slope in argument %d[%d] %v, want %v", pattern, j, i, dargs[j][i], wantArgs[j][i])
					}
				}
			}
			if s.kernel.Prepare != nil {
				aux := s.kernel.Prepare(y, args)
				if g := s.kernel.Block(n, y, args, nil, nil, aux, testScratch); !close(g, want) {
					t.Errorf("pattern %b with prepared terms: %v, want %v", pattern, g, want)
				}
			}
			// One derivative at a time gives the same.
			for j := range dargs {
				alone := make([][]float64, width)
				alone[j] = make([]float64, len(args[j]))
				s.kernel.Block(n, y, args, nil, alone, nil, testScratch)
				alone[j][0] += 5
				for i := range alone[j] {
					if !close(alone[j][i], wantArgs[j][i]) {
						t.Fatalf("pattern %b: argument %d alone: slope %v, want %v", pattern, j, alone[j][i], wantArgs[j][i])
					}
				}
			}
		}
	})
}

func TestBlockDoesNotAllocate(t *testing.T) {
	eachSample(t, func(t *testing.T, s sample, r *rand.Rand) {
		y, args := s.draw(r)
		ys, cols := make([]float64, BlockRows), columns(args)
		for i := range ys {
			ys[i] = y
		}
		cols[0] = make([]float64, BlockRows)
		for i := range cols[0] {
			cols[0][i] = args[0]
		}
		d := make([][]float64, len(args))
		for i := range d {
			d[i] = make([]float64, len(cols[i]))
		}
		dy := make([]float64, BlockRows)
		if got := testing.AllocsPerRun(10, func() { s.kernel.Block(BlockRows, ys, cols, dy, d, nil, testScratch) }); got != 0 {
			t.Errorf("%v allocations", got)
		}
	})
}

func TestOutsideSupport(t *testing.T) {
	beyond := map[*Density][]float64{
		LogNormal: {0, -1}, LogNormalLog: {0, -1}, Gamma: {0, -1}, GammaLog: {0, -1},
		Exponential: {-1}, ExponentialLog: {-1}, Beta: {0, 1, -1, 2}, BetaLogit: {0, 1, -1, 2},
		Uniform: {-1e9, 1e9}, HalfNormal: {-1}, HalfT: {-1}, HalfCauchy: {-1}, Weibull: {0, -1}, WeibullLog: {0, -1}, InverseGamma: {0, -1},
		Pareto: {0, -1}, Triangular: {-1e9, 1e9}, Geometric: {-1, 0.5, math.Inf(1)}, GeometricLog: {-1, 0.5, math.Inf(1)},
		BetaBinomial: {-1, 0.5, 1e6}, BetaBinomialLogit: {-1, 0.5, 1e6}, OrderedProbit: {-1, 0.5, 9},
		Bernoulli: {-1, 0.5, 2}, BernoulliLogit: {-1, 0.5, 2}, Binomial: {-1, 0.5, 1e6}, BinomialLogit: {-1, 0.5, 1e6},
		Poisson: {-1, 0.5, math.Inf(1)}, PoissonLog: {-1, 0.5, math.Inf(1)},
		NegativeBinomial: {-1, 0.5, math.Inf(1)}, NegativeBinomialLog: {-1, 0.5, math.Inf(1)},
		Categorical: {-1, 0.5, 9}, CategoricalSoftmax: {-1, 0.5, 9}, Ordered: {-1, 0.5, 9}, OrderedLogit: {-1, 0.5, 9},
	}
	eachSample(t, func(t *testing.T, s sample, r *rand.Rand) {
		y, args := s.draw(r)
		for _, v := range beyond[s.kernel] {
			if got := s.at(v, args); !math.IsInf(got, -1) {
				t.Errorf("log density at %v is %v", v, got)
			}
		}
		if got := s.at(math.NaN(), args); got == got {
			t.Errorf("log density at NaN is %v", got)
		}
		for i := range args {
			broken := append([]float64(nil), args...)
			broken[i] = math.NaN()
			used := s.kernel.Args >= 0 || s.kernel == CategoricalSoftmax || i == 0 && (s.kernel == OrderedLogit || s.kernel == OrderedProbit) || float64(i) == y
			if got := s.at(y, broken); used && got == got {
				t.Errorf("log density with argument %d NaN is %v", i, got)
			}
		}
	})
	for _, c := range []struct {
		k *Density
		y float64
		a []float64
	}{
		{Normal, 0, []float64{0, 0}}, {Normal, 0, []float64{0, -1}}, {StudentT, 0, []float64{0, -1, 3}}, {StudentT, 0, []float64{0, 1, 0}},
		{LogNormal, 1, []float64{-1, 1}}, {LogNormal, 1, []float64{1, -1}}, {LogNormalLog, 1, []float64{1, -1}},
		{Gamma, 1, []float64{-1, 1}}, {Gamma, 1, []float64{1, 0}}, {GammaLog, 1, []float64{1, -2}},
		{Exponential, 1, []float64{-1}}, {Beta, 0.5, []float64{1, 3}}, {Beta, 0.5, []float64{0.5, -3}}, {BetaLogit, 0.5, []float64{0, -3}},
		{Uniform, 0, []float64{1, -1}}, {HalfNormal, 1, []float64{-1}}, {HalfT, 1, []float64{-1, 3}}, {HalfT, 1, []float64{1, -3}},
		{Bernoulli, 1, []float64{1.1}}, {Bernoulli, 0, []float64{-0.1}}, {Binomial, 1, []float64{1.1, 2}}, {Poisson, 1, []float64{-1}},
		{NegativeBinomial, 1, []float64{-1, 1}}, {NegativeBinomial, 1, []float64{1, -1}}, {NegativeBinomialLog, 1, []float64{1, -1}},
		{Cauchy, 0, []float64{0, 0}}, {Laplace, 0, []float64{0, -1}}, {Logistic, 0, []float64{0, 0}}, {Gumbel, 0, []float64{0, -1}}, {SkewNormal, 0, []float64{0, 0, 1}},
		{HalfCauchy, 1, []float64{0}}, {Weibull, 1, []float64{0, 1}}, {Weibull, 1, []float64{1, 0}}, {WeibullLog, 1, []float64{0, 0}}, {InverseGamma, 1, []float64{0, 1}},
		{InverseGamma, 1, []float64{1, -1}}, {Pareto, 1, []float64{2, 1}}, {Pareto, 1, []float64{0, 1}}, {Pareto, 1, []float64{1, 0}}, {Triangular, 0, []float64{-1, 1, 2}},
		{VonMises, 0, []float64{0, -1}}, {Geometric, 1, []float64{-1}}, {BetaBinomial, 1, []float64{1.1, 1, 2}}, {BetaBinomial, 1, []float64{0.5, 0, 2}},
		{BetaBinomialLogit, 1, []float64{0, -1, 2}}, {OrderedProbit, 1, []float64{0, 1, 1}},
		{Categorical, 0, []float64{1.2, -0.2}}, {OrderedLogit, 1, []float64{0, 1, 1}}, {OrderedLogit, 1, []float64{0, 1, 0.5}},
	} {
		if got := (sample{kernel: c.k}).at(c.y, c.a); !math.IsInf(got, -1) {
			t.Errorf("%s at %v with arguments %v is %v", c.k.Name, c.y, c.a, got)
		}
	}
}

// Far out on the link scale a kernel may reach -Inf but never NaN, and where
// the value is finite so are its derivatives.
func TestLinkTails(t *testing.T) {
	const top = math.MaxFloat64
	predictors := []float64{0, 1, 20, 30, 36, 37, 40, 100, 300, 700, 708, 709, 709.8, 710, 744, 746, 800, 1e4, 1e8, 1e15, 1e100, top}
	linked := map[*Density]struct {
		y    []float64
		rest [][]float64
	}{
		Normal: {[]float64{0, 3}, [][]float64{{1}}}, StudentT: {[]float64{0, 3}, [][]float64{{1, 4}, {1, 1e9}}},
		LogNormalLog: {[]float64{1e-300, 1, 1e300}, [][]float64{{1}}}, GammaLog: {[]float64{1e-300, 1, 1e300}, [][]float64{{2}, {1e-3}, {1e6}}},
		ExponentialLog: {[]float64{0, 1e-300, 1, 1e300}, [][]float64{nil}}, BetaLogit: {[]float64{1e-10, 0.5, 1 - 1e-10}, [][]float64{{2}, {1e-3}, {1e6}}},
		BernoulliLogit: {[]float64{0, 1}, [][]float64{nil}}, BinomialLogit: {[]float64{0, 3, 7}, [][]float64{{7}}},
		PoissonLog: {[]float64{0, 1, 1e6}, [][]float64{nil}}, NegativeBinomialLog: {[]float64{0, 1, 1e6}, [][]float64{{1}, {1e-6}, {1e12}}},
		WeibullLog: {[]float64{1e-300, 1, 1e300}, [][]float64{{2}, {1e-3}}}, GeometricLog: {[]float64{0, 1, 1e6}, [][]float64{nil}},
		BetaBinomialLogit: {[]float64{0, 3, 7}, [][]float64{{2, 7}, {1e-6, 7}, {1e12, 7}}}, OrderedProbit: {[]float64{0, 1, 2}, [][]float64{{-1, 1}, {0, 1e-9}, {-30, 30}}},
		CategoricalSoftmax: {[]float64{0, 1, 2}, [][]float64{{0, 0}, {1e300, -1e300}, {700, -700}}}, OrderedLogit: {[]float64{0, 1, 2}, [][]float64{{-1, 1}, {0, 1e-9}, {-800, 800}}},
	}
	for k, c := range linked {
		for _, p := range predictors {
			for _, eta := range []float64{p, -p} {
				for _, y := range c.y {
					for _, rest := range c.rest {
						args := append([]float64{eta}, rest...)
						d := make([]float64, len(args))
						got := k.Block(1, []float64{y}, columns(args), nil, columns(d), nil, testScratch)
						bounded := k != ExponentialLog || y > 0 // its density at 0 is 1/mean
						if got != got || bounded && got > 1e4 {
							t.Errorf("%s at %v %v is %v", k.Name, y, args, got)
						}
						for i := range d {
							if !math.IsInf(got, -1) && (d[i] != d[i] || math.IsInf(d[i], 0)) {
								t.Errorf("%s at %v %v is %v with slope %v in argument %d", k.Name, y, args, got, d[i], i)
							}
						}
					}
				}
			}
		}
	}
}

// A link-scale kernel is the natural one after the inverse link.
func TestLinkedIsNatural(t *testing.T) {
	softmax := func(a []float64) []float64 {
		out, sum := make([]float64, len(a)), 0.0
		for i := range a {
			out[i] = math.Exp(a[i])
			sum += out[i]
		}
		for i := range out {
			out[i] /= sum
		}
		return out
	}
	logistic := func(x float64) float64 { return 1 / (1 + math.Exp(-x)) }
	normalCDF := func(x float64) float64 { return 0.5 * math.Erfc(-x/math.Sqrt2) }
	cumulative := func(inverse func(float64) float64) func([]float64) []float64 {
		return func(a []float64) []float64 {
			out, lo := make([]float64, len(a)), math.Inf(-1)
			for j := range a {
				hi := math.Inf(1)
				if j+1 < len(a) {
					hi = a[j+1] - a[0]
				}
				if lo > 0 { // in the tail where the difference keeps its digits
					out[j] = inverse(-lo) - inverse(-hi)
				} else {
					out[j] = inverse(hi) - inverse(lo)
				}
				lo = hi
			}
			return out
		}
	}
	first := func(f func(float64) float64) func([]float64) []float64 {
		return func(a []float64) []float64 { return append([]float64{f(a[0])}, a[1:]...) }
	}
	pairs := map[*Density]struct {
		natural *Density
		inverse func([]float64) []float64
	}{
		LogNormalLog: {LogNormal, first(math.Exp)}, GammaLog: {Gamma, first(math.Exp)}, ExponentialLog: {Exponential, first(math.Exp)},
		BetaLogit: {Beta, first(logistic)}, BernoulliLogit: {Bernoulli, first(logistic)}, BinomialLogit: {Binomial, first(logistic)},
		PoissonLog: {Poisson, first(math.Exp)}, NegativeBinomialLog: {NegativeBinomial, first(math.Exp)},
		CategoricalSoftmax: {Categorical, softmax}, OrderedLogit: {Ordered, cumulative(logistic)}, WeibullLog: {Weibull, first(math.Exp)},
		GeometricLog: {Geometric, first(math.Exp)}, BetaBinomialLogit: {BetaBinomial, first(logistic)}, OrderedProbit: {Ordered, cumulative(normalCDF)},
	}
	eachSample(t, func(t *testing.T, s sample, r *rand.Rand) {
		pair, ok := pairs[s.kernel]
		if !ok {
			return
		}
		delete(pairs, s.kernel)
		for range 500 {
			y, args := s.draw(r)
			got := s.at(y, args)
			want := sample{kernel: pair.natural}.at(y, pair.inverse(args))
			// Rounding η to a natural argument moves log densities of up to
			// some hundreds by some units of their last place.
			if math.Abs(got-want) > 1e-12*max(1, math.Abs(want)) {
				t.Errorf("at %v %v: %v, natural %v", y, args, got, want)
			}
		}
	})
	if len(pairs) > 0 {
		t.Error("not every pair was compared")
	}
}

// A density is its two parts of a Tally. Oracle: the whole, row by row.
func TestTallyIsWhole(t *testing.T) {
	const n = 200
	eachSample(t, func(t *testing.T, s sample, r *rand.Rand) {
		tally := s.kernel.Tally
		if tally == nil {
			return
		}
		for range 20 {
			_, first := s.draw(r)
			y, args, d, parts := make([]float64, n), columns(first), columns(make([]float64, len(first))), columns(make([]float64, len(first)))
			args[0], d[0], parts[0] = make([]float64, n), make([]float64, n), make([]float64, n)
			counts := map[float64]float64{}
			for i := range y {
				v, a := s.draw(r)
				y[i], args[0][i] = v, a[0]
				counts[v]++
			}
			var values, times []float64
			for v := range y {
				if c := counts[y[v]]; c > 0 {
					values, times = append(values, y[v]), append(times, c)
					delete(counts, y[v])
				}
			}
			want := s.kernel.Block(n, y, args, nil, d, nil, testScratch)
			for _, prepared := range []bool{false, true} {
				var aux []float64
				if prepared && tally.Rows.Prepare != nil {
					aux = tally.Rows.Prepare(y, args)
				}
				clear(parts[0])
				parts[tally.Arg][0] = 0
				got := tally.Rows.Block(n, y, args, nil, parts, aux, testScratch) +
					tally.Values.Block(len(values), values, [][]float64{args[tally.Arg], times}, nil, [][]float64{parts[tally.Arg], nil}, nil, testScratch)
				if math.Abs(got-want) > 1e-12*math.Abs(want) {
					t.Errorf("parts add up to %v, the whole is %v", got, want)
				}
				for j := range d {
					for i := range d[j] {
						if math.Abs(parts[j][i]-d[j][i]) > 1e-11*max(1, math.Abs(d[j][i])) {
							t.Errorf("slope in argument %d[%d]: parts %v, whole %v", j, i, parts[j][i], d[j][i])
						}
					}
				}
			}
		}
	})
}
