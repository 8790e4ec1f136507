package setup

import (
	"fmt"
	"math"

	"shakerwatch/estimate"
)

const (
	// headroomMinDB is how near to its limit a channel may come with the shakers on low: random peaks of
	// a longer run are some 2 dB higher, and the run is louder. Common practice, no source.
	headroomMinDB = 6

	// headroomMaxDB is where a channel uses a hundredth of its range: the converter's noise then counts.
	// Common practice, no source.
	headroomMaxDB = 40

	// Where the advice brings a channel to: from too near, and from too far with room for the run's
	// drive. Common practice, no source.
	headroomGoalDB, headroomRoomDB = 12, 20
)

// headrooms reports each channel's headroom with the shakers on low, from the highest peak to the
// limit. Channels that reached it are reported as overrange.
func headrooms(c *check) []Finding {
	t := c.tally(Low)
	if t == nil {
		return nil
	}
	var found []Finding
	c.each(func(ch int) {
		if t.AtLimit(ch) == 0 {
			found = append(found, c.headroom(t, ch))
		}
	}, Low)
	return found
}

func (c *check) headroom(t *Tally, ch int) Finding {
	channel := c.channels[ch]
	lowest, highest := t.Range(ch)
	peak := max(-lowest, highest) * channel.FullScaleV
	db := amplitudeDB(channel.LimitV, peak)
	f := Finding{Stage: Low, Number: estimate.Number(db), Unit: "dB", channels: []int{ch}}
	f.Text = fmt.Sprintf("headroom %.1f dB, peak %.3g of %.4g V", db, peak, channel.LimitV)
	switch {
	case math.IsNaN(db):
		f.Severity = Look
		f.Text = "headroom unknown, as samples were no numbers: look at the converter"
	case db < headroomMinDB:
		f.Severity = Look
		f.Text += fmt.Sprintf(": lower its gain by %.0f dB before the drive goes up", math.Ceil(headroomGoalDB-db))
	case db > headroomMaxDB:
		f.Severity = Look
		f.Text += fmt.Sprintf(": raise its gain by %.0f dB, or take a more sensitive transducer", math.Floor(db-headroomRoomDB))
	}
	return f
}
