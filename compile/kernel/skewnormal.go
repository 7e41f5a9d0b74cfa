package kernel

import "math"

// SkewNormal has arguments location, scale and skew, with density
// 2 φ(z) Φ(skew z) / scale (A. Azzalini, "A class of distributions which
// includes the normal ones", Scandinavian J. Statistics 12, 1985). Skew 0 is
// the normal.
var SkewNormal = (&standard{
	shaped: true, signed: true,
	constant: always(math.Ln2 - halfLog2Pi),
	at: func(z, a float64) (value, dz, da float64) {
		l, r := LogNormalCDF(a * z)
		return -0.5*z*z + l, a*r - z, z * r
	},
}).located("skew normal")
