package kernel

import (
	"encoding/json"
	"math"
	"math/big"
	"math/rand/v2"
	"os"
	"testing"
)

// Oracle: mpmath, see testdata/SOURCE.md.
func TestSpecialPoints(t *testing.T) {
	text, err := os.ReadFile("testdata/special.json")
	if err != nil {
		t.Fatal(err)
	}
	var ref map[string][][]float64
	if err := json.Unmarshal(text, &ref); err != nil {
		t.Fatal(err)
	}
	check := func(what string, at []float64, got, want, tolerance float64) {
		if math.Abs(got-want) > tolerance {
			t.Errorf("%s at %v: %.17g, want %.17g (relative %.2g)", what, at, got, want, got/want-1)
		}
	}
	for _, r := range ref["gamma"] {
		l, d := LogGamma(r[0])
		check("log Γ", r[:1], l, r[1], 1.5e-15*math.Abs(r[1]))
		check("ψ", r[:1], d, r[2], 1.5e-15*max(0.5, math.Abs(r[2])))
	}
	for _, r := range ref["rising"] {
		v, s := logRising(r[0], r[1])
		// The value stands beside log y! and y log mean, which are larger.
		check("rising", r[:2], v, r[2], 2e-15*max(r[2], r[1]*math.Log(1+r[1])))
		check("slope of rising", r[:2], s, r[3], 1e-13*math.Abs(r[3])+1e-60)
	}
	for _, r := range ref["choose"] {
		check("log choose", r[:2], logChoose(r[0], r[1]), r[2], 2e-15*max(1, r[2]))
	}
	for _, r := range ref["half step"] {
		v, s := halfStep(r[0])
		check("half step", r[:1], v, r[1], 1e-14*math.Abs(r[1])+1e-15)
		check("slope of half step", r[:1], s, r[2], 1e-13*math.Abs(r[2]))
	}
}

// bigExp sums the series of exp to 140 bits, after halving x ten times.
func bigExp(x float64) *big.Float {
	const bits = 200
	v := new(big.Float).SetPrec(bits).SetFloat64(x)
	v.SetMantExp(v, -10)
	sum, term := big.NewFloat(1).SetPrec(bits), big.NewFloat(1).SetPrec(bits)
	for k := 1; k < 60; k++ {
		term.Mul(term, v)
		term.Quo(term, new(big.Float).SetInt64(int64(k)))
		sum.Add(sum, term)
	}
	for range 10 {
		sum.Mul(sum, sum)
	}
	return sum
}

// ulps returns how far got is from want, in units of got's last place.
func ulps(got float64, want *big.Float) float64 {
	diff := new(big.Float).SetPrec(200).SetFloat64(got)
	diff.Sub(diff, want)
	d, _ := diff.Float64()
	return math.Abs(d) / (math.Nextafter(math.Abs(got), math.Inf(1)) - math.Abs(got))
}

// Oracle: math/big.
func TestExpAndLogUnits(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 4))
	worstExp, worstLog := 0.0, 0.0
	for i := range 4000 {
		x := 700 * (2*r.Float64() - 1)
		if i%2 == 0 {
			x = 2 * r.NormFloat64()
		}
		worstExp = max(worstExp, ulps(Exp(x), bigExp(x)))

		u := math.Exp(700 * (2*r.Float64() - 1))
		switch i % 3 {
		case 1:
			u = 0.5 + 1.5*r.Float64()
		case 2:
			u = 1 + 0.01*r.NormFloat64()
		}
		// log u = y + log(u/exp(y)), and the quotient is 1 + tiny.
		y := Log(u)
		q := new(big.Float).SetPrec(200).SetFloat64(u)
		q.Quo(q, bigExp(y))
		q.Sub(q, big.NewFloat(1))
		want := new(big.Float).SetPrec(200).SetFloat64(y)
		worstLog = max(worstLog, ulps(y, want.Add(want, q)))
	}
	if worstExp > 0.51 || worstLog > 0.51 {
		t.Errorf("exp is off by up to %.3f units in the last place, log by %.3f; the promise is 0.51", worstExp, worstLog)
	}
	t.Logf("exp %.4f, log %.4f units in the last place", worstExp, worstLog)
}

