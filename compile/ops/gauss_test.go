package ops

import (
	"math"
	"math/big"
	"math/rand/v2"
	"testing"
)

// TestGaussIsExact compares the collapsed normal regression, and the same by
// rows, with residuals taken in 200-bit arithmetic, on data that are hard on
// cancellation: 1e-9 relative in the value and in each derivative.
func TestGaussIsExact(t *testing.T) {
	const n = 1500
	cases := []struct {
		name      string
		offset, s float64 // x = offset + normal; sd of y around its mean
		collinear bool
		ones      bool // an intercept
	}{
		{"ordinary", 0, 1, false, true},
		{"far from zero", 1e6, 1, false, true},
		{"close fit", 3, 1e-5, false, true},
		{"far and close", 1e4, 1e-4, false, true},
		{"dependent columns", 2, 1, true, true},
		{"no intercept", 5, 0.5, false, false},
		{"no intercept, dependent", 5, 0.5, true, false},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			src := rand.New(rand.NewPCG(5, 1))
			x, z, y := normals(src, n), normals(src, n), normals(src, n)
			offset := normals(src, n)
			q := []float64{0.7, 1.3, -0.4, math.Log(c.s)}
			if !c.ones {
				q[0] = 0
			}
			for i := range y {
				x[i] += c.offset
				if c.collinear {
					z[i] = 2*x[i] - 3
				}
				y[i] = q[0] + q[1]*x[i] + q[2]*z[i] + offset[i] + c.s*y[i]
			}
			b := NewBuilder()
			rows := b.Plate("rows", n)
			mean := b.Add(b.Mul(b.Parameter(1, Scalar), b.Data(rows, x)), b.Mul(b.Data(rows, z), b.Parameter(2, Scalar)), b.Data(rows, offset))
			if c.ones {
				mean = b.Add(b.Parameter(0, Scalar), mean)
			}
			v := b.Density(testNormal, b.Data(rows, y), mean, b.Exp(b.Parameter(3, Scalar)))
			p, err := b.Program(v)
			if err != nil {
				t.Fatal(err)
			}
			for _, st := range p.gradient.stages {
				if st.plate != Scalar {
					t.Fatalf("not collapsed:\n%s", p.Dump())
				}
			}
			// not at the truth: somewhere that a sampler goes
			q[1] += c.s / 50 / (1 + c.offset)
			q[3] += 0.1
			byRow := mustProgram(b, func(p *pass) bool { return p.name != "gauss" }, v)
			want, slopes := exactNormal(q, y, x, z, offset)
			for _, p := range []*Program{p, byRow} {
				grad := make([]float64, 4)
				got := p.NewEvaluator().LogDensity(grad, q)
				if !near(got, want, 1e-9) {
					t.Errorf("value %.15g, want %.15g", got, want)
				}
				if !c.ones {
					grad[0] = slopes[0]
				}
				// A derivative is a sum of n terms of this size, in which the
				// residuals carry the rounding of what they are the difference of.
				sd := math.Exp(q[3])
				size := n * (1 + c.offset) / sd * (1 + 1e9*epsilon*c.offset/sd)
				for i := range grad {
					if !(math.Abs(grad[i]-slopes[i]) <= 1e-9*size) {
						t.Errorf("derivative %d is %.15g, want %.15g", i, grad[i], slopes[i])
					}
				}
			}
		})
	}
}

const epsilon = 2.3e-16

// exactNormal is the log density and gradient with residuals in big.Float.
func exactNormal(q, y, x, z, offset []float64) (lp float64, slopes []float64) {
	big200 := func(v float64) *big.Float { return new(big.Float).SetPrec(200).SetFloat64(v) }
	times := func(a, b *big.Float) *big.Float { return new(big.Float).SetPrec(200).Mul(a, b) }
	rss, sums := big200(0), []*big.Float{big200(0), big200(0), big200(0)}
	for i := range y {
		r := big200(y[i])
		for _, part := range []*big.Float{big200(q[0]), times(big200(q[1]), big200(x[i])), times(big200(q[2]), big200(z[i])), big200(offset[i])} {
			r.Sub(r, part)
		}
		rss.Add(rss, times(r, r))
		sums[0].Add(sums[0], r)
		sums[1].Add(sums[1], times(r, big200(x[i])))
		sums[2].Add(sums[2], times(r, big200(z[i])))
	}
	sd := math.Exp(q[3])
	ss, _ := rss.Float64()
	n := float64(len(y))
	for _, s := range sums {
		v, _ := s.Float64()
		slopes = append(slopes, v/(sd*sd))
	}
	return -n*(q[3]+logRoot2Pi) - ss/(2*sd*sd), append(slopes, ss/(sd*sd)-n)
}

// TestGaussKeepsOff: what is not a normal density of data with scalars times
// data as its mean is left as it is.
func TestGaussKeepsOff(t *testing.T) {
	const n = 900
	src := rand.New(rand.NewPCG(6, 1))
	b := NewBuilder()
	rows, groups := b.Plate("rows", n), b.Plate("groups", 9)
	index := make([]int32, n)
	for i := range index {
		index[i] = int32(i % 9)
	}
	x, y := b.Data(rows, normals(src, n)), b.Data(rows, normals(src, n))
	s, sd := b.Parameter(0, Scalar), b.Exp(b.Parameter(1, Scalar))
	varying := b.Gather(b.Parameter(2, groups), rows, index)
	for name, v := range map[string]Value{
		"varying baseline": b.Density(testNormal, y, b.Add(varying, b.Mul(s, x)), sd),
		"sd by row":        b.Density(testNormal, y, b.Mul(s, x), b.Exp(x)),
		"mean not linear":  b.Density(testNormal, y, b.Exp(b.Mul(s, x)), sd),
		"y unknown":        b.Density(testNormal, b.Mul(s, y), b.Mul(s, x), sd),
		"another family":   b.Density(testMixed, y, b.Mul(s, x), sd, s),
	} {
		p, err := b.Program(v)
		if err != nil {
			t.Fatal(err)
		}
		found := false
		for _, n := range p.gradient.g.nodes {
			found = found || n.kernel == collapsed
		}
		if found {
			t.Errorf("%s: collapsed\n%s", name, p.Dump())
		}
		compareSome(t, b, v, 11)
	}
}

func compareSome(t *testing.T, b *Builder, v Value, dim int) {
	t.Helper()
	q := ratioPoint(dim)
	compare(t, b, v, q, nil)
}
