package estimate

// MultipleCoherence is the share, 0 to 1, of a response's density gyy that all forces together
// explain, from explained = H1 Gxx H1^H of that response. It is no coherence with an H from another
// estimator. Bendat and Piersol, Random Data, 4th ed., 2010.
func MultipleCoherence(explained, gyy float64) float64 {
	return clamp01(explained / gyy)
}
