//go:build !amd64

package kernel

// expFours has no faster way on this architecture.
func expFours(_, _ []float64) int { return 0 }
