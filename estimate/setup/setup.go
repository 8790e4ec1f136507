// Package setup holds the check of a rig before a run: the stages that a person is led through, the
// tally of raw samples, the rules that turn what was measured into findings, and the noise densities
// that a later run takes.
//
// It knows channels, densities and driving points. It may not know goroutines, HTTP, files or how a
// person is asked.
//
// What cannot be known is NaN, and a finding says so. A level that is compared with a channel's
// limit is in dB below that limit, which is a peak value.
package setup

import (
	"cmp"
	"slices"
	"strings"

	"shakerwatch/acquire/rig"
	"shakerwatch/spectra"
)

// A Measurement is what one stage has delivered. Either part may be nil; the rules that need it then
// say nothing.
type Measurement struct {
	Stage    Stage
	Snapshot *spectra.Snapshot // in rig order, N²/Hz and (m/s²)²/Hz
	Tally    *Tally            // of all frames of the stage, as captured
}

// Findings judges the measurements of r by every rule, worst finding first, then in the order of the
// channels, then of the rules. Stages may be missing; of two measurements of one stage the later
// counts. Findings reads the measurements only and keeps no hold of them.
//
// It panics when a measurement has no such stage, or another shape than r.
func Findings(r *rig.Rig, m ...Measurement) []Finding {
	c := newCheck(r, m)
	found := []Finding{}
	for _, rule := range rules {
		for _, f := range rule.find(c) {
			if f.Kind == "" {
				f.Kind = rule.kind
			}
			c.complete(&f)
			found = append(found, f)
		}
	}
	slices.SortStableFunc(found, func(a, b Finding) int {
		return cmp.Or(-cmp.Compare(a.Severity, b.Severity), cmp.Compare(a.first(), b.first()))
	})
	return found
}

// complete names the channels of a finding and leaves no list nil.
func (c *check) complete(f *Finding) {
	f.Channels = []string{}
	for _, ch := range f.channels {
		f.Channels = append(f.Channels, c.channels[ch].Name)
	}
	if len(f.Channels) > 0 {
		f.Text = strings.Join(f.Channels, ", ") + ": " + f.Text
	}
	if f.BandsHz == nil {
		f.BandsHz = [][2]float64{}
	}
}
