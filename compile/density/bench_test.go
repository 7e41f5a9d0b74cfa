package density

import (
	"fmt"
	"math/rand/v2"
	"strings"
	"testing"

	"arrowroot/compile/catalog"
	"arrowroot/compile/model"
	"arrowroot/compile/study"
)

// BenchmarkGradient times one gradient of four models as a user would get
// them: m1 normal with 5 slopes, m2 logistic with a baseline and a slope that
// vary over 500 groups, m3 Poisson with an offset, m4 negative binomial.
// compile/ops compares the same models, written down by hand there, with plain
// loops; ns/row here must not be far above ns/row there.
func BenchmarkGradient(b *testing.B) {
	for _, name := range []string{"m1", "m2", "m3", "m4"} {
		for _, n := range []int{1000, 100000} {
			b.Run(fmt.Sprintf("%s/%d", name, n), func(b *testing.B) {
				d, err := Lower(benchModel(b, name, n))
				if err != nil || len(d.Blocks) != 1 {
					b.Fatalf("%d blocks, %v", len(d.Blocks), err)
				}
				e := d.Blocks[0].Evaluator()
				q, grad := make([]float64, e.Dim()), make([]float64, e.Dim())
				rng := rand.New(rand.NewPCG(1, 1))
				for i := range q {
					q[i] = 0.1 * rng.NormFloat64()
				}
				for b.Loop() {
					q[0] += 1e-9
					e.LogDensity(grad, q)
				}
				b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/float64(n), "ns/row")
			})
		}
	}
}

func benchModel(b testing.TB, name string, n int) *model.Model {
	s := newSketch(b, n)
	rng := rand.New(rand.NewPCG(5, 6))
	column := func(f func() float64) []float64 {
		out := make([]float64, n)
		for i := range out {
			out[i] = f()
		}
		return out
	}
	count := func() float64 { return float64(rng.IntN(8)) }
	s.parameter("alpha_y", catalog.Reals, "normal", "0", "2")
	terms := []string{"alpha_y"}
	slopes := map[string]int{"m1": 5, "m2": 1, "m3": 2, "m4": 2}[name]
	for j := range slopes {
		x := fmt.Sprintf("x%d", j)
		s.variable(x, study.Real, -1, column(rng.NormFloat64)...)
		s.parameter("beta_"+x, catalog.Reals, "normal", "0", "1")
		terms = append(terms, fmt.Sprintf("beta_%s * (%s - 0.25)", x, x))
	}
	predictor := func() []string { return []string{strings.Join(terms, " + ")} }
	switch name {
	case "m1":
		s.variable("y", study.Real, -1, column(rng.NormFloat64)...)
		s.parameter("sigma_y", catalog.Positives, "half-normal", "1")
		s.law("y", "normal", predictor(), "sigma_y")
	case "m2":
		of, levels := make([]int32, n), make([]string, 500)
		for i := range of {
			of[i] = int32(i * 500 / n)
		}
		group := s.plate("group", of, levels...)
		for _, p := range []string{"alpha_y", "beta_x0"} {
			s.parameter("tau_"+p, catalog.Positives, "half-normal", "1")
			s.byPlate(p+"_group", group, p, "tau_"+p, false)
		}
		s.variable("y", study.Binary, -1, column(func() float64 { return float64(rng.IntN(2)) })...)
		s.law("y", "Bernoulli", []string{"alpha_y_group by group + (beta_x0_group by group) * (x0 - 0.25)"})
	case "m3":
		s.variable("hours", study.Positive, -1, column(func() float64 { return 1 + rng.Float64() })...)
		terms = append(terms, "log hours")
		s.variable("y", study.Count, -1, column(count)...)
		s.law("y", "Poisson", predictor())
	case "m4":
		s.variable("y", study.Count, -1, column(count)...)
		s.parameter("k_y", catalog.Positives, "half-normal", "1").Prior.On = model.InverseRoot
		s.law("y", "negative binomial", predictor(), "k_y")
	}
	return s.m
}
