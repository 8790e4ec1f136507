package estimate

import (
	"math"
	"math/cmplx"
)

// HVariance is the complex variance, in the unit of |H|², of the frequency response from a force
// with inverseGxx = [Gxx^-1]_ii to a response with density gyy and multiple coherence g2:
//
//	Gyy (1 - g2) [Gxx^-1]_ii / (n_e - q)
//
// Goodman, AFFDL-TR-65-56, 1965; Bendat and Piersol, Random Data, 4th ed., 2010 (who divide by n).
// It is NaN unless ne > q.
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
