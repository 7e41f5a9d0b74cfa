package catalog

import (
	"math"
	"math/rand/v2"
	"slices"
	"sort"
	"strings"
	"testing"

	"arrowroot/compile/kernel"
)

func TestRowsAreComplete(t *testing.T) {
	names := map[string]bool{}
	for _, f := range Families() {
		if names[fold(f.Name)] {
			t.Errorf("two families are called %s", f.Name)
		}
		names[fold(f.Name)] = true
		if f.Doc == "" || f.Source == "" || f.Natural == nil || f.Quantile == nil || f.CDF == nil || f.Mean == nil || f.SD == nil {
			t.Errorf("%s lacks a field", f.Name)
		}
		if (f.Predicted >= 0) != (f.Linked != nil) || f.Predicted >= len(f.Arguments) {
			t.Errorf("%s: predicted argument and link-scale kernel do not go together", f.Name)
		}
		if f.Natural.Args >= 0 && f.Natural.Args != len(f.Arguments) {
			t.Errorf("%s has %d arguments and its kernel %d", f.Name, len(f.Arguments), f.Natural.Args)
		}
		if f.Linked != nil && f.Linked.Args >= 0 && f.Linked.Args != len(f.Arguments) {
			t.Errorf("%s has %d arguments and its link-scale kernel %d", f.Name, len(f.Arguments), f.Linked.Args)
		}
		words := map[string]bool{}
		for i, a := range f.Arguments {
			if a.Name == "" || a.Greek == "" || a.Doc == "" {
				t.Errorf("%s: argument %d lacks a field", f.Name, i)
			}
			for _, w := range append([]string{a.Name}, a.Also...) {
				if words[w] {
					t.Errorf("%s: two arguments are called %s", f.Name, w)
				}
				words[w] = true
				if f.Argument(w) != i {
					t.Errorf("%s: %q does not find argument %d", f.Name, w, i)
				}
			}
		}
		if f.Argument("no such word") != -1 {
			t.Error("found an argument that is not there")
		}
	}
	for _, name := range []string{"normal", "student t", "log-normal", "Log Normal", "gamma", "exponential", "beta", "uniform", "half-normal",
		"half-t", "bernoulli", "Binomial", "POISSON", "negative  binomial", "categorical", "ordered"} {
		if FamilyByName(name) == nil {
			t.Errorf("no family %q", name)
		}
	}
	for scale, name := range map[string]string{"real": "normal", "positive": "gamma", "proportion": "beta", "count": "negative binomial",
		"binary": "Bernoulli", "category": "categorical", "ordered": "ordered"} {
		if f := Default(scale); f == nil || f.Name != name {
			t.Errorf("default of %s is not %s", scale, name)
		}
	}
	if FamilyByName("spiral") != nil || Default("spiral") != nil || FunctionByName("spiral") != nil {
		t.Error("found what is not there")
	}
}

func TestFunctions(t *testing.T) {
	// Expected: arithmetic anyone can redo; inverse logit of log 3 is 3/4.
	for _, c := range []struct {
		name string
		args []float64
		want float64
	}{
		{"exp", []float64{0}, 1}, {"log", []float64{1}, 0}, {"logit", []float64{0.75}, math.Log(3)}, {"inverse logit", []float64{math.Log(3)}, 0.75},
		{"sqrt", []float64{9}, 3}, {"abs", []float64{-2}, 2}, {"min", []float64{2, -1}, -1}, {"max", []float64{2, -1}, 2},
	} {
		f := FunctionByName(c.name)
		if f == nil || f.Args != len(c.args) {
			t.Fatalf("no function %s of %d arguments", c.name, len(c.args))
		}
		if got := f.Value(c.args); math.Abs(got-c.want) > 1e-15 {
			t.Errorf("%s%v = %v, want %v", c.name, c.args, got, c.want)
		}
	}
	if len(Functions()) != 8 {
		t.Error("a function has no check here")
	}
}

