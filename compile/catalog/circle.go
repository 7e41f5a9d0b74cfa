package catalog

import (
	"math"

	"gonum.org/v1/gonum/mathext"

	"arrowroot/compile/kernel"
)

// Von Mises: arguments direction and concentration. Values lie within half a
// turn of the direction.

// turned returns the probability of an angle between 0 and t from the
// direction, 0 ≤ t ≤ π.
func turned(t, concentration float64) float64 {
	// Beyond ten standard deviations of a normal nothing is left.
	t = min(t, 10/math.Sqrt(concentration))
	scale := vonMisesDensity(0, concentration)
	return scale * fine.over(0, t, func(x float64) float64 {
		s := math.Sin(0.5 * x)
		return math.Exp(-2 * concentration * s * s)
	})
}

func vonMisesDensity(x, concentration float64) float64 {
	y, direction, k := [1]float64{x}, [1]float64{}, [1]float64{concentration}
	args := [2][]float64{direction[:], k[:]}
	return math.Exp(kernel.VonMises.Block(1, y[:], args[:], nil, nil, nil, nil))
}

func vonMisesCDF(x float64, a []float64) float64 {
	t := x - a[0]
	switch {
	case t <= -math.Pi:
		return 0
	case t >= math.Pi:
		return 1
	case t < 0:
		return max(0, 0.5-turned(-t, a[1]))
	}
	return min(1, 0.5+turned(t, a[1]))
}

func vonMisesQuantile(u float64, a []float64) float64 {
	spread := 1 / math.Sqrt(a[1]+0.25)
	end := math.Pi / spread
	z := inverted(u, min(max(mathext.NormalQuantile(u), -end), end), func(z float64) float64 { return vonMisesCDF(z*spread, []float64{0, a[1]}) },
		func(z float64) float64 { return spread * vonMisesDensity(z*spread, a[1]) })
	return a[0] + min(max(z*spread, -math.Pi), math.Pi)
}

func vonMisesSD(a []float64) float64 {
	end := min(math.Pi, 12/math.Sqrt(a[1]))
	square := func(x float64) float64 { return x * x * vonMisesDensity(x, a[1]) }
	return math.Sqrt(2 * (fine.over(0, 0.5*end, square) + fine.over(0.5*end, end, square)))
}
