package setup

import (
	"fmt"
	"math"

	"shakerwatch/estimate"
)

// signalToNoise reports each channel's power with the shakers on low over that with them off, and the
// octaves in which that is too little. What is called signal has the noise in it.
func signalToNoise(c *check) []Finding {
	if !c.measured(Idle, Low) {
		return nil
	}
	var found []Finding
	c.each(func(ch int) { found = append(found, c.ratio(ch)) }, Idle, Low)
	return found
}

func (c *check) ratio(ch int) Finding {
	ratio := func(b band) float64 { return powerDB(c.power(Low, ch, b), c.power(Idle, ch, b)) }
	f := Finding{Stage: Low, Unit: "dB", channels: []int{ch}}
	worst, lowest := c.all(), math.Inf(1)
	var low []band
	for _, b := range c.octaves {
		db := ratio(b)
		if db < lowest {
			worst, lowest = b, db
		}
		if db < lowSignalDB {
			low = append(low, b)
		}
	}
	overall := ratio(c.all())
	switch {
	case math.IsNaN(overall):
		f.Severity, f.Number = Look, unknown
		f.Text = "signal-to-noise unknown, as one of its levels is: measure both stages again"
	case len(low) > 0:
		f.Severity, f.Number, f.BandsHz = Look, estimate.Number(lowest), inHz(low)
		f.Text = fmt.Sprintf("%.1f dB above its noise from %v%s: drive more there, raise the gain in front of the converter, or take a more sensitive transducer",
			lowest, worst, ofBands(len(low)))
	default:
		f.Number = estimate.Number(overall)
		f.Text = fmt.Sprintf("%.1f dB above its noise, at least %.1f dB (%v)", overall, lowest, worst)
	}
	return f
}
