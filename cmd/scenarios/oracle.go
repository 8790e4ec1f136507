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

// fellFarDB is the fall from which a force that is not driven has fallen far. Above, the other shakers make it nearly what it
// was, the structure follows it, and nothing is wrong with the blocks.
const fellFarDB = -6

// fallDB is by how much force i falls when its drive is off, in the median over the band.
func (p *plan) fallDB(i int) float64 {
	truth, q := p.drawn.Truth(), len(p.rig.Forces)
	shares := slices.Repeat([]float64{1}, q)
	shares[i] = 0
	var falls []float64
	for _, hz := range p.bandLines() {
		on, off := truth.ForceDensities(nil, hz, nil), truth.ForceDensities(nil, hz, shares)
		falls = append(falls, 10*math.Log10(real(off[i*q+i])/real(on[i*q+i])))
	}
	slices.Sort(falls)
	return falls[len(falls)/2]
}

// A tiltEffect is what a sensor that is turned at a driving point does to a pair of driving points.
type tiltEffect int

const (
	likeGain tiltEffect = iota // a constant factor, or next to nothing
	eitherOf                   // more than that on a part of the band
	local                      // no factor explains it
)

const (
	// A line disagrees with the best factor from 10 % on: twice what two calibrations differ by.
	tiltedLine = 0.1
	// Of so many lines the first may be called either, from the second on it is no factor.
	eitherShare, localShare = 0.1, 1. / 3
)

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
	switch share := float64(off) / float64(len(ratios)); {
	case share > localShare:
		return local
	case share > eitherShare:
		return eitherOf
	}
	return likeGain
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