// settings are arguments at which each family is put to the test; the first
// of each has finite moments and a smooth density.
var settings = map[string][][]float64{
	"normal":            {{3, 2}, {-1e3, 1e-2}},
	"Student t":         {{1, 2, 5}, {0, 1, 1}, {0, 1, 0.7}, {0, 1, 1e4}, {0, 1, 1e7}, {0, 1, 1e12}},
	"gamma":             {{3, 2.5}, {5, 40}, {2, 0.3}, {1, 1e4}},
	"log-normal":        {{2, 0.6}, {1e-3, 0.1}},
	"exponential":       {{2}, {1e-4}},
	"half-normal":       {{2}, {1e-4}},
	"half-t":            {{2, 5}, {1, 1}, {1, 0.7}},
	"beta":              {{0.3, 8}, {0.7, 2.5}, {0.1, 500}, {0.2, 3}, {0.4, 1e6}},
	"uniform":           {{-1, 4}, {0, 1e-6}},
	"Laplace":           {{1, 2}, {0, 1e-4}},
	"logistic":          {{1, 2}, {0, 1e-4}},
	"skew normal":       {{1, 2, 3}, {0, 1, 0}, {0, 1, -0.7}, {0, 1, 40}, {2, 1, -5}},
	"Gumbel":            {{1, 2}, {-3, 0.01}},
	"Cauchy":            {{1, 2}},
	"von Mises":         {{0.5, 2}, {-1, 1e-3}, {3, 80}, {0, 1e5}},
	"Weibull":           {{3, 2.5}, {2, 0.7}, {1, 20}},
	"inverse gamma":     {{3, 4.5}, {2, 40}, {1, 1.5}},
	"Pareto":            {{2, 5}, {1, 1.5}, {1, 0.7}},
	"half-Cauchy":       {{2}},
	"triangular":        {{-1, 4, 0.5}, {0, 1, 0}, {0, 1, 1}},
	"geometric":         {{4.2}, {0.05}, {300}},
	"beta-binomial":     {{0.3, 8, 12}, {0.1, 0.7, 20}, {0.5, 1e6, 400}, {0.9, 30, 1000}, {0.5, 0.3, 9}},
	"ordered probit":    {{0.2, 0.5, 0.3}, {0.1, 0.1, 0.1, 0.7}},
	"negative binomial": {{7, 2}, {0.3, 0.2}, {120, 30}, {4, 1e7}, {4, 1e12}, {5000, 1e6}},
	"Poisson":           {{4.2}, {0.05}, {300}, {1e6}},
	"binomial":          {{0.3, 12}, {0.01, 400}, {0.999, 1000}, {0.2, 1e6}},
	"Bernoulli":         {{0.3}, {0.999}},
	"categorical":       {{0.2, 0.5, 0.3}, {0.9, 0, 0.1}},

	"truncated normal": {{1, 2, -1, 4}, {0, 1, 2, 5}, {0, 1, -9, -1}, {5, 1, 0, math.Inf(1)}},

	"zero-inflated Poisson":           {{4.2, 0.3}, {0.05, 0.01}, {300, 0.9}},
	"zero-inflated negative binomial": {{7, 2, 0.3}, {120, 30, 0.8}},
	"zero-inflated binomial":          {{0.3, 12, 0.2}, {0.01, 400, 0.5}},
	"hurdle Poisson":                  {{4.2, 0.3}, {0.05, 0.01}, {300, 0.9}},
	"hurdle negative binomial":        {{7, 2, 0.3}, {0.3, 0.2, 0.6}},
	"hurdle gamma":                    {{3, 2.5, 0.3}, {5, 40, 0.9}},
	"hurdle log-normal":               {{2, 0.6, 0.3}},
	"ordered":                         {{0.2, 0.5, 0.3}, {0.1, 0.1, 0.1, 0.7}},
}

func eachSetting(t *testing.T, f func(t *testing.T, f *Family, args []float64)) {
	for _, family := range append(slices.Clip(Families()), FamilyByName("truncated normal")) {
		list, ok := settings[family.Name]
		if !ok {
			t.Errorf("%s has no settings in this test", family.Name)
		}
		for _, args := range list {
			t.Run(family.Name, func(t *testing.T) { f(t, family, args) })
		}
	}
}

// The distribution function undoes the quantile: exactly the smallest x that
// reaches u for a discrete family; otherwise to 1e-9 of the smaller tail, or
// between the values at the neighbouring numbers.
func TestQuantileInvertsDistribution(t *testing.T) {
	probabilities := []float64{1e-9, 1e-6, 1e-3, 0.01, 0.1, 0.25, 0.4999, 0.5, 0.5001, 0.75, 0.9, 0.99, 0.999, 1 - 1e-6, 1 - 1e-9}
	eachSetting(t, func(t *testing.T, f *Family, args []float64) {
		rounding := 2e-16
		if f.Name == "truncated normal" { // a part of a normal's tail
			rounding = 1e-14
		}
		last := math.Inf(-1)
		for _, u := range probabilities {
			x := f.Quantile(u, args)
			if x < last || x != x {
				t.Errorf("%v: quantile at %v is %v, below the one before", args, u, x)
			}
			last = x
			if f.Discrete {
				if x != math.Floor(x) || f.CDF(x, args) < u || x > 0 && f.CDF(x-1, args) >= u {
					t.Errorf("%v: quantile at %v is %v, where the distribution function is %v after %v", args, u, x, f.CDF(x, args), f.CDF(x-1, args))
				}
				continue
			}
			lo, hi := f.CDF(math.Nextafter(x, math.Inf(-1)), args), f.CDF(math.Nextafter(x, math.Inf(1)), args)
			if got := f.CDF(x, args); math.Abs(got-u) > 1e-9*min(u, 1-u)+rounding && (u < lo || u > hi) {
				t.Errorf("%v: distribution function of the quantile at %v is %v (off by %g)", args, u, got, got-u)
			}
		}
	})
}

