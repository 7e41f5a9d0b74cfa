package sensitivity

import "math"

// A Benchmark is a held variable taken as a yardstick: what an unmeasured cause
// as strong as it would do.
type Benchmark struct {
	Name string

	// Shares of variation that it explains beyond the rest of what is held: of
	// the exposure, and of the outcome beyond the exposure too.
	OfExposure, OfOutcome float64

	// The same as risk ratios, 1 or more: from r = √share over d = 2r/√(1 − r²)
	// (Borenstein et al. 2009, chapter 7) to exp(0.91 d).
	RatioExposure, RatioOutcome float64
	Factor                      float64 // the most that it can have moved a risk ratio (BoundingFactor)

	Times []Times // an unmeasured cause 1, 2 and 3 times as strong
}

// A Times is an unmeasured cause k times as strong as a held variable, in the
// sense of Cinelli & Hazlett (2020), section 4.4: its shares are at most these.
type Times struct {
	K                         float64
	WithExposure, WithOutcome float64
	Adjusted                  float64 // what would be left of the contrast; NaN = not known
	Impossible                bool    // no cause can be that strong: it would explain all of the exposure
}

// strengths are the multiples shown.
var strengths = [...]float64{1, 2, 3}

func benchmarksOf(in *Input) ([]Benchmark, string) {
	if len(in.Covariates) == 0 && len(in.NotCompared) > 0 {
		return nil, "what is held cannot be had as columns of the fitted rows"
	}
	if len(in.Covariates) == 0 {
		return nil, "nothing is held, so there is no measured cause to compare with"
	}
	if len(in.Exposure) != 1 {
		return nil, "the exposure has more than two levels, for which shares of variation do not compare"
	}
	r := &Result{Input: in}
	r.Robustness, _ = robustnessOf(in)
	var all []Benchmark
	for j, c := range in.Covariates {
		var rest [][]float64
		for i, o := range in.Covariates {
			if i != j {
				rest = append(rest, o.Columns...)
			}
		}
		b := Benchmark{Name: c.Name}
		b.OfExposure = share(in.Exposure[0], rest, c.Columns)
		b.OfOutcome = share(in.Outcome, append(append([][]float64(nil), rest...), in.Exposure[0]), c.Columns)
		if math.IsNaN(b.OfExposure + b.OfOutcome) {
			continue
		}
		b.RatioExposure, b.RatioOutcome = ratioOf(b.OfExposure), ratioOf(b.OfOutcome)
		b.Factor = boundingFactor(b.RatioExposure, b.RatioOutcome)
		for _, k := range strengths {
			t := timesAsStrong(k, b.OfExposure, b.OfOutcome)
			t.Adjusted = math.NaN()
			if !t.Impossible {
				t.Adjusted = r.Adjusted(t.WithExposure, t.WithOutcome)
			}
			b.Times = append(b.Times, t)
		}
		all = append(all, b)
	}
	if len(all) == 0 {
		return nil, "exposure or outcome does not vary once the rest is held"
	}
	return all, ""
}

// timesAsStrong bounds the shares of an unmeasured cause that is k times as
// strong as a variable with these shares (Cinelli & Hazlett 2020, appendix,
// equations 52 to 61; numbers from memory).
func timesAsStrong(k, ofExposure, ofOutcome float64) Times {
	t := Times{K: k, WithExposure: k * ofExposure / (1 - ofExposure)}
	between := k * ofExposure * ofExposure / ((1 - k*ofExposure) * (1 - ofExposure))
	if !(t.WithExposure < 1) || !(between >= 0 && between < 1) {
		t.Impossible = true
		t.WithExposure, t.WithOutcome = math.Min(1, t.WithExposure), 1
		return t
	}
	eta := (math.Sqrt(k) + math.Sqrt(between)) / math.Sqrt(1-between)
	t.WithOutcome = math.Min(1, eta*eta*ofOutcome/(1-ofOutcome))
	return t
}

// ratioOf takes a share of variation as a risk ratio.
func ratioOf(share float64) float64 {
	share = math.Min(share, 0.999)
	return fromMeans(2 * math.Sqrt(share/(1-share)))
}

// share is the partial R²: how much of what the given columns leave of y others
// explain. It is NaN where they leave nothing.
func share(y []float64, given, others [][]float64) float64 {
	basis := orthonormal(nil, given)
	before := left(y, basis)
	after := left(y, orthonormal(basis, others))
	if !(before > 1e-12*left(y, orthonormal(nil, nil))) {
		return math.NaN()
	}
	return math.Max(0, 1-after/before)
}

// orthonormal adds columns to an orthonormal basis, the mean being its first;
// those that follow from it add nothing.
func orthonormal(basis, columns [][]float64) [][]float64 {
	if len(basis) == 0 && len(columns) > 0 {
		one := make([]float64, len(columns[0]))
		for i := range one {
			one[i] = 1 / math.Sqrt(float64(len(one)))
		}
		basis = [][]float64{one}
	}
	basis = append([][]float64(nil), basis...)
	for _, c := range columns {
		x := append([]float64(nil), c...)
		whole := dot(x, x)
		for range 2 { // once more, for what rounding left (Kahan's "twice is enough", Parlett 1980)
			for _, e := range basis {
				s := dot(e, x)
				for i := range x {
					x[i] -= s * e[i]
				}
			}
		}
		rest := dot(x, x)
		if !(rest > 1e-12*whole) {
			continue
		}
		for i := range x {
			x[i] /= math.Sqrt(rest)
		}
		basis = append(basis, x)
	}
	return basis
}

// left is the sum of squares of y around its mean and beyond a basis.
func left(y []float64, basis [][]float64) float64 {
	m := 0.0
	for _, v := range y {
		m += v
	}
	m /= float64(len(y))
	x := make([]float64, len(y))
	for i, v := range y {
		x[i] = v - m
	}
	for _, e := range basis {
		s := dot(e, x)
		for i := range x {
			x[i] -= s * e[i]
		}
	}
	return dot(x, x)
}

func dot(a, b []float64) float64 {
	s := 0.0
	for i, v := range a {
		s += v * b[i]
	}
	return s
}
