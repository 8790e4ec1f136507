package rig

import "math"

const (
	// maxBytes is the memory that the blocks of a rig may need: more than a test computer has to
	// spare (common practice, no source).
	maxBytes = 16 << 30

	// maxBlock is the longest block of two channels, at 8 bytes a sample, in maxBytes.
	maxBlock = maxBytes / 8 / 2
)

// smear is up to which line a window spreads what it finds at 0 Hz: half the width of its main
// lobe, without the line where it is 0. It goes without judgement.
var smear = map[string]int{"rectangular": 1, "hann": 2, "flattop": 5}

// lowestJudged is the first line at or above minHz that the window does not spoil from 0 Hz.
func lowestJudged(spacingHz, minHz float64, window string) int {
	k := smear[window] + 1
	if minHz > float64(k)*spacingHz {
		k = int(math.Ceil(minHz * (1 - tolerance) / spacingHz))
	}
	return k
}

// known says that every one of v was read well.
func known(v ...float64) bool {
	for _, x := range v {
		if math.IsNaN(x) {
			return false
		}
	}
	return true
}

// resolve fills in the grid, as far as what it depends on was read well.
func (f *file) resolve() {
	r, a := f.rig, f.rig.Analysis
	if a.Excitation == "periodic" && !f.analysis.has("line_spacing") {
		r.Analysis.LineSpacingHz = 0
	}
	period := r.Periodic.Period
	if !known(r.Source.RateHz, a.MaxFrequencyHz) || a.Excitation == "" ||
		a.Excitation == "periodic" && period < 1 {
		return
	}
	g := Grid{Decimation: decimation(r.Source.RateHz, a.MaxFrequencyHz, period)}
	if g.Decimation == 0 {
		f.source.add("rate", "rate %.10g is below %g times max_frequency, which is %.10g: raise it, or lower max_frequency",
			r.Source.RateHz, rateMargin, rateMargin*a.MaxFrequencyHz)
		return
	}
	g.RateHz = r.Source.RateHz / float64(g.Decimation)
	if a.Excitation == "periodic" {
		g.Block = period / g.Decimation
	} else if known(a.LineSpacingHz) {
		wanted := g.RateHz / a.LineSpacingHz
		if wanted > maxBlock {
			f.analysis.add("line_spacing", "blocks of %.3g samples do not fit into any machine: choose a larger line_spacing", wanted)
			return
		}
		g.Block = smooth(wanted)
	}
	if g.Block == 0 {
		return
	}
	if !a.bounded() && known(a.Overlap) {
		g.Hop = max(1, int(math.Floor(float64(g.Block)*(1-a.Overlap)+0.5)))
	}
	g.SpacingHz = g.RateHz / float64(g.Block)
	g.Lines = highestLine(g.SpacingHz, a.MaxFrequencyHz) + 1
	r.Grid = g
	f.checkGrid()
}

// checkGrid reports a grid that leaves nothing to judge or cannot be held.
func (f *file) checkGrid() {
	g, a := f.rig.Grid, f.rig.Analysis
	s, key := f.analysis, "line_spacing"
	if a.Excitation == "periodic" {
		s, key = f.periodic, "period"
	}
	if a.Window != "" && known(a.MinFrequencyHz) && a.MinFrequencyHz < a.MaxFrequencyHz &&
		lowestJudged(g.SpacingHz, a.MinFrequencyHz, a.Window) >= g.Lines {
		s.add(key, "with lines every %.6g Hz none is left to judge between min_frequency and max_frequency: choose closer lines", g.SpacingHz)
	}
	if need := f.bytes(); need > maxBytes {
		s.add(key, "the blocks need %.3g GB of memory, more than %.3g GB: choose wider lines, less overlap or fewer channels",
			need/1e9, float64(maxBytes)/1e9)
	}
	f.checkBlockInBurst()
}

// bytes is about what the blocks, their transforms in waiting and the averages take.
func (f *file) bytes() float64 {
	const sample, complexSample = 8, 16
	g := f.rig.Grid
	q, p := float64(len(f.forces)), float64(len(f.responses))
	block, lines := float64(g.Block), float64(g.Lines)

	// At least three blocks wait in probation, with much overlap as many as overlap one another;
	// with periodic excitation the kept periods wait.
	waiting := 3.0
	if g.Hop > 0 {
		waiting = max(waiting, math.Ceil(block/float64(g.Hop)))
	}
	waiting = max(waiting, float64(f.rig.Periodic.KeepPeriods))

	samples := block * (q + p) * sample
	transforms := (waiting + 1) * lines * (q + p) * complexSample
	averages := lines * (q*q + p*q + p) * complexSample
	return samples + transforms + averages
}

// checkBlockInBurst reports a burst that does not fit a block.
func (f *file) checkBlockInBurst() {
	b, g := f.rig.Burst, f.rig.Grid
	if f.rig.Analysis.Excitation != "burst" || f.burst.table == nil {
		return
	}
	blockS := float64(g.Block) / g.RateHz
	if b.PeriodS > 0 && !atLeast(b.PeriodS, blockS) {
		f.burst.add("period_s", "period_s %g is shorter than a block of %.6g s: give a longer period, or a larger line_spacing", b.PeriodS, blockS)
	}
	if b.PreTriggerS >= blockS {
		f.burst.add("pre_trigger_s", "pre_trigger_s %g lets a block of %.6g s end before its burst starts: give less", b.PreTriggerS, blockS)
	}
}
