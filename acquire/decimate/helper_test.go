package decimate

// noise is n samples, evenly spread over -1 to 1, that testdata/reference.py makes too: the upper 24
// bits of a linear congruential sequence (multiplier and increment by Knuth, The Art of Computer
// Programming, vol. 2, 3rd ed., 1997, 3.3.4, his MMIX), so that every sample is exact.
func noise(seed uint64, n int) []float64 {
	x := make([]float64, n)
	for i := range x {
		seed = seed*6364136223846793005 + 1442695040888963407
		x[i] = float64(seed>>40)/(1<<23) - 1
	}
	return x
}
