package setup

import (
	"fmt"
	"math"

	"shakerwatch/estimate"
)

const (
	// lowSignalDB is where a signal is too near to its noise: what the watch calls low-signal.
	lowSignalDB = 10

	// undrivenShare of the lines has to be that near for a force to count as not driven: a drive that fills
	// a tenth of the band of interest is one. Our own choice.
	undrivenShare = 0.9

	// smoothLines is over how many lines on either side densities are averaged before the lowest is
	// sought: by chance alone the lowest of a thousand single lines at eight averages is 6.5 dB low, and
	// of those averaged 4.4 dB (Gamma distribution).
	smoothLines = 1

	// dropDB is how far below its neighbours a force has dropped, and not by the slope of the drive or by
	// chance. Our own choice.
	dropDB = 6

	// A force's neighbourhood reaches a third of an octave to either side, but not less than eight lines.
	neighbourRatio = 1.26
	neighbourLines = 8
)

// margins is by how many dB a force is above its noise at each line that is judged, from the first;
// NaN at hum, which is reported as that.
func (c *check) margins(force int) []float64 {
	margins := make([]float64, 0, c.last-c.first+1)
	for k := c.first; k <= c.last; k++ {
		db := math.NaN()
		if !c.hum.near(Idle, force, k, c.window.Smear()+smoothLines) {
			db = powerDB(c.smooth(Low, force, k), c.smooth(Idle, force, k))
		}
		margins = append(margins, db)
	}
	return margins
}

// smooth is the power in the lines around k.
func (c *check) smooth(s Stage, ch, k int) float64 {
	return c.power(s, ch, c.band(max(k-smoothLines, c.first), min(k+smoothLines, c.last)))
}

// undrivenForces tells of each force whether it is hardly more than its noise with the shakers on.
func (c *check) undrivenForces() []bool {
	undriven := make([]bool, len(c.rig.Forces))
	if !c.measured(Idle, Low) {
		return undriven
	}
	for i := range undriven {
		if !c.carries(Idle, i) || !c.carries(Low, i) {
			continue
		}
		low, all := 0, 0
		for _, db := range c.margins(i) {
			if !math.IsNaN(db) {
				all++
			}
			if db < lowSignalDB {
				low++
			}
		}
		undriven[i] = all > 0 && float64(low) >= undrivenShare*float64(all)
	}
	return undriven
}

// noDrive tells whether no force is driven, so that nothing with the shakers on means anything.
func (c *check) noDrive() bool {
	for _, undriven := range c.undriven {
		if !undriven {
			return false
		}
	}
	return len(c.undriven) > 0
}

// notDriven reports forces that are hardly more than their noise with the shakers on.
func notDriven(c *check) []Finding {
	var found []Finding
	for i, undriven := range c.undriven {
		if !undriven {
			continue
		}
		all := c.all()
		db := powerDB(c.power(Low, i, all), c.power(Idle, i, all))
		found = append(found, Finding{
			Stage: Low, Severity: Stop, Number: estimate.Number(db), Unit: "dB", channels: []int{i},
			Text: fmt.Sprintf("%.1f dB above its noise with the shakers on, less than %d dB on nearly all lines: "+
				"look whether its shaker is driven and the amplifier unmuted, then, with the amplifier off, whether the stinger is fixed at both ends", db, lowSignalDB),
		})
	}
	return found
}

// forceDrops reports where each force comes nearest to its noise, and how far below its neighbours that
// is: at resonances a structure gives way, and the force that can be put into it falls.
func forceDrops(c *check) []Finding {
	if !c.measured(Idle, Low) {
		return nil
	}
	var found []Finding
	c.each(func(ch int) {
		if ch < len(c.rig.Forces) {
			found = append(found, c.forceDrop(ch))
		}
	}, Idle, Low)
	return found
}

func (c *check) forceDrop(force int) Finding {
	margins := c.margins(force)
	smallest := -1
	for i, db := range margins {
		if !math.IsNaN(db) && (smallest < 0 || db < margins[smallest]) {
			smallest = i
		}
	}
	f := Finding{Stage: Low, Unit: "dB", channels: []int{force}}
	if smallest < 0 {
		f.Severity, f.Number = Look, unknown
		f.Text = "how far it drops towards its noise is unknown, as no line could be compared: measure both stages again"
		return f
	}
	margin, k := margins[smallest], c.first+smallest
	f.Number = estimate.Number(margin)
	f.Text = fmt.Sprintf("nearest to its noise at %.4g Hz, %.1f dB above it", float64(k)*c.spacingHz, margin)
	if drop := c.drop(force, k); drop >= dropDB {
		f.Text += fmt.Sprintf(" and %.1f dB below its neighbours", drop)
	}
	if margin < lowSignalDB {
		low := c.runs(func(k int) bool { return margins[k-c.first] < lowSignalDB })
		f.Severity, f.BandsHz = Look, inHz(low)
		f.Text += fmt.Sprintf("%s: drive more there, use a more sensitive cell, or move the shaker to where the structure gives way less", ofBands(len(low)))
	}
	return f
}

// drop is how far a force at line k lies below the median of its neighbourhood, in dB.
func (c *check) drop(force, k int) float64 {
	lo := min(int(float64(k)/neighbourRatio), k-neighbourLines)
	hi := max(int(float64(k)*neighbourRatio), k+neighbourLines)
	var around []float64
	for n := max(lo, c.first); n <= min(hi, c.last); n++ {
		around = append(around, c.smooth(Low, force, n))
	}
	return powerDB(median(around), c.smooth(Low, force, k))
}
