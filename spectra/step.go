package spectra

import "math"

// step finds where energies, squares of a signal, step from one level to another: the index of the
// first one of the other level, and the mean of all before it and of all from it on. It is the
// likeliest place for exponentially distributed energies, which tells a low level from a high one
// within a few samples (Basseville and Nikiforov, Detection of Abrupt Changes, 1993, chapter 2, from
// memory). A level below floor times the mean energy is taken for that.
//
// Fewer than two energies, or none above 0, make it 0, 0, 0.
func step(energies []float64, floor float64) (at int, before, after float64) {
	var total float64
	for _, e := range energies {
		total += e
	}
	n := len(energies)
	if n < 2 || !(total > 0) {
		return 0, 0, 0
	}
	floor *= total / float64(n)
	cost := func(count int, mean float64) float64 {
		level := max(mean, floor)
		return float64(count) * (math.Log(level) + mean/level)
	}
	best, sum := math.Inf(1), 0.0
	for i := 1; i < n; i++ {
		sum += energies[i-1]
		low, high := sum/float64(i), max(0, total-sum)/float64(n-i)
		if c := cost(i, low) + cost(n-i, high); c < best {
			best, at, before, after = c, i, low, high
		}
	}
	return at, before, after
}
