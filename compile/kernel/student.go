package kernel

import "math"

// StudentT has arguments mean (location), scale and degrees of freedom. With
// the identity link it is its own link-scale kernel.
var StudentT = student.located("student t")

var student = &standard{
	shaped: true,
	constant: func(nu float64) (value, slope float64) {
		half, dhalf := halfStep(nu / 2)
		return half - halfLog2Pi, 0.5 * dhalf
	},
	at: studentRow,
}

func studentRow(z, nu float64) (value, dz, dnu float64) {
	w := z / nu * z
	if math.IsInf(w, 1) {
		// z² is beyond range, log(1 + z²/ν) is not.
		l := 2*math.Log(math.Abs(z)) - math.Log(nu)
		return -0.5 * (nu + 1) * l, -(nu + 1) / z, 0.5 * (1 + 1/nu - l)
	}
	l, p := log1p(w), w/(1+w)
	less := p - l
	if w < 1e-3 { // where p and l agree in too many digits
		less = ratioMinusLog(w)
	}
	return -0.5 * (nu + 1) * l, -(nu + 1) * z / (nu * (1 + w)), 0.5 * (less + p/nu)
}
