package setup

import (
	"fmt"

	"shakerwatch/estimate"
)

// overranges reports a channel once, by the last stage in which it reached its limit without sticking
// there.
func overranges(c *check) []Finding {
	var found []Finding
	for ch := range c.channels {
		s, ok := c.lastStage(func(s Stage) bool {
			t := c.tally(s)
			return t != nil && t.AtLimit(ch) > 0 && !c.railed(s, ch)
		})
		if !ok {
			continue
		}
		samples := c.tally(s).AtLimit(ch)
		advice := "lower its gain or the drive, as blocks with it are not averaged"
		if s != Low {
			advice = "lower its gain, and find what knocks or plucks at it"
		}
		found = append(found, Finding{
			Stage: s, Severity: Stop, Number: estimate.Number(samples), Unit: "samples", channels: []int{ch},
			Text: fmt.Sprintf("%d samples at the limit of %.4g V with the %s: %s", samples, c.channels[ch].LimitV, s.Name(), advice),
		})
	}
	return found
}
