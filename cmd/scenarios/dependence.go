package main

import (
	"math"
	"math/cmplx"

	"shakerwatch/estimate"
	"shakerwatch/estimate/watch"
	"shakerwatch/spectra"
)

// A dependence compares the bands in which forces were said to depend on each other with where they do, by the physics
// of the simulation.
type dependence struct {
	bands    int // said
	invented int // of these, those in which the true coherence reaches leastCoherence nowhere
	wide     int // those that go on for more than edgeLines where it is below
	sure     int // true bands that could not be overlooked with so many averages
	missed   int // of these, those that no standing event names to within edgeLines
}

func (d *dependence) add(o dependence) {
	d.bands, d.invented, d.wide = d.bands+o.bands, d.invented+o.invented, d.wide+o.wide
	d.sure, d.missed = d.sure+o.sure, d.missed+o.missed
}

const (
	leastCoherence = 0.3 // below, forces are not to be said to depend on each other
	edgeLines      = 3

	// A band is sure where its least coherence would be above leastCoherence by 3.3 standard deviations of Fisher's z, as
	// the watch wants it, even if it came out two of them low. A band found earlier is named anew only when the average
	// has grown by half, so that of two thirds of the blocks counts.
	sureSigma  = 3.3 + 2
	grownShare = 1.5
)

// compare compares the events of a healthy run.
func (p *plan) compare(r *played) (d dependence) {
	if len(p.rig.Forces) < 2 {
		return d
	}
	if p.truth == nil {
		p.truth = p.forceCoherence()
	}
	truth := p.truth
	standing := make([]bool, len(truth))
	for i, e := range r.events {
		if e.Kind != watch.ForcesCorrelated || e.Edge != watch.Raised {
			continue
		}
		stays := !cleared(r.events[i:])
		for _, b := range e.BandsHz {
			lo, hi := p.line(b[0]), p.line(b[1])
			d.bands++
			reached, off := false, false
			for k := lo; k <= hi; k++ {
				reached = reached || truth[k] >= leastCoherence
				off = off || !near(truth, k)
				standing[k] = standing[k] || stays
			}
			switch {
			case !reached:
				d.invented++
			case off:
				d.wide++
			}
		}
	}
	d.overlooked(truth, standing, sureCoherence(r.ne, len(p.rig.Forces)))
	return d
}

// line is the line nearest to a frequency.
func (p *plan) line(hz float64) int { return int(math.Round(hz / p.rig.Grid.SpacingHz)) }

// cleared tells whether the first of some events was cleared later.
func cleared(events []watch.Event) bool {
	for _, e := range events[1:] {
		if e.Edge == watch.Cleared && e.Kind == events[0].Kind && e.SinceBlock == events[0].SinceBlock && sameBands(e.BandsHz, events[0].BandsHz) {
			return true
		}
	}
	return false
}

func sameBands(a, b [][2]float64) bool {
	if len(a) != len(b) {
		return false
	}
	for i := range a {
		if a[i] != b[i] {
			return false
		}
	}
	return true
}

// near tells whether a line is within edgeLines of one that depends.
func near(truth []float64, k int) bool {
	for n := max(0, k-edgeLines); n <= min(len(truth)-1, k+edgeLines); n++ {
		if truth[n] >= leastCoherence {
			return true
		}
	}
	return false
}

// overlooked counts the runs of at least 2 edgeLines + 1 lines above a coherence, and those whose middle is not named.
func (d *dependence) overlooked(truth []float64, standing []bool, sure float64) {
	for lo := 0; lo < len(truth); lo++ {
		hi := lo
		for hi < len(truth) && truth[hi] >= sure {
			hi++
		}
		if hi-lo > 2*edgeLines {
			d.sure++
			for k := lo + edgeLines; k < hi-edgeLines; k++ {
				if !standing[k] {
					d.missed++
					break
				}
			}
		}
		lo = hi
	}
}

// sureCoherence is what cannot be overlooked with ne averages and q forces.
func sureCoherence(ne float64, q int) float64 {
	z := math.Atanh(math.Sqrt(leastCoherence)) + sureSigma/math.Sqrt(2*(ne/grownShare-float64(q)+1))
	return math.Tanh(z) * math.Tanh(z)
}

// forceCoherence is the largest coherence of a force with all the others on each line, as an average without end would
// find it: the true densities seen through the window. It is 0 on lines that are not judged.
func (p *plan) forceCoherence() []float64 {
	const fine = 4 // steps a line: the narrowest mode is about three lines wide
	const reach = 3 * fine
	g, q := p.rig.Grid, len(p.rig.Forces)
	truth := p.drawn.Truth()
	densities := make([]complex128, (g.Lines-1)*fine*q*q) // from 1/fine of a line on
	for n := range (g.Lines - 1) * fine {
		truth.ForceDensities(densities[n*q*q:(n+1)*q*q], min(p.rig.Analysis.MaxFrequencyHz, float64(n+1)/fine*g.SpacingHz), nil)
	}
	kernel := windowPower(spectra.Window(p.rig.Analysis.Window).Values(g.Block), fine, reach)
	s := spectra.NewSnapshot(estimate.ShapeOf(p.rig), estimate.AveragingOf(p.rig))
	s.SpacingHz, s.Averages, s.EffectiveAverages = g.SpacingHz, math.MaxInt32, math.MaxInt32
	for k := range g.Lines {
		at := s.Gxx[k*q*q : (k+1)*q*q]
		clear(at)
		for n, weight := range kernel {
			from := min(max(0, k*fine+n-reach-1), len(densities)/(q*q)-1) * q * q
			for i := range at {
				at[i] += complex(weight, 0) * densities[from+i]
			}
		}
	}
	clear(s.Gyx)
	clear(s.Gyy)
	e := estimate.New(s.Shape, estimate.MethodOf(p.rig))
	e.Update(s)
	largest := make([]float64, g.Lines)
	for k := estimate.NewTarget(p.rig).First; k < g.Lines; k++ {
		for _, c := range e.ForceCoherence[k*q : (k+1)*q] {
			largest[k] = max(largest[k], c)
		}
	}
	return largest
}

// windowPower is |W|² from reach steps below a line to reach steps above it, fine steps a line, with sum 1.
func windowPower(values []float64, fine, reach int) []float64 {
	power := make([]float64, 2*reach+1)
	var sum float64
	for n := range power {
		var w complex128
		for i, v := range values {
			turns := float64(n-reach) / float64(fine) * float64(i) / float64(len(values))
			w += cmplx.Rect(v, 2*math.Pi*turns)
		}
		power[n] = abs2(w)
		sum += power[n]
	}
	for n := range power {
		power[n] /= sum
	}
	return power
}
