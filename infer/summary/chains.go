package summary

// split cuts every chain in halves; the middle draw of an odd chain is left out.
func split(chains [][]float64) [][]float64 {
	var halves [][]float64
	for _, c := range chains {
		n := len(c) / 2
		halves = append(halves, c[:n], c[len(c)-n:])
	}
	return halves
}

// variances gives the mean variance within chains and the pooled estimate.
func variances(chains [][]float64) (within, plus float64) {
	m, n := float64(len(chains)), float64(len(chains[0]))
	grand := 0.0
	means := make([]float64, len(chains))
	for i, c := range chains {
		mu, v := meanVariance(c)
		means[i] = mu
		grand += mu / m
		within += v / m
	}
	between := 0.0
	for _, mu := range means {
		between += (mu - grand) * (mu - grand)
	}
	if m > 1 {
		between /= m - 1
	}
	return within, (n-1)/n*within + between
}

func meanVariance(x []float64) (mean, variance float64) {
	for _, v := range x {
		mean += v
	}
	mean /= float64(len(x))
	for _, v := range x {
		variance += (v - mean) * (v - mean)
	}
	return mean, variance / float64(len(x)-1)
}

func pooled(chains [][]float64) []float64 {
	var all []float64
	for _, c := range chains {
		all = append(all, c...)
	}
	return all
}

func mapped(chains [][]float64, f func(float64) float64) [][]float64 {
	out := make([][]float64, len(chains))
	for i, c := range chains {
		out[i] = make([]float64, len(c))
		for k, x := range c {
			out[i][k] = f(x)
		}
	}
	return out
}

func constant(chains [][]float64) bool {
	for _, c := range chains {
		for _, x := range c {
			if x != chains[0][0] {
				return false
			}
		}
	}
	return true
}
