package setup

import (
	"math"
	"math/bits"
	"slices"

	"shakerwatch/acquire/rig"
)

const (
	// clipShare is how near to its limit a sample counts as having reached it: one step of a 16 bit
	// converter below.
	clipShare = 1 - 0x1p-15

	// stretchFrames is how many frames are summed by themselves before their sums go into the totals,
	// so that rounding does not grow with the length of the stage.
	stretchFrames = 4096

	// tileFrames is how many frames are walked through channel by channel: those of 64 channels stay
	// in a processor's nearest memory.
	tileFrames = 64
)

// A Tally counts what raw samples show before any spectrum: range, mean, what sticks at an extreme,
// which channels are the same. Its memory does not grow with time, and what it holds does not
// depend on how the frames were cut into calls, bit for bit.
//
// A sample that is not finite makes the mean and the mean square of its channel NaN; what else is said of
// that channel is then not to be used.
type Tally struct {
	channels []channelTally
	frames   int64
	kept     *reservoir
}

// A channelTally is the tally of one channel.
type channelTally struct {
	volts, limit float64 // volts at digital full scale, and at which a sample counts as clipped

	min, max       float64
	run            int64   // samples equal to the newest one, up to it
	last           float64 // the newest sample; NaN before the first
	minRun, maxRun int64   // longest run at the minimum and at the maximum
	atLimit        int64
	hash           uint64 // of all samples' bits, in order

	// Sums of differences from the first sample, whose loss of digits is that of a mean that is a
	// few deviations away from 0.
	first                        float64
	sum, squares                 float64 // of the whole stretches
	stretchSum, stretchOfSquares float64 // of the present one
}

// NewTally makes an empty tally of the channels of r, forces first.
func NewTally(r *rig.Rig) *Tally {
	t := &Tally{}
	for _, ch := range r.Channels() {
		t.channels = append(t.channels, channelTally{volts: ch.FullScaleV, limit: ch.LimitV * clipShare})
	}
	t.kept = newReservoir(len(t.channels))
	t.Reset()
	return t
}

// Reset empties the tally and keeps its memory.
func (t *Tally) Reset() {
	t.frames = 0
	t.kept.reset()
	for ch := range t.channels {
		c := &t.channels[ch]
		*c = channelTally{volts: c.volts, limit: c.limit, min: math.NaN(), max: math.NaN(), last: math.NaN()}
	}
}

// Add takes whole frames, channel fastest in rig order with the forces first, as fractions of full
// scale. It allocates nothing, and panics when frames end within a frame.
func (t *Tally) Add(frames []float64) {
	n := len(t.channels)
	if len(frames)%n != 0 {
		panic("setup: tally got a part of a frame")
	}
	for len(frames) > 0 {
		count := min(len(frames)/n, tileFrames, stretchFrames-int(t.frames%stretchFrames))
		tile := frames[:count*n]
		frames = frames[count*n:]
		for ch := range t.channels {
			t.channels[ch].add(tile[ch:], n)
		}
		t.kept.add(tile)
		t.frames += int64(count)
		if t.frames%stretchFrames == 0 {
			for ch := range t.channels {
				t.channels[ch].fold()
			}
		}
	}
}

// add takes every stride-th of samples, the first one included.
func (c *channelTally) add(samples []float64, stride int) {
	if c.run == 0 {
		c.first, c.min, c.max = samples[0], samples[0], samples[0]
	}
	last, run, hash := c.last, c.run, c.hash
	sum, squares := c.stretchSum, c.stretchOfSquares
	for i := 0; i < len(samples); i += stride {
		v := samples[i]
		if v == last {
			run++
		} else {
			last, run = v, 1
		}
		if v >= c.max {
			c.maxRun = longest(c.maxRun, run, v > c.max)
			c.max = v
		}
		if v <= c.min {
			c.minRun = longest(c.minRun, run, v < c.min)
			c.min = v
		}
		if math.Abs(v*c.volts) >= c.limit {
			c.atLimit++
		}
		d := v - c.first
		sum += d
		squares += d * d
		hash = mix(hash, v)
	}
	c.last, c.run, c.hash = last, run, hash
	c.stretchSum, c.stretchOfSquares = sum, squares
}

// longest is the longest run at an extreme, of which run is the newest; fresh says that the extreme
// is a new one.
func longest(before, run int64, fresh bool) int64 {
	if fresh {
		return run
	}
	return max(before, run)
}

// mix enters a sample into a hash: equal hashes mean equal sequences but by a chance of 2^-64. The
// turn brings the sign and exponent, which multiplication alone would leave at the top, down to
// where it spreads them.
func mix(hash uint64, v float64) uint64 {
	const odd = 0x9e3779b97f4a7c15 // 2^64 over the golden ratio: bits without a pattern
	// Adding 0 makes -0, which is the same signal, into 0.
	return (bits.RotateLeft64(hash, 25) ^ math.Float64bits(v+0)) * odd
}

func (c *channelTally) fold() {
	c.sum += c.stretchSum
	c.squares += c.stretchOfSquares
	c.stretchSum, c.stretchOfSquares = 0, 0
}

// Frames is how many frames were taken.
func (t *Tally) Frames() int64 { return t.frames }

// Channels is the number of channels.
func (t *Tally) Channels() int { return len(t.channels) }

// Range is the lowest and the highest sample of a channel as fractions of full scale, NaN without
// frames.
func (t *Tally) Range(ch int) (lowest, highest float64) {
	return t.channels[ch].min, t.channels[ch].max
}

// Mean is the mean of a channel's samples as a fraction of full scale, NaN without frames.
func (t *Tally) Mean(ch int) float64 {
	c := &t.channels[ch]
	return c.first + (c.sum+c.stretchSum)/float64(t.frames)
}

// MeanSquare is the mean square of a channel's samples, 0 Hz included, as a fraction of full scale
// squared. It is NaN without frames.
func (t *Tally) MeanSquare(ch int) float64 {
	c := &t.channels[ch]
	n := float64(t.frames)
	shift := (c.sum + c.stretchSum) / n
	variance := (c.squares+c.stretchOfSquares)/n - shift*shift
	if variance < 0 {
		variance = 0 // by rounding
	}
	mean := c.first + shift
	return variance + mean*mean
}

// AtLimit is how many samples of a channel reached its limit: |digital*full_scale| >= limit*(1-2^-15).
func (t *Tally) AtLimit(ch int) int64 { return t.channels[ch].atLimit }

// Constant tells whether all samples of a channel are the same, of which there are at least two.
func (t *Tally) Constant(ch int) bool { return t.frames > 1 && t.channels[ch].run == t.frames }

// LongestRuns is how many samples in a row were a channel's minimum, and its maximum, at most.
func (t *Tally) LongestRuns(ch int) (lowest, highest int64) {
	return t.channels[ch].minRun, t.channels[ch].maxRun
}

// Identical lists the groups of two or more channels with the same samples, first to last. Constant
// channels belong to none: they are dead and not the same.
func (t *Tally) Identical() [][]int {
	type imprint struct {
		hash     uint64
		min, max float64
	}
	groups := map[imprint][]int{}
	for ch := range t.channels {
		if c := &t.channels[ch]; t.frames > 0 && !t.Constant(ch) {
			p := imprint{c.hash, c.min, c.max}
			groups[p] = append(groups[p], ch)
		}
	}
	var list [][]int
	for _, group := range groups {
		if len(group) > 1 {
			list = append(list, group)
		}
	}
	slices.SortFunc(list, slices.Compare)
	return list
}
