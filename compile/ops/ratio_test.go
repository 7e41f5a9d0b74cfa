package ops

import (
	"fmt"
	"math"
	"math/rand/v2"
	"runtime"
	"slices"
	"testing"

	"gonum.org/v1/gonum/mathext"

	"arrowroot/compile/kernel"
)

// Four models that a careful person would write by hand as one loop over rows
// with math.*; the benchmark gives our time as a ratio to theirs, taken in
// turns in one run:
//
//	m1 normal linear regression, 5 slopes
//	m2 logistic, 500 groups with baseline and slope that vary, non-centred
//	m3 Poisson, log link, offset, 2 slopes
//	m4 negative binomial, log link, 2 slopes
//
//	go test -run '^$' -bench Ratio ./compile/ops
type ratioModel struct {
	name  string
	most  float64 // the ratio that is asked for
	build func(n int) (p *Program, byHand func(grad, q []float64) float64)
}

var ratioModels = []ratioModel{
	{name: "m1", most: 1.25, build: func(n int) (*Program, func(grad, q []float64) float64) { return ratioM1(n, nil) }},
	{name: "m1 by rows", most: 1.25, build: func(n int) (*Program, func(grad, q []float64) float64) {
		return ratioM1(n, func(p *pass) bool { return p.name != "gauss" })
	}},
	{name: "m2", most: 0.8, build: ratioM2},
	{name: "m3", most: 0.6, build: ratioM3},
	{name: "m4", most: 0.5, build: ratioM4},
}

func ratioRandom(n int) *rand.Rand { return rand.New(rand.NewPCG(uint64(n), 11)) }

func normals(src *rand.Rand, n int) []float64 {
	x := make([]float64, n)
	for i := range x {
		x[i] = src.NormFloat64()
	}
	return x
}

// Priors in all models: normal(0, 1) for coefficients and scores, and
// half-normal(1) for spreads, which are sampled as logarithms.

func stdNormal(b *Builder, v Value) Value {
	return b.Density(kernel.Normal, v, b.Const(0), b.Const(1))
}

func halfNormal(b *Builder, logSD, sd Value) Value {
	return b.Add(b.Density(kernel.HalfNormal, sd, b.Const(1)), logSD)
}

const logRoot2Pi = 0.91893853320467274178 // log √(2π)

func handNormal(x float64, slope *float64) float64 {
	*slope -= x
	return -x*x/2 - logRoot2Pi
}

func handHalfNormal(logSD, sd float64, slope *float64) float64 {
	*slope += 1 - sd*sd
	return math.Ln2 - sd*sd/2 - logRoot2Pi + logSD
}

func mustProgram(b *Builder, keep func(*pass) bool, v Value) *Program {
	p, err := b.program(keep, v)
	if err != nil {
		panic(err)
	}
	return p
}

func ratioM1(n int, keep func(*pass) bool) (*Program, func(grad, q []float64) float64) {
	src := ratioRandom(n)
	var x [5][]float64
	y := normals(src, n)
	for j := range x {
		x[j] = normals(src, n)
		for i := range y {
			y[i] += 0.3 * float64(j) * x[j][i]
		}
	}
	b := NewBuilder()
	rows := b.Plate("rows", n)
	mean := b.Parameter(0, Scalar)
	logSD := b.Parameter(6, Scalar)
	sd := b.Exp(logSD)
	total := b.Add(stdNormal(b, mean), halfNormal(b, logSD, sd))
	for j := range x {
		slope := b.Parameter(1+j, Scalar)
		mean = b.Add(mean, b.Mul(slope, b.Data(rows, x[j])))
		total = b.Add(total, stdNormal(b, slope))
	}
	p := mustProgram(b, keep, b.Add(total, b.Density(kernel.Normal, b.Data(rows, y), mean, sd)))

	x0, x1, x2, x3, x4 := x[0], x[1], x[2], x[3], x[4]
	return p, func(grad, q []float64) float64 {
		clear(grad)
		a, b0, b1, b2, b3, b4 := q[0], q[1], q[2], q[3], q[4], q[5]
		sd := math.Exp(q[6])
		var ss, g, g0, g1, g2, g3, g4 float64
		for i, v := range y {
			r := v - (a + b0*x0[i] + b1*x1[i] + b2*x2[i] + b3*x3[i] + b4*x4[i])
			ss += r * r
			g += r
			g0 += r * x0[i]
			g1 += r * x1[i]
			g2 += r * x2[i]
			g3 += r * x3[i]
			g4 += r * x4[i]
		}
		s2 := sd * sd
		for j, v := range [...]float64{g, g0, g1, g2, g3, g4} {
			grad[j] = v / s2
		}
		grad[6] = ss/s2 - float64(len(y))
		lp := -ss/(2*s2) - float64(len(y))*(q[6]+logRoot2Pi)
		for j := range 6 {
			lp += handNormal(q[j], &grad[j])
		}
		return lp + handHalfNormal(q[6], sd, &grad[6])
	}
}

const ratioGroups = 500

