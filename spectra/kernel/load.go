package kernel

func loadPlain(x, window []float64, from *[Lanes][]float64) {
	for l, samples := range from {
		samples = samples[:len(window)]
		for i, w := range window {
			x[i*Lanes+l] = w * samples[i]
		}
	}
}

// spread turns the n real values of all lanes at the start of x into n complex ones.
func spread(x []float64, n int) {
	for i := n - 1; i >= 0; i-- {
		copy(x[i*element:][:Lanes], x[i*Lanes:][:Lanes])
		clear(x[i*element+Lanes:][:Lanes])
	}
}