func TestExpAndLogEdges(t *testing.T) {
	inf := math.Inf(1)
	for _, x := range []float64{0, math.Copysign(0, -1), 1, -1, 708, 709, 709.7, 709.9, -708, -709, -744, -746, 1e300, -1e300, inf, -inf, 5e-324} {
		if g, w := Exp(x), math.Exp(x); math.Abs(g-w) > 2e-16*w && g != w {
			t.Errorf("exp(%v) = %v, want %v", x, g, w)
		}
	}
	for _, x := range []float64{0, 1, 5e-324, 1e-310, 0x1p-1022, 0x1p-1021, math.MaxFloat64, inf} {
		if g, w := Log(x), math.Log(x); math.Abs(g-w) > 2e-16*math.Abs(w) && g != w {
			t.Errorf("log(%v) = %v, want %v", x, g, w)
		}
	}
	if Log(-1) == Log(-1) || Exp(math.NaN()) == Exp(math.NaN()) || Log(math.NaN()) == Log(math.NaN()) {
		t.Error("no NaN where there should be")
	}
	if Log(1) != 0 || Exp(0) != 1 {
		t.Error("log 1 or exp 0")
	}
}

// plainSoftplus is log(1 + exp(x)) by the standard library.
func plainSoftplus(x float64) float64 {
	if x > 0 {
		return x + math.Log1p(math.Exp(-x))
	}
	return math.Log1p(math.Exp(x))
}

// Oracle: math.Log1p and math.Exp, each within a unit in the last place, which
// the tolerance includes.
func TestSoftplus(t *testing.T) {
	r := rand.New(rand.NewPCG(5, 6))
	for i := range 20000 {
		x := 4 * r.NormFloat64()
		if i%4 == 0 {
			x = 600 * (2*r.Float64() - 1)
		}
		sp, sg := softplusSigmoid(x)
		if w := plainSoftplus(x); math.Abs(sp-w) > 6e-16*w {
			t.Errorf("softplus(%v) = %.17g, want %.17g", x, sp, w)
		}
		if w := Sigmoid(x); math.Abs(sg-w) > 6e-16*w {
			t.Errorf("sigmoid(%v) = %.17g, want %.17g", x, sg, w)
		}
	}
	for _, x := range []float64{0, 37, -37, 745, -745, 1e300, -1e300, math.Inf(1), math.Inf(-1)} {
		sp, sg := softplusSigmoid(x)
		if math.Abs(sp-plainSoftplus(x)) > 6e-16*sp || sg != Sigmoid(x) || sp != sp {
			t.Errorf("softplus and sigmoid at %v are %v and %v", x, sp, sg)
		}
	}
	if sp, sg := softplusSigmoid(math.NaN()); sp == sp || sg == sg {
		t.Error("no NaN at NaN")
	}
}

