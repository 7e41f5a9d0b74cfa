package kernel

import (
	"math"
	"math/rand/v2"
	"testing"
)

// One bad row among many decides the sum, in the fast column paths too: a
// value outside the support or a predictor beyond range gives -Inf, a NaN NaN.
func TestOneBadRow(t *testing.T) {
	const n = 21
	bad := map[*Density][]float64{
		LogNormalLog: {0}, GammaLog: {0}, ExponentialLog: {-1}, BetaLogit: {0, 1}, BernoulliLogit: {2, 0.5}, BinomialLogit: {0.5, -1},
		PoissonLog: {0.5, -1}, NegativeBinomialLog: {0.5, -1}, CategoricalSoftmax: {0.5, -1}, OrderedLogit: {0.5, -1},
		WeibullLog: {0}, GeometricLog: {0.5, -1}, BetaBinomialLogit: {0.5, -1},
	}
	eachSample(t, func(t *testing.T, s sample, r *rand.Rand) {
		_, first := s.draw(r)
		y, args := make([]float64, n), columns(first)
		args[0] = make([]float64, n)
		for i := range y {
			for {
				v, a := s.draw(r)
				y[i], args[0][i] = v, a[0]
				row := columns(first)
				row[0] = a[:1]
				if f := s.kernel.Block(1, y[i:i+1], row, nil, nil, nil, testScratch); !math.IsInf(f, 0) {
					break
				}
			}
		}
		kernels := []*Density{s.kernel}
		if s.kernel.Tally != nil {
			kernels = append(kernels, s.kernel.Tally.Rows)
		}
		value := func(k *Density, prepared bool) float64 {
			var aux []float64
			if prepared {
				if k.Prepare == nil {
					return math.NaN()
				}
				aux = k.Prepare(y, args)
			}
			d := columns(make([]float64, len(args)))
			d[0] = make([]float64, n)
			return k.Block(n, y, args, nil, d, aux, testScratch)
		}
		at := n / 2
		for _, k := range kernels {
			for _, prepared := range []bool{false, true} {
				if prepared && k.Prepare == nil {
					continue
				}
				if v := value(k, prepared); math.IsNaN(v) || math.IsInf(v, 0) {
					t.Fatalf("%s, prepared %v: sound rows give %v", k.Name, prepared, v)
				}
				keep := y[at]
				for _, v := range bad[s.kernel] {
					y[at] = v
					if got := value(k, prepared); !math.IsInf(got, -1) {
						t.Errorf("%s, prepared %v: y = %v gives %v", k.Name, prepared, v, got)
					}
				}
				y[at] = math.NaN()
				if got := value(k, prepared); got == got {
					t.Errorf("%s, prepared %v: y = NaN gives %v", k.Name, prepared, got)
				}
				y[at] = keep
				keep = args[0][at]
				args[0][at] = math.NaN()
				if got := value(k, prepared); s.kernel.Args >= 0 && got == got {
					t.Errorf("%s, prepared %v: predictor NaN gives %v", k.Name, prepared, got)
				}
				if bad[s.kernel] != nil {
					for _, huge := range []float64{math.MaxFloat64, -math.MaxFloat64} {
						args[0][at] = huge
						if got := value(k, prepared); got != got || math.IsInf(got, 1) {
							t.Errorf("%s, prepared %v: predictor %v gives %v", k.Name, prepared, huge, got)
						}
					}
				}
				args[0][at] = keep
			}
		}
	})
}

// Column forms give, bit for bit, what the scalar functions give.
func TestColumnsAreScalars(t *testing.T) {
	x := []float64{-1000, -745.2, -708, -20, -1, -1e-9, 0, 1e-9, 0.5, 1, 3, 40, 708.9, 709.5, 800, math.Inf(1), math.Inf(-1)}
	dst, slope := make([]float64, len(x)), make([]float64, len(x))
	check := func(what string, i int, got, want float64) {
		if math.Float64bits(got) != math.Float64bits(want) {
			t.Errorf("%s(%v) = %v in a column and %v alone", what, x[i], got, want)
		}
	}
	ExpTo(dst, x)
	for i := range x {
		check("exp", i, dst[i], Exp(x[i]))
	}
	SoftplusTo(dst, slope, x)
	for i := range x {
		p, s := softplusSigmoid(x[i])
		check("softplus", i, dst[i], p)
		check("sigmoid", i, slope[i], s)
	}
	SoftplusTo(dst, nil, x)
	SigmoidTo(slope, x)
	for i := range x {
		p, s := softplusSigmoid(x[i])
		check("softplus", i, dst[i], p)
		check("sigmoid", i, slope[i], s)
	}
	x = x[6:]
	LogTo(dst, x)
	for i := range x {
		check("log", i, dst[i], Log(x[i]))
	}
}

func TestNamesDiffer(t *testing.T) {
	names := map[string]bool{}
	for _, k := range Densities() {
		if names[k.Name] {
			t.Errorf("two kernels are named %s", k.Name)
		}
		names[k.Name] = true
	}
}

// Oracle: the beta kernel, which is checked against published points.
func TestLogBetaTerm(t *testing.T) {
	r := rand.New(rand.NewPCG(9, 10))
	for range 500 {
		a, b, x := math.Exp(3*r.NormFloat64()), math.Exp(3*r.NormFloat64()), 0.01+0.98*r.Float64()
		want := sample{kernel: Beta}.at(x, []float64{a / (a + b), a + b}) + math.Log(x) + math.Log1p(-x)
		if got := LogBetaTerm(a, b, x, 1-x); math.Abs(got-want) > 1e-11*max(1, math.Abs(want)) {
			t.Errorf("a %v, b %v, x %v: %v, want %v", a, b, x, got, want)
		}
	}
}

// Every length and every place of an odd value, so that groups of four, their
// ends and values out of range between them are all met. Oracle: Exp.
func TestExpToIsExp(t *testing.T) {
	r := rand.New(rand.NewPCG(13, 14))
	odd := []float64{800, -800, 709, -708, math.NaN(), math.Inf(1), math.Inf(-1), 0}
	for n := range 40 {
		for at := range n + 1 {
			src, dst := make([]float64, n), make([]float64, n)
			for i := range src {
				src[i] = 700 * (2*r.Float64() - 1)
				if i%2 == 0 {
					src[i] = r.NormFloat64()
				}
			}
			if at < n {
				src[at] = odd[r.IntN(len(odd))]
			}
			ExpTo(dst, src)
			for i, x := range src {
				if math.Float64bits(dst[i]) != math.Float64bits(Exp(x)) {
					t.Fatalf("length %d: exp(%v) at %d is %v in a column and %v alone", n, x, i, dst[i], Exp(x))
				}
			}
			ExpTo(src, src)
			for i := range src {
				if math.Float64bits(dst[i]) != math.Float64bits(src[i]) {
					t.Fatalf("length %d: in place %v, apart %v", n, src[i], dst[i])
				}
			}
		}
	}
}
