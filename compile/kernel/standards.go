package kernel

import "math"

// Cauchy has arguments location (its median) and scale (half the distance
// between its quartiles). It has no expected value.
var Cauchy = cauchy.located("cauchy")

// Laplace has arguments mean and scale: its sd is √2 scale.
var Laplace = laplace.located("laplace")

// Logistic has arguments mean and scale: its sd is π/√3 scale.
var Logistic = logistic.located("logistic")

// Gumbel has arguments location (its mode) and scale: the law of the largest
// of many. Its long tail is to the right.
var Gumbel = gumbel.located("gumbel")

var cauchy = &standard{
	constant: always(-1.1447298858494001741434273513530587116473), // -log π
	at: func(z, _ float64) (value, dz, da float64) {
		if a := math.Abs(z); a > 1e150 { // z² may be beyond range
			return -2 * math.Log(a), -2 / z, 0
		}
		return -log1p(z * z), -2 * z / (1 + z*z), 0
	},
}

var laplace = &standard{
	constant: always(-math.Ln2),
	at: func(z, _ float64) (value, dz, da float64) {
		if z == 0 {
			return 0, 0, 0
		}
		return -math.Abs(z), -math.Copysign(1, z), 0
	},
}

var logistic = &standard{
	constant: always(0),
	at: func(z, _ float64) (value, dz, da float64) {
		// log of e^-|z| / (1 + e^-|z|)²
		e := math.Exp(-math.Abs(z))
		return -math.Abs(z) - 2*math.Log1p(e), math.Copysign((1-e)/(1+e), -z), 0
	},
}

var gumbel = &standard{
	constant: always(0),
	at: func(z, _ float64) (value, dz, da float64) {
		return -z - math.Exp(-z), math.Expm1(-z), 0
	},
}
