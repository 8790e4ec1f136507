package estimate

import "fmt"

// minLines is how many lines the bandwidth of a resonance should have at least: with a Hann window |H| at
// the peak is low by 7 % then, and by a quarter of that with every halving of the spacing.
const minLines = 4

// Leakage is what lines too far apart do to the narrowest resonance.
type Leakage struct {
	Narrowest Resonance
	Count     int // resonances with fewer than four lines in their bandwidth

	// Low is by how much |H| is low at a line on the peak, as a share: 1 - |φ(0)|, see kernel. For wide modes and a
	// Hann window that is (4/3)(spacing/bandwidth)².
	Low float64

	// SpacingHz is the line spacing that would do, a quarter of the bandwidth. A bandwidth below one line is
	// known to be just that: then it is a quarter of the present spacing, and from there one sees further.
	SpacingHz float64
}

// Leakage tells whether lines are too far apart for the resonances found, and what follows. It never is so
// when signals fit into their blocks.
func (r *Resonances) Leakage() (l Leakage, found bool) {
	if r.kernel.none {
		return l, false
	}
	for _, one := range r.List {
		if !(one.LinesPerBandwidth < minLines) {
			continue
		}
		l.Count++
		if l.Count == 1 || one.BandwidthHz < l.Narrowest.BandwidthHz {
			l.Narrowest = one
		}
	}
	if l.Count == 0 {
		return l, false
	}
	lines := float64(l.Narrowest.LinesPerBandwidth)
	l.Low = r.kernel.low(lines)
	l.SpacingHz = max(lines, 1) * r.spacingHz / minLines
	return l, true
}

// String is one sentence for the verdict's reasons.
func (l Leakage) String() string {
	others := ""
	switch {
	case l.Count == 2:
		others = ", and another one is less so"
	case l.Count > 2:
		others = fmt.Sprintf(", and %d others are less so", l.Count-1)
	}
	if l.Narrowest.LinesPerBandwidth < 1 {
		return fmt.Sprintf("the resonance at %.4g Hz is narrower than the line spacing, so |H| at its peak is low by %.2g %% or more%s: "+
			"averaging does not mend that: measure with a line spacing of %.2g Hz, then look again",
			l.Narrowest.FrequencyHz, 100*l.Low, others, l.SpacingHz)
	}
	return fmt.Sprintf("the resonance at %.4g Hz is only %.2g lines wide, so |H| at its peak is low by about %.2g %%%s: "+
		"averaging does not mend that, a line spacing of %.2g Hz would",
		l.Narrowest.FrequencyHz, float64(l.Narrowest.LinesPerBandwidth), 100*l.Low, others, l.SpacingHz)
}
