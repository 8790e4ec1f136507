package setup

import (
	"fmt"
	"math"

	"shakerwatch/estimate"
)

const (
	// offsetShare of the limit is where an offset is flagged: it takes 0.4 dB of the headroom, and a
	// channel that is coupled as sensors mostly are has a tenth of it. Our own choice.
	offsetShare = 0.05

	// offsetStop leaves half the limit for the signal.
	offsetStop = 0.5
)

// dcOffsets reports each channel's largest mean voltage over the stages.
func dcOffsets(c *check) []Finding {
	var found []Finding
	for ch := range c.channels {
		f := Finding{Unit: "V", channels: []int{ch}, Number: unknown}
		counted := false
		for _, s := range Stages() {
			t := c.tally(s)
			if t == nil || !c.carries(s, ch) {
				continue
			}
			volts := t.Mean(ch) * c.channels[ch].FullScaleV
			if !counted || math.Abs(volts) > math.Abs(float64(f.Number)) || math.IsNaN(volts) {
				f.Stage, f.Number = s, estimate.Number(volts)
			}
			counted = true
		}
		if counted {
			found = append(found, c.offset(f, ch))
		}
	}
	return found
}

func (c *check) offset(f Finding, ch int) Finding {
	volts := float64(f.Number)
	share := math.Abs(volts) / c.channels[ch].LimitV
	f.Text = fmt.Sprintf("mean %+.3g V, %.2g %% of its limit, with the %s", volts, 100*share, f.Stage.Name())
	switch {
	case math.IsNaN(share):
		f.Severity = Look
		f.Text = fmt.Sprintf("mean unknown with the %s, as samples were no numbers: look at the converter", f.Stage.Name())
	case share >= offsetStop:
		f.Severity = Stop
		f.Text += ": look for a sensor without supply or a broken cable, and couple the input AC"
	case share >= offsetShare:
		f.Severity = Look
		f.Text += ": couple the input AC, or balance the conditioner"
	}
	return f
}
