package web

import (
	"math"

	"shakerwatch/estimate"
)

// Status is how a run stands at one moment, besides the estimates themselves.
type Status struct {
	TimeS    float64 // source seconds at the end of the last block seen
	Seen     int64   // blocks
	Averaged int64
	SetAside int64

	EffectiveAverages float64
	AveragesNeeded    estimate.Number // predicted total of averaged blocks, NaN when unknown
	NeededLow         estimate.Number // of the range that it lies in with a probability of 90 %; NaN when unknown
	NeededHigh        estimate.Number
	TimeToGoS         estimate.Number // until then, NaN when unknown
	Verdict           estimate.Verdict
	Paused            bool // a page asked for it: blocks are judged but not averaged

	// Progress is that of the estimates. It is read during the call that brings it and not kept;
	// with nil the worst frequency response and its error are unknown.
	Progress *estimate.Progress

	// Gxx (line, i, j), N²/Hz, is that of the estimates' snapshot. It is read during the call that
	// brings it and not kept; with nil the force spectra are unknown.
	Gxx []complex128

	// Gyy (line, o), (m/s²)²/Hz, is that of the estimates' snapshot, Distortion that of the estimates, nil
	// but with periodic excitation. They are read during the call that brings them and not kept.
	Gyy        []float64
	Distortion *estimate.Distortion

	Gaps       int64 // stretches of lost frames
	Overranges int64 // blocks in which a channel reached its limit
	Overloads  int64 // blocks that the arithmetic was too slow for
}

// Levels are the channel levels over the last tenth of a second, in rig order, forces first, as
// shares of each channel's limit (1 is the limit).
type Levels struct {
	TimeS float64 // source seconds at the end of the stretch
	RMS   []float64
	Peak  []float64
	Block float64 // 0 to 1: how much of the block being filled is here
}

// worstError is the error of the frequency response that is furthest from the target.
func (st *Status) worstError() float64 {
	if st.Progress == nil {
		return math.NaN()
	}
	return st.Progress.Errors[st.Progress.Worst]
}
