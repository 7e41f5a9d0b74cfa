package kernel

import (
	"math"
	"math/rand/v2"
	"testing"
)

// BenchmarkBlock times the kernels of the common families in their usual shape:
// y and the predictor are columns, the other arguments one number.
func BenchmarkBlock(b *testing.B) {
	r := rand.New(rand.NewPCG(1, 2))
	for _, c := range []struct {
		k    *Density
		y    func(eta float64) float64
		rest []float64
	}{
		{Normal, func(e float64) float64 { return e + r.NormFloat64() }, []float64{1}},
		{StudentT, func(e float64) float64 { return e + r.NormFloat64() }, []float64{1, 5}},
		{LogNormalLog, func(e float64) float64 { return math.Exp(e + r.NormFloat64()) }, []float64{1}},
		{GammaLog, func(e float64) float64 { return math.Exp(e + r.NormFloat64()) }, []float64{2}},
		{ExponentialLog, func(e float64) float64 { return math.Exp(e) * r.ExpFloat64() }, nil},
		{BetaLogit, func(e float64) float64 { return Sigmoid(e + r.NormFloat64()) }, []float64{8}},
		{BernoulliLogit, func(e float64) float64 { return float64(r.IntN(2)) }, nil},
		{BinomialLogit, func(e float64) float64 { return float64(r.IntN(11)) }, []float64{10}},
		{PoissonLog, func(e float64) float64 { return math.Floor(8 * r.Float64()) }, nil},
		{NegativeBinomialLog, func(e float64) float64 { return math.Floor(30 * r.ExpFloat64()) }, []float64{1.5}},
		{OrderedLogit, func(e float64) float64 { return float64(r.IntN(4)) }, []float64{-1, 0, 1}},
		{CategoricalSoftmax, func(e float64) float64 { return float64(r.IntN(4)) }, []float64{-1, 0, 1}},
	} {
		eta, y := make([]float64, BlockRows), make([]float64, BlockRows)
		for i := range y {
			eta[i] = 1 + r.NormFloat64()
			y[i] = c.y(eta[i])
		}
		args := append([][]float64{eta}, columns(c.rest)...)
		d := append([][]float64{make([]float64, BlockRows)}, columns(make([]float64, len(c.rest)))...)
		var aux []float64
		if c.k.Prepare != nil {
			aux = c.k.Prepare(y, args)
		}
		b.Run(c.k.Name, func(b *testing.B) {
			sum := 0.0
			for b.Loop() {
				sum += c.k.Block(BlockRows, y, args, nil, d, aux, testScratch)
			}
			if math.IsNaN(sum) {
				b.Fatal("NaN")
			}
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/BlockRows, "ns/row")
		})
	}
}
