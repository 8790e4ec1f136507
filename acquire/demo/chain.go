package demo

// A chain is what a channel's sensor, cable and conditioner make of what is to be measured.
type chain struct {
	gain     float64 // 1 is sound
	late     int     // whole frames
	cut      bool
	dead     bool
	constant float64 // of a dead channel, share of full scale
	flutters []*flutter
}

var soundChain = chain{gain: 1}

// digital is the sample for a force or acceleration along the positive axis. The sensor's noise goes on whatever
// is broken, so that a channel is what it would have been when the fault is over.
func (c *chain) digital(s *sensor, value float64) float64 {
	for _, f := range c.flutters {
		value = f.of(value)
	}
	if c.cut {
		value = 0
	}
	fraction := s.amplified(value, c.gain)
	if c.dead {
		return s.clipped(c.constant)
	}
	return fraction
}
