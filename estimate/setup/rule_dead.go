package setup

import (
	"fmt"

	"shakerwatch/estimate"
)

// dead tells whether a channel is constant in a stage, at a value that is no rail.
func (c *check) dead(s Stage, ch int) bool {
	t := c.tally(s)
	return t != nil && t.Constant(ch) && !c.atRail(ch, t.Mean(ch))
}

// deadChannels reports a channel once, by the last stage in which it is constant. One that lives with
// the shakers on has noise below the converter's smallest step.
func deadChannels(c *check) []Finding {
	var found []Finding
	for ch := range c.channels {
		s, ok := c.lastStage(func(s Stage) bool { return c.dead(s, ch) })
		if !ok {
			continue
		}
		t := c.tally(s)
		volts := t.Mean(ch) * c.channels[ch].FullScaleV
		f := Finding{Stage: s, Severity: Stop, Number: estimate.Number(volts), Unit: "V", channels: []int{ch}}
		f.Text = fmt.Sprintf("every sample is %.4g V with the %s: look at cable, connector, sensor supply and channel number", volts, s.Name())
		if s != Low && c.tally(Low) != nil {
			f.Severity = Look
			f.Text = fmt.Sprintf("every sample is %.4g V with the %s but not with the shakers on, so the noise is below the converter's smallest step: "+
				"raise the gain, and take its noise as unknown", volts, s.Name())
		}
		found = append(found, f)
	}
	return found
}