// The tables against math/big.
func TestTables(t *testing.T) {
	ln2, _ := new(big.Float).SetPrec(200).SetString("0.693147180559945309417232121458176568075500134360255254120680009493")
	for j, e := range expTable {
		exact := new(big.Float).SetPrec(200).Mul(ln2, big.NewFloat(float64(j)/128))
		x, _ := exact.Float64()
		rest, _ := new(big.Float).SetPrec(200).Sub(exact, new(big.Float).SetFloat64(x)).Float64()
		want := bigExp(x)
		want.Mul(want, new(big.Float).SetPrec(200).Add(big.NewFloat(1).SetPrec(200), big.NewFloat(rest)))
		got := new(big.Float).SetPrec(200).SetFloat64(math.Float64frombits(e.bits + uint64(j)<<45))
		got.Mul(got, new(big.Float).SetPrec(200).Add(big.NewFloat(1).SetPrec(200), big.NewFloat(e.tail)))
		if d, _ := got.Sub(got, want).Float64(); math.Abs(d) > 1e-31 {
			t.Errorf("expTable[%d] is off by %g", j, d)
		}
	}
	for i, l := range logTable {
		c := math.Float64frombits(firstGrid + uint64(i)<<45)
		if math.Abs(c*l.inv-1) > 0.002 || l.inv*512 != math.Floor(l.inv*512) || l.hi*0x1p42 != math.Floor(l.hi*0x1p42) {
			t.Errorf("logTable[%d]: %v is no short reciprocal of %v", i, l.inv, c)
		}
		// exp(hi) (1 + lo) inv = 1 up to lo²/2.
		got := bigExp(l.hi)
		got.Mul(got, big.NewFloat(l.inv))
		got.Mul(got, new(big.Float).SetPrec(200).Add(big.NewFloat(1).SetPrec(200), big.NewFloat(l.lo)))
		if d, _ := got.Sub(got, big.NewFloat(1)).Float64(); math.Abs(d) > 1e-26 {
			t.Errorf("logTable[%d] is off by %g", i, d)
		}
	}
}

func TestSmallDifferences(t *testing.T) {
	// Oracle: the same functions in math/big, through the series of exp.
	for _, x := range []float64{1e-12, -1e-12, 1e-5, -1e-5, 0.01, -0.01, 0.3, -0.3, 0.49, -0.49, 0.51, -0.51, 3} {
		want := bigExp(x)
		want.Sub(want, big.NewFloat(1))
		want.Sub(want, big.NewFloat(x))
		if w, _ := want.Float64(); math.Abs(expm1mx(x)-w) > 8e-16*w {
			t.Errorf("exp(x)-1-x at %v = %v, want %v", x, expm1mx(x), w)
		}
	}
	// log(1+x) - x against its own inverse: with v = log1pmx(x),
	// exp(v + x) = 1 + x, so v is right where exp(v) exp(x) is.
	for _, x := range []float64{1e-9, -1e-9, 1e-4, -1e-4, 0.01, -0.01, 0.3, -0.3, 0.49, -0.49, 0.6, 0.69, 0.71} {
		v := log1pmx(x)
		q := new(big.Float).SetPrec(200).Add(big.NewFloat(1).SetPrec(200), big.NewFloat(x))
		q.Quo(q, bigExp(x))
		q.Quo(q, bigExp(v))
		q.Sub(q, big.NewFloat(1))
		if d, _ := q.Float64(); math.Abs(d) > 6e-16*math.Abs(v) {
			t.Errorf("log(1+x)-x at %v = %v, off by %g", x, v, d)
		}
	}
}

func BenchmarkElementwise(b *testing.B) {
	r := rand.New(rand.NewPCG(7, 8))
	x, u, out, out2 := make([]float64, BlockRows), make([]float64, BlockRows), make([]float64, BlockRows), make([]float64, BlockRows)
	for i := range x {
		x[i] = 2 * r.NormFloat64()
		u[i] = math.Exp(x[i])
	}
	for _, c := range []struct {
		name string
		f    func()
	}{
		{"exp", func() { ExpTo(out, x) }},
		{"math.Exp", func() {
			for i := range x {
				out[i] = math.Exp(x[i])
			}
		}},
		{"log", func() { LogTo(out, u) }},
		{"math.Log", func() {
			for i := range x {
				out[i] = math.Log(u[i])
			}
		}},
		{"softplus", func() { SoftplusTo(out, out2, x) }},
		{"math softplus", func() {
			for i := range x {
				out[i], out2[i] = plainSoftplus(x[i]), Sigmoid(x[i])
			}
		}},
		{"log gamma", func() {
			for i := range x {
				out[i], out2[i] = LogGamma(u[i])
			}
		}},
		{"math.Lgamma", func() {
			for i := range x {
				out[i], _ = math.Lgamma(u[i])
			}
		}},
	} {
		b.Run(c.name, func(b *testing.B) {
			for b.Loop() {
				c.f()
			}
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/BlockRows, "ns/element")
		})
	}
}
