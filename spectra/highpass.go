package spectra

import "math"

// A highPass is a Butterworth high pass of the fourth order, at rest when it is made. It is 3 dB down
// at its edge and falls by 24 dB an octave below.
//
// From the analogue prototype Π s²/(s² + d s + 1), d = 2 cos(π/8) and 2 cos(3π/8), by the bilinear transform with
// the edge kept (Oppenheim and Schafer, Discrete-Time Signal Processing, 3rd ed., 2010, section 7.2,
// from memory).
type highPass struct {
	on       bool
	sections [2]section
}

type section struct {
	gain, a1, a2 float64
	w1, w2       float64 // the last two values of the recursion
}

// newHighPass makes a highPass with an edge as a share of the sampling rate; 0 lets everything pass.
func newHighPass(edge float64) (f highPass) {
	if edge == 0 {
		return f
	}
	f.on = true
	k := math.Tan(math.Pi * edge)
	for i := range f.sections {
		damping := 2 * math.Cos(math.Pi*float64(2*i+1)/8)
		norm := 1 / (1 + damping*k + k*k)
		f.sections[i] = section{gain: norm, a1: 2 * (k*k - 1) * norm, a2: (1 - damping*k + k*k) * norm}
	}
	return f
}

// next filters one sample.
func (f *highPass) next(v float64) float64 {
	if !f.on {
		return v
	}
	for i := range f.sections {
		s := &f.sections[i]
		w := v - s.a1*s.w1 - s.a2*s.w2
		v = s.gain * (w - 2*s.w1 + s.w2)
		s.w1, s.w2 = w, s.w1
	}
	return v
}
