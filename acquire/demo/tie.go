package demo

import "math"

// A tie lets a drive repeat part of another.
type tie struct {
	leader, follower int
	own, share       float64      // of the follower's amplitude, together of unit power
	band             [2]resonator // of leader and follower; of no gain where the whole band is tied
	banded           bool
}

// tiedBandRatio is the width of a tied band, 3 dB down, per its middle frequency. Our own choice.
const tiedBandRatio = 0.3

// newTie returns the tie of a fault of kind tied or tied-band.
func (s *Source) newTie(f *Fault, leader, follower int) tie {
	t := tie{leader: leader, follower: follower}
	if f.Kind == "tied" {
		t.share = f.orUsual()
		t.own = math.Sqrt(1 - t.share*t.share)
		return t
	}
	t.banded = true
	middleHz := f.Amount
	if middleHz == 0 {
		middleHz = 0.3 * s.topHz
	}
	for i := range t.band {
		t.band[i] = newResonator(middleHz, tiedBandRatio*middleHz, s.rateHz*float64(s.sub))
	}
	return t
}

// mix puts part of the leader's sub samples in the place of the follower's.
func (t *tie) mix(leader, follower []float64) {
	for i, v := range leader {
		if t.banded {
			follower[i] += t.band[0].next(v) - t.band[1].next(follower[i])
		} else {
			follower[i] = t.own*follower[i] + t.share*v
		}
	}
}

// A resonator is a band-pass of second order with unit gain in the middle, the bilinear transform of
// w s/(s² + w s + m²). What it passes and what it takes away add up to the power that was there, so a
// drive keeps its spectrum when it is exchanged for another through one.
type resonator struct {
	b0, a1, a2 float64
	z1, z2     float64
}

func newResonator(middleHz, widthHz, rateHz float64) resonator {
	sin, cos := math.Sincos(2 * math.Pi * min(middleHz, 0.45*rateHz) / rateHz)
	alpha := sin * widthHz / (2 * middleHz)
	return resonator{b0: alpha / (1 + alpha), a1: -2 * cos / (1 + alpha), a2: (1 - alpha) / (1 + alpha)}
}

// next is the output for the next sample (transposed direct form II).
func (r *resonator) next(v float64) float64 {
	y := r.b0*v + r.z1
	r.z1 = r.z2 - r.a1*y
	r.z2 = -r.b0*v - r.a2*y
	return y
}
