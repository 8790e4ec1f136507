package rig

import "math"

const (
	// rateMargin is how many times the band of interest the analysis rate is at least: a decimator
	// needs room for its slope between the band and half the rate. Common practice, no source.
	rateMargin = 2.56

	maxDecimation = 256

	// tolerance is relative. It lets through the rounding of decimal fractions, so that 0.1 Hz
	// divides 2560 Hz without a rest.
	tolerance = 1e-9
)

// atLeast is a >= b for b >= 0 within tolerance.
func atLeast(a, b float64) bool { return a >= b*(1-tolerance) }

// decimation is the largest d of 1 to 256 for which rateHz / d is enough for a band up to maxHz
// and, unless period is 0, that divides period. It is 0 when rateHz is too low.
func decimation(rateHz, maxHz float64, period int) int {
	for d := maxDecimation; d >= 1; d-- {
		if period%d == 0 && atLeast(rateHz/float64(d), rateMargin*maxHz) {
			return d
		}
	}
	return 0
}

// smooth is the smallest integer 2^a 3^b 5^c that is at least x within tolerance: a length of
// which a Fourier transform is fast. x is at most maxBlock.
func smooth(x float64) int {
	best := math.MaxInt
	for five := 1; five < best; five *= 5 {
		for n := five; n < best; n *= 3 {
			m := n
			for !atLeast(float64(m), x) {
				m *= 2
			}
			best = min(best, m)
		}
	}
	return best
}

// highestLine is the largest k for which k * spacingHz is at most maxHz within tolerance.
func highestLine(spacingHz, maxHz float64) int {
	top := maxHz * (1 + tolerance)
	k := int(top / spacingHz)
	if float64(k+1)*spacingHz <= top { // the quotient was rounded down over an integer
		k++
	}
	return k
}
