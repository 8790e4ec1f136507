package decimate

import "math"

// passEdge is the end of the passband in units of the analysis rate, which is never below 2.56 times
// the top of the band of interest. The worst case is taken always, so that the filter depends on d
// alone.
const passEdge = 1 / 2.56

// stopDB is how far a stage is designed to suppress. The requirement is 100 dB; the rest makes up
// for the sum of all bands that fold onto one frequency and for design formulas that are fits.
const stopDB = 107

// A lowpass is one half of a symmetric FIR filter: the coefficients from the centre outwards.
type lowpass []float64

// half is the number of coefficients on either side of the centre.
func (h lowpass) half() int { return len(h) - 1 }

// newLowpass designs the stage that keeps every k-th frame, k >= 2, when later stages keep every
// rest-th of those. Its gain at zero frequency is 1.
//
// It is a sinc that cuts off at half the stage's output rate, times a Kaiser window: the passband
// edge and the first frequency that folds onto it lie symmetrically about the cutoff, and every k-th
// coefficient but the centre is exactly zero.
func newLowpass(k, rest int) lowpass {
	h := make(lowpass, stageHalf(k, rest)+1)
	reach := stageReach(k, rest)
	sum := 0.0
	for n := len(h) - 1; n > 0; n-- {
		if n%k == 0 {
			continue
		}
		// The argument is taken into one turn first: it is exact there.
		sinc := math.Sin(math.Pi*float64(n%(2*k))/float64(k)) / (math.Pi * float64(n) / float64(k))
		h[n] = sinc * kaiser(float64(n)/float64(reach), kaiserBeta(stopDB))
		sum += 2 * h[n]
	}
	h[0] = 1
	sum += h[0]
	for n := range h {
		h[n] /= sum
	}
	return h
}

// stageHalf is the number of coefficients on either side of the centre of newLowpass(k, rest).
func stageHalf(k, rest int) int {
	reach := stageReach(k, rest)
	if reach%k == 0 {
		return reach - 1 // the outermost coefficient is zero
	}
	return reach
}

// stageReach is the half length of the window that reaches stopDB outside the transition, which goes
// from passEdge to rest - passEdge analysis rates at an input rate of rest*k of them: the order
// (A - 7.95)/(2.285 width), the width in radians per frame, of Kaiser, "Nonrecursive digital filter
// design using the I0-sinh window function", Proc. IEEE Int. Symp. Circuits and Systems, 1974.
func stageReach(k, rest int) int {
	width := 2 * math.Pi * (float64(rest) - 2*passEdge) / float64(rest*k)
	return int(math.Ceil((stopDB - 7.95) / (2.285 * width) / 2))
}
