package summary

// EBFMI is Betancourt's (2016) ratio of the energy's step to step variation
// to its spread, for one chain.
func EBFMI(energy []float64) float64 {
	mean := 0.0
	for _, e := range energy {
		mean += e / float64(len(energy))
	}
	steps, spread := 0.0, 0.0
	for i, e := range energy {
		spread += (e - mean) * (e - mean)
		if i > 0 {
			steps += (e - energy[i-1]) * (e - energy[i-1])
		}
	}
	return steps / spread
}
