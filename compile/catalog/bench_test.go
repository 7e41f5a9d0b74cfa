package catalog

import "testing"

func BenchmarkQuantile(b *testing.B) {
	for _, f := range Families() {
		args := settings[f.Name][0]
		b.Run(f.Name, func(b *testing.B) {
			u := 0.0
			for b.Loop() {
				if u += 0.0618; u >= 1 {
					u -= 0.99
				}
				f.Quantile(u, args)
			}
		})
	}
}
