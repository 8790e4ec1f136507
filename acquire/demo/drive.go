package demo

import "gonum.org/v1/gonum/floats"

// A drive makes the current of a shaker.
type drive interface {
	// next puts the current of the next sub samples into dst, in A. It allocates nothing.
	next(dst []float64)
}

// An interpolator raises white samples at a low rate to the rate of the sub samples and limits
// their band: for each sub sample between two white ones, the weights of the last white ones, oldest
// first.
type interpolator [][]float64

// newInterpolator returns the interpolator of a band.
func newInterpolator(b band) interpolator {
	taps := lowPass(b)
	each := len(taps) / b.every
	var phases interpolator
	for p := range b.every {
		weights := make([]float64, each)
		for i := range weights {
			weights[each-1-i] = taps[p+i*b.every]
		}
		phases = append(phases, weights)
	}
	return phases
}

// reach is the number of white samples that a sub sample depends on.
func (ip interpolator) reach() int { return len(ip[0]) }

// at is the sub sample at a phase, 0 to len(ip)-1, behind the last of reach white samples.
func (ip interpolator) at(phase int, white []float64) float64 { return floats.Dot(ip[phase], white) }