func ratioM2(n int) (*Program, func(grad, q []float64) float64) {
	src := ratioRandom(n)
	x, y, group := normals(src, n), make([]float64, n), make([]int32, n)
	for i := range y {
		group[i] = int32(src.IntN(ratioGroups))
		if src.Float64() < 1/(1+math.Exp(-x[i]/2)) {
			y[i] = 1
		}
	}
	const g = ratioGroups
	b := NewBuilder()
	rows, groups := b.Plate("rows", n), b.Plate("groups", g)
	alpha, beta, logA, logB := b.Parameter(0, Scalar), b.Parameter(1, Scalar), b.Parameter(2, Scalar), b.Parameter(3, Scalar)
	sdA, sdB := b.Exp(logA), b.Exp(logB)
	zA, zB := b.Parameter(4, groups), b.Parameter(4+g, groups)
	baseline := b.Gather(b.Add(alpha, b.Mul(sdA, zA)), rows, group)
	slope := b.Gather(b.Add(beta, b.Mul(sdB, zB)), rows, group)
	eta := b.Add(baseline, b.Mul(slope, b.Data(rows, x)))
	p := mustProgram(b, nil, b.Add(b.Density(kernel.BernoulliLogit, b.Data(rows, y), eta),
		stdNormal(b, alpha), stdNormal(b, beta), halfNormal(b, logA, sdA), halfNormal(b, logB, sdB), stdNormal(b, zA), stdNormal(b, zB)))

	return p, func(grad, q []float64) float64 {
		clear(grad)
		sdA, sdB := math.Exp(q[2]), math.Exp(q[3])
		zA, zB, gA, gB := q[4:4+g], q[4+g:], grad[4:4+g], grad[4+g:]
		lp := 0.0
		for i, k := range group {
			eta := q[0] + sdA*zA[k] + (q[1]+sdB*zB[k])*x[i]
			// log(1+exp(eta)) and its derivative from one exponential
			e := math.Exp(-math.Abs(eta))
			mean := 1 / (1 + e)
			if eta < 0 {
				mean = e / (1 + e)
			}
			lp += y[i]*eta - math.Max(eta, 0) - math.Log1p(e)
			d := y[i] - mean
			gA[k] += d
			gB[k] += d * x[i]
		}
		for k := range gA {
			grad[0] += gA[k]
			grad[1] += gB[k]
			grad[2] += gA[k] * zA[k] * sdA
			grad[3] += gB[k] * zB[k] * sdB
			gA[k] *= sdA
			gB[k] *= sdB
			lp += handNormal(zA[k], &gA[k]) + handNormal(zB[k], &gB[k])
		}
		lp += handNormal(q[0], &grad[0]) + handNormal(q[1], &grad[1])
		return lp + handHalfNormal(q[2], sdA, &grad[2]) + handHalfNormal(q[3], sdB, &grad[3])
	}
}

// poissonDraw by multiplication of uniforms; Knuth, Seminumerical Algorithms, 3.4.1.
func poissonDraw(src *rand.Rand, mean float64) float64 {
	k, p := 0.0, src.Float64()
	for limit := math.Exp(-mean); p > limit; k++ {
		p *= src.Float64()
	}
	return k
}

func ratioM3(n int) (*Program, func(grad, q []float64) float64) {
	src := ratioRandom(n)
	x, z, offset, y := normals(src, n), normals(src, n), normals(src, n), make([]float64, n)
	constant := 0.0
	for i := range y {
		y[i] = poissonDraw(src, math.Exp(0.5+0.3*x[i]+0.3*offset[i]))
		lg, _ := math.Lgamma(y[i] + 1)
		constant -= lg
	}
	b := NewBuilder()
	rows := b.Plate("rows", n)
	a, b1, b2 := b.Parameter(0, Scalar), b.Parameter(1, Scalar), b.Parameter(2, Scalar)
	eta := b.Add(a, b.Mul(b1, b.Data(rows, x)), b.Mul(b2, b.Data(rows, z)), b.Data(rows, offset))
	p := mustProgram(b, nil, b.Add(b.Density(kernel.PoissonLog, b.Data(rows, y), eta), stdNormal(b, a), stdNormal(b, b1), stdNormal(b, b2)))

	return p, func(grad, q []float64) float64 {
		clear(grad)
		lp := constant
		var g0, g1, g2 float64
		for i, v := range y {
			eta := q[0] + q[1]*x[i] + q[2]*z[i] + offset[i]
			mean := math.Exp(eta)
			lp += v*eta - mean
			d := v - mean
			g0 += d
			g1 += d * x[i]
			g2 += d * z[i]
		}
		grad[0], grad[1], grad[2] = g0, g1, g2
		return lp + handNormal(q[0], &grad[0]) + handNormal(q[1], &grad[1]) + handNormal(q[2], &grad[2])
	}
}

