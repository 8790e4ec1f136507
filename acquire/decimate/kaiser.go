package decimate

import "math"

// kaiser is the Kaiser window at x, -1 <= x <= 1, 1 at its centre x = 0.
//
// I0(beta sqrt(1 - x²)) / I0(beta), as in Oppenheim and Schafer, Discrete-Time Signal Processing,
// 3rd ed., 2010, section 7.5.3.
func kaiser(x, beta float64) float64 {
	return besselI0(beta*math.Sqrt(1-x*x)) / besselI0(beta)
}

// kaiserBeta is the window's shape for an attenuation of more than 50 dB: 0.1102 (A - 8.7), from the
// same section, after Kaiser 1974.
func kaiserBeta(attenuationDB float64) float64 { return 0.1102 * (attenuationDB - 8.7) }

// besselI0 is the modified Bessel function of the first kind and order 0, by its power series, the
// sum of ((x/2)^j / j!)²: Abramowitz and Stegun, Handbook of Mathematical Functions, 1964, 9.6.12.
// All terms are positive, so nothing cancels.
func besselI0(x float64) float64 {
	sum, term := 1.0, 1.0
	for j := 1.0; term > sum*1e-17; j++ {
		term *= (x / 2 / j) * (x / 2 / j)
		sum += term
	}
	return sum
}