var scratch = make([]float64, 4*kernel.BlockRows)

// density evaluates the natural kernel at one value.
func density(f *Family, x float64, args []float64) float64 {
	cols := make([][]float64, len(args))
	for i := range args {
		cols[i] = args[i : i+1]
	}
	return math.Exp(f.Natural.Block(1, []float64{x}, cols, nil, nil, nil, scratch))
}

// Oracle: numerical integration of the kernel's density (tanh-sinh between
// far quantiles), or its sum for discrete families. Checks total mass, mean
// and sd of the family, and its distribution function at the median.
func TestMomentsAgainstIntegration(t *testing.T) {
	eachSetting(t, func(t *testing.T, f *Family, args []float64) {
		var total, mean, square, below float64
		median := f.Quantile(0.5, args)
		tolerance := 1e-8
		if f.Discrete {
			lo := math.Max(0, f.Quantile(1e-15, args)-2)
			hi := f.Quantile(1-1e-15, args) + 2
			if f.Support == Levels || f.Support == ZeroOne || f.Support == UpTo {
				lo = 0
			}
			for x := lo; x <= hi; x++ {
				p := density(f, x, args)
				total += p
				mean += x * p
				if x <= median {
					below += p
				}
			}
			for x := lo; x <= hi; x++ {
				square += (x - mean) * (x - mean) * density(f, x, args)
			}
		} else {
			if m := f.SD(args); m != m || math.IsInf(m, 0) {
				return // heavy tails: the published points check these
			}
			lo, hi := f.Quantile(1e-14, args), 0.0
			switch f.Support {
			case Between:
				lo, hi = args[0], args[1]
			case Unit:
				lo, hi = 0, 1
			case Reals:
				hi = f.Quantile(1-1e-14, args)
				if f.Name == "truncated normal" {
					lo, hi = max(lo, args[2]), min(hi, args[3])
				}
			case Turn:
				lo, hi = args[0]-math.Pi, args[0]+math.Pi
			case Above:
				lo, hi = args[0], f.Quantile(1-1e-14, args)
			default:
				hi = f.Quantile(1-1e-14, args)
				if f.Support != Reals {
					lo = 0
				}
			}
			kink := median
			if f.Name == "triangular" {
				kink = args[2]
			}
			integrate := func(a, b float64, g func(x float64) float64) float64 {
				if a < kink && kink < b {
					return tanhSinh(a, kink, g) + tanhSinh(kink, b, g)
				}
				return tanhSinh(a, b, g)
			}
			p := func(x float64) float64 { return density(f, x, args) }
			below = integrate(lo, median, p)
			total = below + integrate(median, hi, p)
			m := func(x float64) float64 { return x * density(f, x, args) }
			mean = integrate(lo, median, m) + integrate(median, hi, m)
			s := func(x float64) float64 { return (x - mean) * (x - mean) * density(f, x, args) }
			square = integrate(lo, median, s) + integrate(median, hi, s)
			if strings.HasPrefix(f.Name, "hurdle") { // the mass at 0
				share := args[len(args)-1]
				below, total, square = below+share, total+share, square+share*mean*mean
			}
			if slices.Contains([]string{"Student t", "half-t", "inverse gamma", "Pareto"}, f.Name) {
				tolerance = 1e-3 // what lies beyond the far quantiles still has second moment
			}
		}
		scale := f.SD(args)
		if math.Abs(total-1) > 1e-8 {
			t.Errorf("%v: total mass %v", args, total)
		}
		if math.Abs(mean-f.Mean(args)) > tolerance*(scale+math.Abs(mean)) {
			t.Errorf("%v: mean %v, integration gives %v", args, f.Mean(args), mean)
		}
		if got := math.Sqrt(square); math.Abs(got-scale) > tolerance*scale {
			t.Errorf("%v: sd %v, integration gives %v", args, scale, got)
		}
		if got := f.CDF(median, args); math.Abs(got-below) > 1e-8 {
			t.Errorf("%v: distribution function at the median %v, integration gives %v", args, got, below)
		}
	})
}

// tanhSinh integrates g over a < x < b, where g may be singular at an end
// (H. Takahasi & M. Mori 1974).
func tanhSinh(a, b float64, g func(x float64) float64) float64 {
	const h = 1. / 64
	sum := 0.0
	for i := -64 * 4; i <= 64*4; i++ {
		s := float64(i) * h
		q := math.Exp(-math.Pi * math.Sinh(math.Abs(s)))
		near := (b - a) * q / (1 + q) // distance from the nearer end
		x := a + near
		if s > 0 {
			x = b - near
		}
		w := (b - a) * math.Pi * math.Cosh(s) * q / ((1 + q) * (1 + q))
		if x <= a || x >= b || w == 0 {
			continue
		}
		if v := g(x); !math.IsInf(v, 0) {
			sum += w * v
		}
	}
	return sum * h
}