func ratioM4(n int) (*Program, func(grad, q []float64) float64) {
	src := ratioRandom(n)
	x, z, y := normals(src, n), normals(src, n), make([]float64, n)
	constant := 0.0
	for i := range y {
		y[i] = poissonDraw(src, math.Exp(1+0.3*x[i]+0.5*src.NormFloat64()))
		lg, _ := math.Lgamma(y[i] + 1)
		constant -= lg
	}
	b := NewBuilder()
	rows := b.Plate("rows", n)
	a, b1, b2, logK := b.Parameter(0, Scalar), b.Parameter(1, Scalar), b.Parameter(2, Scalar), b.Parameter(3, Scalar)
	k := b.Exp(logK)
	eta := b.Add(a, b.Mul(b1, b.Data(rows, x)), b.Mul(b2, b.Data(rows, z)))
	p := mustProgram(b, nil, b.Add(b.Density(kernel.NegativeBinomialLog, b.Data(rows, y), eta, k),
		stdNormal(b, a), stdNormal(b, b1), stdNormal(b, b2), halfNormal(b, logK, k)))

	return p, func(grad, q []float64) float64 {
		clear(grad)
		k := math.Exp(q[3])
		lgK, _ := math.Lgamma(k)
		each := k*q[3] - lgK
		dEach := q[3] + 1 - mathext.Digamma(k)
		lp := constant
		var g0, g1, g2, gK float64
		for i, v := range y {
			eta := q[0] + q[1]*x[i] + q[2]*z[i]
			mean := math.Exp(eta)
			logSum := math.Log(mean + k)
			lg, _ := math.Lgamma(v + k)
			lp += lg + each + v*eta - (v+k)*logSum
			share := (v + k) / (mean + k)
			d := v - mean*share
			g0 += d
			g1 += d * x[i]
			g2 += d * z[i]
			gK += mathext.Digamma(v+k) + dEach - logSum - share
		}
		grad[0], grad[1], grad[2], grad[3] = g0, g1, g2, gK*k
		lp += handNormal(q[0], &grad[0]) + handNormal(q[1], &grad[1]) + handNormal(q[2], &grad[2])
		return lp + handHalfNormal(q[3], k, &grad[3])
	}
}

// ratioPoint is a position that no model is at odds with.
func ratioPoint(dim int) []float64 {
	q := make([]float64, dim)
	for i := range q {
		q[i] = 0.3 * math.Sin(float64(i+1))
	}
	return q
}

// TestRatioModelsAgree: what the benchmark compares is the same function, to
// 1e-9 in the value and 1e-7 in the gradient, and ours allocates nothing.
func TestRatioModelsAgree(t *testing.T) {
	for _, m := range ratioModels {
		for _, n := range []int{1000, 1700} {
			p, byHand := m.build(n)
			q := ratioPoint(p.Dim())
			ours, theirs := make([]float64, len(q)), make([]float64, len(q))
			e := p.NewEvaluator()
			got, want := e.LogDensity(ours, q), byHand(theirs, q)
			if !near(got, want, 1e-9) {
				t.Errorf("%s: value %.15g, by hand %.15g", m.name, got, want)
			}
			for i := range q {
				if !near(ours[i], theirs[i], 1e-7) {
					t.Errorf("%s: derivative %d is %.15g, by hand %.15g", m.name, i, ours[i], theirs[i])
				}
			}
			if a := testing.AllocsPerRun(3, func() { e.LogDensity(ours, q) }); a != 0 {
				t.Errorf("%s: %v allocations", m.name, a)
			}
		}
	}
}

// BenchmarkRatio reports the median over alternations of our time divided by
// that of the loop written by hand ("ratio"), and ours per row ("ns/row").
func BenchmarkRatio(b *testing.B) {
	for _, m := range ratioModels {
		for _, n := range []int{1000, 100_000} {
			b.Run(fmt.Sprintf("%s/n=%d", m.name, n), func(b *testing.B) {
				p, byHand := m.build(n)
				e := p.NewEvaluator()
				q := ratioPoint(p.Dim())
				grad := make([]float64, len(q))
				ours := func() { e.LogDensity(grad, q) }
				theirs := func() { byHand(grad, q) }
				var ratios, perRow []float64
				runtime.LockOSThread()
				defer runtime.UnlockOSThread()
				for b.Loop() {
					a, h := timed(ours), timed(theirs)
					ratios = append(ratios, a/h)
					perRow = append(perRow, a*1e9/float64(n))
				}
				b.ReportMetric(median(ratios), "ratio")
				b.ReportMetric(m.most, "most")
				b.ReportMetric(median(perRow), "ns/row")
				b.ReportMetric(0, "ns/op")
			})
		}
	}
}

// timed gives the seconds that one call of f takes, from calls that together
// take many ticks of the clock: some kernels count a thread's time in steps of
// a millisecond or more.
func timed(f func()) float64 {
	f() // into the cache
	for calls := 1; ; calls *= 4 {
		start := ownSeconds()
		for range calls {
			f()
		}
		if took := ownSeconds() - start; took > 4e-2 {
			return took / float64(calls)
		}
	}
}

func median(v []float64) float64 {
	v = slices.Clone(v)
	slices.Sort(v)
	return v[len(v)/2]
}
