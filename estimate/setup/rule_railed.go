package setup

import (
	"fmt"
	"math"

	"shakerwatch/estimate"
)

const (
	// railedShare of its limit is where a channel that sticks is stuck at a rail, and not silent: a
	// conditioner that rails at ±5 V before an input of ±10 V is one. Our own choice.
	railedShare = 0.5

	// railedS is how long a channel has to stay at one extreme value. The peaks of what lies above 50 Hz
	// are shorter, however clipped, and so is the top of a 1 Hz sine in the steps of a 16 bit converter
	// (3.5 ms). Our own choice.
	railedS = 0.01

	// minRailed is the same in frames, for slow sources.
	minRailed = 8
)

// railed tells whether a channel stuck at an extreme near its limit in a stage.
func (c *check) railed(s Stage, ch int) bool {
	frames, _ := c.rail(s, ch)
	return frames > 0
}

// rail is for how many frames a channel stuck at an extreme near its limit in a stage, and that
// extreme as a fraction of full scale; 0 and NaN when it did not.
func (c *check) rail(s Stage, ch int) (frames int64, value float64) {
	value = math.NaN()
	t := c.tally(s)
	if t == nil {
		return 0, value
	}
	enough := max(minRailed, int64(math.Ceil(railedS*c.rig.Source.RateHz)))
	lowest, highest := t.Range(ch)
	atLowest, atHighest := t.LongestRuns(ch)
	if atLowest >= enough && c.atRail(ch, lowest) {
		frames, value = atLowest, lowest
	}
	if atHighest >= enough && atHighest > frames && c.atRail(ch, highest) {
		frames, value = atHighest, highest
	}
	return frames, value
}

func (c *check) atRail(ch int, value float64) bool {
	channel := c.channels[ch]
	return math.Abs(value)*channel.FullScaleV >= railedShare*channel.LimitV
}

// railedChannels reports a channel once, by the last stage in which it is railed.
func railedChannels(c *check) []Finding {
	var found []Finding
	for ch := range c.channels {
		s, ok := c.lastStage(func(s Stage) bool { return c.railed(s, ch) })
		if !ok {
			continue
		}
		frames, value := c.rail(s, ch)
		volts := value * c.channels[ch].FullScaleV
		found = append(found, Finding{
			Stage: s, Severity: Stop, Number: estimate.Number(volts), Unit: "V", channels: []int{ch},
			Text: fmt.Sprintf("stuck at %.4g V for %.3g s with the %s, limit %.4g V: look at the sensor's supply and cable, and give a charge amplifier time to recover or reset it",
				volts, float64(frames)/c.rig.Source.RateHz, s.Name(), c.channels[ch].LimitV),
		})
	}
	return found
}