// Draws by Quantile of a uniform have the family's mean, sd and distribution:
// mean within 4.5 standard errors, Kolmogorov–Smirnov statistic below its
// 1e-4 point 2.23/√n (N. Smirnov 1948; conservative for discrete families).
func TestDrawsMatchFamily(t *testing.T) {
	const n = 4000
	eachSetting(t, func(t *testing.T, f *Family, args []float64) {
		r := rand.New(rand.NewPCG(11, 12))
		x := make([]float64, n)
		for i := range x {
			x[i] = f.Quantile(r.Float64()+0x1p-54, args)
		}
		if sd := f.SD(args); sd > 0 && !math.IsInf(sd, 0) && !math.IsNaN(f.Mean(args)) {
			mean := 0.0
			for _, v := range x {
				mean += v / n
			}
			if math.Abs(mean-f.Mean(args)) > 4.5*sd/math.Sqrt(n) {
				t.Errorf("%v: mean of draws %v, want %v", args, mean, f.Mean(args))
			}
		}
		sort.Float64s(x)
		worst := 0.0
		for i := 0; i < n; {
			j := i
			for j < n && x[j] == x[i] {
				j++
			}
			worst = max(worst, math.Abs(float64(j)/n-f.CDF(x[i], args)))
			if !f.Discrete && x[i] != 0 { // a hurdle steps at 0
				worst = max(worst, math.Abs(float64(i)/n-f.CDF(x[i], args)))
			}
			i = j
		}
		if worst > 2.23/math.Sqrt(n) {
			t.Errorf("%v: Kolmogorov–Smirnov distance %v", args, worst)
		}
		if !slices.IsSorted(x) || math.IsNaN(x[0]) {
			t.Errorf("%v: draws are not all numbers", args)
		}
	})
}

// Draws far out in the arguments' range come back, inside the closed support: a
// sampler may visit such places before it settles.
func TestExtremeArguments(t *testing.T) {
	sizes := []float64{1e-300, 1e-20, 1e-5, 1, 1e5, 1e20, 1e300}
	values := map[Support][]float64{
		Reals: {-1e300, -1, 0, 1, 1e300}, Positives: sizes, Unit: {0, 1e-300, 1e-10, 0.5, 1 - 1e-10, 1}, Counts: {0, 1, 1e9},
	}
	for _, f := range Families() {
		if f.Support == Levels || f.Support == Between {
			continue // K probabilities; arithmetic of two ends
		}
		var visit func(args []float64)
		visit = func(args []float64) {
			if len(args) < len(f.Arguments) {
				for _, v := range values[f.Arguments[len(args)].Support] {
					visit(append(slices.Clip(args), v))
				}
				return
			}
			for _, u := range []float64{1e-300, 1e-16, 0.3, 1 - 1e-16} {
				x := f.Quantile(u, args)
				bad := x != x
				switch f.Support {
				case Positives, NonNegatives, Counts, Above:
					bad = bad || x < 0
				case Unit, ZeroOne:
					bad = bad || x < 0 || x > 1
				case UpTo:
					bad = bad || x < 0 || x > args[f.Argument("trials")]
				}
				if bad {
					t.Errorf("%s %v: quantile at %v is %v", f.Name, args, u, x)
				}
			}
		}
		visit(nil)
	}
}

// A censored value has the distribution that it would have if it were seen.
func TestBoundsLeaveTheValueAlone(t *testing.T) {
	for _, base := range []string{"normal", "logistic", "log-normal", "Weibull", "exponential"} {
		f := FamilyByName(base)
		args := settings[base][0]
		for _, b := range Bounded(f) {
			if FamilyByName(b.Name) != b {
				t.Errorf("%s is not found by its name", b.Name)
			}
			if b.Name == "truncated normal" {
				continue
			}
			more := append(slices.Clone(args), 1)
			if b.Mean(more) != f.Mean(args) || b.SD(more) != f.SD(args) || b.Quantile(0.3, more) != f.Quantile(0.3, args) || b.CDF(1.5, more) != f.CDF(1.5, args) {
				t.Errorf("%s differs from %s in what it says of the value", b.Name, base)
			}
			if last := b.Arguments[len(b.Arguments)-1]; !last.Given || b.Natural.Args != len(b.Arguments) || b.Linked.Args != len(b.Arguments) || b.Doc == f.Doc {
				t.Errorf("%s is not complete", b.Name)
			}
		}
	}
	if Bounded(FamilyByName("gamma")) != nil {
		t.Error("a gamma has bounds")
	}
}
