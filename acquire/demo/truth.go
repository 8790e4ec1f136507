package demo

import "shakerwatch/acquire/rig"

// A Truth is what a perfect measurement of a sound rig on the simulated structure would find. It is
// read-only, so any number of goroutines may use it.
type Truth struct {
	layout
	forces, responses []rig.Channel
	topHz             float64 // of the band
}

// NewTruth returns the truth about r. The error is that of New for channels that the structure does
// not have.
func NewTruth(r *rig.Rig) (*Truth, error) {
	l, err := newLayout(r, newSkid())
	if err != nil {
		return nil, err
	}
	return &Truth{l, r.Forces, r.Responses, r.Analysis.MaxFrequencyHz}, nil
}

// H is the frequency response from a force to a response, indices in rig order, in m/s² per N for
// e^{+jwt}. As in a measurement, each transducer counts along its own axis, sign included. It does
// not depend on the shakers. H panics when an index is not in the rig.
func (t *Truth) H(freqHz float64, response, force int) complex128 {
	sign := t.responses[response].Sign() * t.forces[force].Sign()
	return complex(sign, 0) * t.structure.accelerance(freqHz, t.sensors[response], t.shakers[force].at)
}
