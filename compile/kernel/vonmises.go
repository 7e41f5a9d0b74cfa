package kernel

import "math"

// VonMises has arguments direction and concentration; y and the direction are
// angles in radians. Its density has period 2π in y and is one over any full
// turn (K. V. Mardia & P. E. Jupp, Directional Statistics, Wiley 2000, 3.5.4).
var VonMises = &Density{Name: "von mises", Args: 2, Block: vonMisesBlock}

func vonMisesBlock(n int, y []float64, args [][]float64, dy []float64, dargs [][]float64, _, _ []float64) float64 {
	direction, concentration := args[0], args[1]
	ddirection, dconcentration := wanted(dargs, 0), wanted(dargs, 1)
	iy, id, ik := mask(y), mask(direction), mask(concentration)
	last, con, dcon := math.NaN(), 0.0, 0.0
	sum := 0.0
	for i := range n {
		if k := concentration[i&ik]; k != last {
			if k < 0 {
				return math.Inf(-1)
			}
			last = k
			con, dcon = logBesselI0(k)
		}
		angle := y[i&iy] - direction[i&id]
		// cos - 1 without cancellation: what remains of κ cos - log I₀ is small.
		s := math.Sin(0.5 * angle)
		sum += -2*last*s*s - con - 2*halfLog2Pi
		slope := -last * math.Sin(angle)
		if dy != nil {
			dy[i&iy] += slope
		}
		if ddirection != nil {
			ddirection[i&id] -= slope
		}
		if dconcentration != nil {
			dconcentration[i&ik] += -2*s*s - dcon
		}
	}
	return sum
}

// logBesselI0 returns log[e^-x I₀(x)], x ≥ 0, and its derivative
// I₁(x)/I₀(x) - 1, by the power series (NIST DLMF 10.25.2) or, far out, by
// Hankel's expansion (10.40.1).
func logBesselI0(x float64) (value, slope float64) {
	if x < 30 {
		q := 0.25 * x * x
		term, i0, i1 := 1.0, 1.0, 1.0 // I₁ without its factor x/2
		for k := 1.0; term > 0x1p-60*i0; k++ {
			term *= q / (k * k)
			i0 += term
			i1 += term / (k + 1)
		}
		return math.Log(i0) - x, 0.5*x*i1/i0 - 1
	}
	// With aₖ(ν) of 10.17.1, Iν ∼ eˣ/√(2πx) Σ (-1)ᵏ aₖ(ν)/xᵏ; the slope takes
	// the difference of both sums, term by term.
	a, b := 1.0, 1.0
	s0, diff := 1.0, 0.0
	for k := 1.0; k < 40; k++ {
		odd := (2*k - 1) * (2*k - 1)
		a *= odd / (8 * k * x)
		b *= (odd - 4) / (8 * k * x)
		s0 += a
		diff += b - a
		if math.Abs(a) < 0x1p-60 {
			break
		}
	}
	return math.Log(s0) - 0.5*math.Log(x) - halfLog2Pi, diff / s0
}
