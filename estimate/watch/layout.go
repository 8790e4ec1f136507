package watch

import (
	"shakerwatch/acquire/rig"
	"shakerwatch/estimate"
	"shakerwatch/spectra"
	"shakerwatch/spectra/kernel"
)

// A layout is what the rules need to know of the rig.
type layout struct {
	q, p      int // forces, responses
	rows      int // responses, in whole groups of lanes
	names     []string
	points    []string  // by channel, of the structure
	driving   []int     // by force: its driving-point response, or -1
	sign      []float64 // by force: -1 when it and its driving-point response face opposite ways
	cells     cells     // the judged lines
	spacingHz float64
	overlap   int     // blocks that hold one sample at most
	density   float64 // from the squared transform of a block to a density
	arm       int     // averages from which the watch judges
	memory    int     // blocks that the average remembers; 0 is all
	hold      bool    // nothing is averaged while some faults stand
	taper     bool    // blocks are judged as if weighted by a Hann window

	correlation correlation // of lines
	between     correlation // of those that are judged
	tied        float64     // lines of a force that are worth one that is independent
}

func newLayout(r *rig.Rig) *layout {
	target := estimate.NewTarget(r)
	window := spectra.Window(r.Analysis.Window)
	last := target.Last
	taper := window == spectra.Rectangular && r.Analysis.Excitation == "random"
	if taper {
		window = spectra.Hann
		last = min(last, r.Grid.Lines-2) // the line behind it is needed
	}
	values := window.Values(r.Grid.Block)
	stride := 1
	if window != spectra.Rectangular {
		stride = taperedStride
	}
	l := &layout{
		q:           len(r.Forces),
		p:           len(r.Responses),
		rows:        kernel.Whole(len(r.Responses)),
		driving:     r.DrivingPoints(),
		cells:       newCells(target.First, last, stride),
		spacingHz:   r.Grid.SpacingHz,
		overlap:     overlapping(r.Grid),
		arm:         estimate.SettlingAverages(len(r.Forces)),
		memory:      r.Analysis.Memory,
		hold:        r.OnFault != carryOn,
		taper:       taper,
		correlation: newCorrelation(values, r.Grid.Hop),
	}
	if r.Analysis.Excitation == "periodic" {
		// Common practice, no source: as many independent blocks as forces and a few to judge by.
		l.arm = l.q + 4
	}
	l.between = l.correlation.every(stride)
	l.tied = l.correlation.perIndependent()
	if r.Analysis.Excitation == "burst" {
		l.tied *= burstShare
	}
	var squares float64
	for _, w := range values {
		squares += w * w
	}
	l.density = 2 / (r.Grid.RateHz * squares)
	for _, c := range r.Channels() {
		l.names = append(l.names, c.Name)
		l.points = append(l.points, c.Point)
	}
	for i := range r.Forces {
		l.sign = append(l.sign, r.DrivingSign(i))
	}
	return l
}

// taperedStride: lines of a Hann or flat top window are so much alike that every second one says nearly as much as
// all of them: 1.94 neighbours under a Hann window are worth one, 1.06 of every second.
const taperedStride = 2

// burstShare is how many times longer a block is than the shortest burst in it. The lines of a force that is there for
// a part of the block only are tied together over so many.
const burstShare = 4

// reach is how many blocks before the first and behind the last abnormal one are spoilt too, for
// they may hold a part of the fault that is too small to see: of those that overlap, and without
// overlap the neighbour itself.
func (l *layout) reach() int64 { return int64(max(1, l.overlap-1)) }
