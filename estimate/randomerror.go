package estimate

import (
	"math"
	"math/cmplx"
)

// HVariance is the complex variance, in (m/s²/N)², of the frequency response by H1 from a force with
// inverseGxx = [Gxx^-1]_ii, Hz/N², to a response with density gyy, (m/s²)²/Hz, and multiple
// coherence g2:
//
//	Gyy (1 - g2) [Gxx^-1]_ii / (n_e - q)
//
// Goodman, AFFDL-TR-65-56, 1965; Bendat and Piersol, Random Data, 4th ed., 2010 (who divide by n).
// It is NaN unless ne > q.
//
// For H2 and Hv it is an approximation: it is H1 that leaves the smallest residual, and Gxx holds the
// noise on the forces. With one force and noise of ε times its power on it, the variance of either is (1+ε)²
// times this one (from the first order of the error, and seen in simulation), however many averages
// there are. Several forces lose most where they depend on each other, as ε counts against the smallest
// principal force.
func HVariance(gyy, g2, inverseGxx float64, q int, ne float64) float64 {
	if !(ne > float64(q)) {
		return math.NaN()
	}
	return gyy * (1 - g2) * inverseGxx / (ne - float64(q))
}

// RelativeError is the relative standard deviation of |h| when h has the given complex variance:
// half of it lies along h. It is NaN when h is zero or unknown.
func RelativeError(variance float64, h complex128) float64 {
	size := cmplx.Abs(h)
	if size == 0 {
		return math.NaN()
	}
	return math.Sqrt(variance/2) / size
}
