package main

import (
	"math"
	"math/cmplx"
	"slices"

	"shakerwatch/acquire/rig"
)

// What a fault does by the physics of the simulation, where that decides what is right.

// oracleLines is how many lines of the band are looked at.
const oracleLines = 400

// bandLines are the frequencies that are looked at.
func (p *plan) bandLines() (hz []float64) {
	a := p.rig.Analysis
	for k := range oracleLines {
		hz = append(hz, a.MinFrequencyHz+(a.MaxFrequencyHz-a.MinFrequencyHz)*(float64(k)+0.5)/oracleLines)
	}
	return hz
}

// A fall is by how much a force must fall so that something is to be said: less, and the other shakers make it nearly what it
// was, the structure follows it, and nothing is wrong with the blocks.
type fall struct {
	share float64 // of the drive's amplitude that is left
	farDB float64
}

var falls = map[string]fall{
	"drive-off": {0, -6},   // fell far
	"level":     {0.5, -3}, // the usual -6 dB; 2 dB stand out of the scatter of a block, by the project's method
}

// fallDB is by how much force i falls when a share of its drive is left, in the median over the band.
func (p *plan) fallDB(i int, share float64) float64 {
	truth, q := p.drawn.Truth(), len(p.rig.Forces)
	shares := slices.Repeat([]float64{1}, q)
	shares[i] = share
	var list []float64
	for _, hz := range p.bandLines() {
		on, off := truth.ForceDensities(nil, hz, nil), truth.ForceDensities(nil, hz, shares)
		list = append(list, 10*math.Log10(real(off[i*q+i])/real(on[i*q+i])))
	}
	slices.Sort(list)
	return list[len(list)/2]
}

// A tiltEffect is what a sensor that is turned at a driving point does to a pair of driving points.
type tiltEffect int

const (
	likeGain tiltEffect = iota // a constant factor over most of the band, or next to nothing
	local                      // no factor explains it
)

// A third of the lines must be off the best factor by four times what two calibrations differ by, so that with few averages
// too no factor can be said to repair it.
const tiltedLine, tiltedShare = 0.2, 1. / 3

// tiltOf is what turning the driving-point response of force a by the default amount does to its pair with force b.
func (p *plan) tiltOf(a, b int) tiltEffect {
	const degrees = 25 // demo's default
	sin, cos := math.Sincos(degrees * math.Pi / 180)
	o := p.rig.DrivingPoints()[a]
	sign := p.rig.Responses[o].Sign()
	truth, next := p.drawn.Truth(), p.turned(o)
	var ratios []complex128
	var parts []float64
	for _, hz := range p.bandLines() {
		own, other := truth.H(hz, o, b), next(hz, b)
		if own == 0 {
			continue
		}
		r := complex(cos, 0) + complex(sign*sin, 0)*other/own
		ratios, parts = append(ratios, r), append(parts, real(r))
	}
	slices.Sort(parts)
	gain := complex(parts[len(parts)/2], 0)
	off := 0
	for _, r := range ratios {
		if cmplx.Abs(r-gain) > tiltedLine*cmplx.Abs(gain) {
			off++
		}
	}
	if float64(off) > tiltedShare*float64(len(ratios)) {
		return local
	}
	return likeGain
}

// tiltShows tells whether a sensor that is turned at the driving point of force a makes some pair disagree by more than a
// factor.
func (p *plan) tiltShows(a int) bool {
	for b := range p.rig.Forces {
		if b != a && p.tiltOf(a, b) == local {
			return true
		}
	}
	return false
}

// turned is the frequency response to a force of what response o would measure along the positive next axis.
func (p *plan) turned(o int) func(hz float64, force int) complex128 {
	r, drawn := *p.rig, *p.drawn
	r.Responses = slices.Clone(r.Responses)
	letter := string("yzx"[r.Responses[o].Letter()[0]-'x'])
	r.Responses[o] = rig.Channel{Name: r.Responses[o].Name, Point: r.Responses[o].Point, Axis: "+" + letter}
	drawn.Rig = &r
	truth := drawn.Truth()
	return func(hz float64, force int) complex128 { return truth.H(hz, o, force) }
}
