package kernel

// HalfNormal is the normal with mean 0 folded onto y ≥ 0; its argument is the
// scale (the sd of the normal before folding).
var HalfNormal = bell.folded("half-normal")

// HalfT is Student's t around 0 folded onto y ≥ 0; arguments scale and
// degrees of freedom.
var HalfT = student.folded("half-t")

// HalfCauchy is the Cauchy around 0 folded onto y ≥ 0; its argument is the
// scale.
var HalfCauchy = cauchy.folded("half-Cauchy")

// bell is the standard normal. Normal itself has a block of its own, for speed.
var bell = &standard{
	constant: always(-halfLog2Pi),
	at:       func(z, _ float64) (value, dz, da float64) { return -0.5 * z * z, -z, 0 },
}
