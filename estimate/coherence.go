package estimate

// MultipleCoherence is the share, 0 to 1, of a response's density gyy that all forces together
// explain, from explained = H1 Gxx H1^H of that response. It is no coherence with an H from another
// estimator. NaN when gyy is 0. Bendat and Piersol, Random Data, 4th ed., 2010.
func MultipleCoherence(explained, gyy float64) float64 {
	return clamp01(explained / gyy)
}

// PartialCoherence is the share, 0 to 1, of what is left of a response that is left of force i when
// the other forces are removed from both, from the frequency response h1 by H1 and as in HVariance:
//
//	|H1|² / (|H1|² + Gyy (1 - g2) [Gxx^-1]_ii)
//
// With one force it is the multiple coherence. It is NaN where nothing is left of the response, 0/0.
//
// The same as (g2 - g2_without_i) / (1 - g2_without_i), of which this is free of cancellation: 1 - g2 is
// what all forces leave, |H1|²/[Gxx^-1]_ii what force i takes off (Bendat and Piersol, Random Data, 4th ed.,
// 2010, conditioned spectra; the form in H1 is the usual one between a regression coefficient and its
// partial correlation).
func PartialCoherence(h1 complex128, gyy, g2, inverseGxx float64) float64 {
	power := abs2(h1)
	return power / (power + gyy*(1-g2)*inverseGxx)
}
