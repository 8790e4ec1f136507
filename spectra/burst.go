package spectra

import (
	"math"
	"slices"
)

// A BurstCutter cuts one block for each burst of a stream whose bursts come once a period. When they
// come it finds from the forces, the first channels; their energies are added as they are, so that a
// force of noise alone weighs as little as it is.
//
// It waits for three periods without lost frames that hold a burst each, at the same place within them:
// energies folded over the period, the median of the three, must step up by 10 dB in one place, and so
// must each burst by itself there. From these three periods on it cuts every burst that is wholly there.
//
// A block starts a margin before its burst: before the earliest of the places that the last five bursts
// give, or where this burst begins itself if that is earlier. Early costs nothing when bursts die out
// before the block ends; late would lose the onset. So bursts are followed that come a little faster or
// slower than declared.
//
// A block is left out when forces are on and its burst is not where it should be. When they are off the
// block is cut, so that it can be judged. After three bursts in a row that are missing it begins anew.
// Blocks never overlap. A block with lost frames is cut all the same.
type BurstCutter struct {
	tape          *tape
	forces, block int
	period        float64
	bins          int   // the parts of a period that are told apart in a fold
	reach         int64 // how far from its expected place a burst is looked for, frames
	margin        int64

	index   int64
	locked  bool
	from    int64 // no block starts before this frame
	found   int64 // from, when the phase was found last
	due     int64 // the frame count at which something can be decided
	start   int64 // of the full block, or where the next one is expected
	full    bool
	burst   int64      // the number of the burst that is expected; burst 0 is the first of the fold
	places  [5]float64 // of the last bursts, less burst · period; a ring
	placed  int        // bursts so far in places
	missing int        // bursts in a row
	level   float64    // mean energy of the last block with a burst

	folded   [burstPeriods][]float64 // (period, bin)
	fold     []float64
	counts   []int
	means    []float64 // by force
	energies []float64 // around an onset
	trouble  burstTrouble
}

type burstTrouble int

const (
	noTrouble burstTrouble = iota
	noBursts
	otherPeriod
	moreBursts
)

const (
	// burstPeriods is how many periods the phase is decided from: the median of three outvotes one that
	// was disturbed.
	burstPeriods = 3

	// maxBurstBins parts a period finely enough for a quiet stretch of a twentieth, and minBinFrames keep
	// the scatter of a bin's energy well below burstStep.
	maxBurstBins = 64
	minBurstBins = 8
	minBinFrames = 16

	// burstStep is by how much the energy steps up at the start of a burst, at least: 10 dB. The energy
	// of continuous random force does not within a bin's length.
	burstStep = 10

	// burstFloor is the quiet below which nothing matters, as a share of the largest bin: 40 dB.
	burstFloor = 1e-4

	// quietFloor is the quiet before a burst below which nothing matters, as a share of the energy
	// around its start: 120 dB, less than what a decimator makes of an onset before it.
	quietFloor = 1e-12

	// burstMargin is made up of the slope that a decimated onset has (3 frames) and the rounding of a
	// period that is no whole number (1) and of the place (1).
	burstMargin = 5

	// burstDrift is how far the true period may be from the declared one, relative; the clocks of two good
	// instruments agree better. The place of the next burst lags behind by up to five periods of it.
	burstDrift = 1e-5

	// burstMissing is after how many missing bursts the phase is looked for anew. Two silent blocks are
	// what it takes to name a drive that has stopped.
	burstMissing = 3
)

// NewBurstCutter makes a BurstCutter of blocks of the given number of frames from a stream whose first
// forces channels are forces and whose bursts come every period frames, which need not be a whole
// number. It keeps fewer than 4 periods and 32 frames of all channels, 3.2 periods when they are long. It
// panics unless 1 <= forces <= channels and 1 <= block < period + 1.
func NewBurstCutter(channels, forces, block int, period float64) *BurstCutter {
	if forces < 1 || forces > channels || block < 1 || !(float64(block) < period+1) {
		panic("spectra: burst cutter needs 1 <= forces <= channels and 1 <= block < period + 1")
	}
	c := &BurstCutter{
		forces: forces, block: block, period: period,
		bins:   min(max(int(period/minBinFrames), minBurstBins), maxBurstBins),
		margin: burstMargin + int64(math.Ceil(float64(len(BurstCutter{}.places))*burstDrift*period)),
		means:  make([]float64, forces),
	}
	c.reach = int64(math.Ceil(2 * period / float64(c.bins)))
	c.tape = newTape(channels, int(math.Ceil(burstPeriods*period))+4*int(c.reach+c.margin))
	c.fold, c.counts = make([]float64, c.bins), make([]int, c.bins)
	for j := range c.folded {
		c.folded[j] = make([]float64, c.bins)
	}
	c.energies = make([]float64, 2*c.reach)
	c.seek(0)
	return c
}

// Put takes frames (channel fastest), lost for those that stand for lost ones, until a block is full
// and returns how many samples it took. It panics when len(frames) is no multiple of the number of
// channels.
func (c *BurstCutter) Put(frames []float64, lost bool) (taken int) {
	n := int64(c.tape.frames(frames))
	for !c.full && n > 0 {
		part := min(n, c.due-c.tape.end)
		c.tape.put(frames[taken:taken+int(part)*c.tape.channels], lost)
		taken += int(part) * c.tape.channels
		n -= part
		c.work()
	}
	return taken
}

// work decides what can be decided.
func (c *BurstCutter) work() {
	for !c.full && c.due <= c.tape.end {
		if c.locked {
			c.judge()
		} else {
			c.look()
		}
	}
}

// seek begins to look for the phase in three periods from a frame on.
func (c *BurstCutter) seek(from int64) {
	c.locked = false
	c.from = max(from, c.tape.oldest())
	c.due = c.from + int64(math.Ceil(burstPeriods*c.period)) + 2*c.reach
}

// look looks for the phase in the three periods that are here.
func (c *BurstCutter) look() {
	if last := c.tape.lastLost(c.from, c.due); last >= 0 {
		c.seek(last + 1)
		return
	}
	bin, more := c.onset()
	if bin < 0 {
		c.trouble = noBursts
		c.seek(c.from + int64(math.Ceil(c.period)))
		return
	}
	first := float64(c.from) + float64(bin)*c.period/float64(c.bins)
	if first-float64(c.reach) < float64(c.from) {
		first += c.period
	}
	c.placed = 0
	for j := range burstPeriods {
		shift := float64(j) * c.period
		at, ok := c.measure(first + shift)
		if !ok {
			c.trouble = noBursts
			c.seek(c.from + int64(math.Ceil(c.period)))
			return
		}
		c.place(float64(at) - shift)
	}
	if places := c.places[:c.placed]; slices.Max(places)-slices.Min(places) > c.scatter() {
		c.trouble = otherPeriod
		c.seek(c.from + int64(math.Ceil(c.period)))
		return
	}
	c.trouble = noTrouble
	if more {
		c.trouble = moreBursts
	}
	c.locked, c.found, c.missing, c.level = true, c.from, 0, 0
	c.burst = int64(math.Ceil((float64(c.from+c.margin) - slices.Min(c.places[:c.placed])) / c.period))
	c.expect()
}

// scatter is how far the three bursts of a fold may be off the declared period, frames: onsets of a
// low-frequency force in noise easily differ by some 16.
func (c *BurstCutter) scatter() float64 { return max(16, c.period/256) }

// place remembers where a burst was, less burst · period.
func (c *BurstCutter) place(at float64) {
	c.places[c.placed%len(c.places)] = at
	c.placed++
}

// expected is where the next burst begins.
func (c *BurstCutter) expected() float64 {
	known := c.places[:min(c.placed, len(c.places))]
	return slices.Min(known) + float64(c.burst)*c.period
}

// expect makes ready for the next burst.
func (c *BurstCutter) expect() {
	at := int64(math.Floor(c.expected()))
	c.start = max(at-c.margin, c.from)
	c.due = max(c.start+int64(c.block), at+c.reach)
}

// judge decides about the block of the burst that is expected.
func (c *BurstCutter) judge() {
	at, found := c.measure(c.expected())
	energy, lost := c.energy()
	switch {
	case found:
		c.start = max(min(c.start, at-c.margin), c.from)
		c.place(float64(at) - float64(c.burst)*c.period)
		c.full = at >= c.start
		c.missing, c.level = 0, energy
		if c.trouble != moreBursts {
			c.trouble = noTrouble
		}
	case lost:
		c.full = true
	default:
		c.missing++
		c.full = burstStep*energy < c.level
		if c.missing > 1 {
			c.trouble = noBursts
		}
	}
	if !c.full {
		c.leave()
	}
}

// leave goes on to the next burst, or to a new phase when too many were missing.
func (c *BurstCutter) leave() {
	if c.missing >= burstMissing {
		c.seek(max(c.from, c.found+int64(math.Ceil(c.period)))) // never twice in the same three periods
		return
	}
	c.burst++
	c.expect()
}

// Full tells whether a block is complete. A full cutter takes no frames until Advance.
func (c *BurstCutter) Full() bool { return c.full }

// Index is the running number of the block that is full or comes next.
func (c *BurstCutter) Index() int64 { return c.index }

// Start is the first frame of the full block, counted over the stream, lost frames too.
func (c *BurstCutter) Start() int64 { return c.start }

// CopyTo copies the full block, channel by channel, block samples each, into dst. It panics when dst
// has another length or no block is full.
func (c *BurstCutter) CopyTo(dst []float64) {
	if len(dst) != c.tape.channels*c.block || !c.full {
		panic("spectra: cutter has no such block")
	}
	c.tape.copyTo(dst, c.start)
}

// Advance leaves the full block. The next one may be full already. It panics when none is.
func (c *BurstCutter) Advance() {
	if !c.full {
		panic("spectra: cutter advanced before its block was full")
	}
	c.full = false
	c.index++
	c.from = c.start + int64(c.block)
	c.leave()
	c.work()
}

// Filled is the share, 0 to 1, of the block being filled that is here; 0 while the phase is unknown.
func (c *BurstCutter) Filled() float64 {
	if !c.locked {
		return 0
	}
	return min(1, max(0, float64(c.tape.end-c.start)/float64(c.block)))
}

// Oldest is a frame before which neither the full block nor a later one starts.
func (c *BurstCutter) Oldest() int64 {
	if c.full {
		return c.start
	}
	return c.from
}

// Trouble says what keeps blocks from being found and what to do. It is empty when nothing does.
func (c *BurstCutter) Trouble() string {
	switch c.trouble {
	case noBursts:
		return "The forces show no bursts that come once in the declared period: check that the drive is on, that the excitation is burst random, and the period."
	case otherPeriod:
		return "The forces show bursts, but not once in the declared period: check the period."
	case moreBursts:
		return "The forces show more than one burst in the declared period, of which one is used: check the period."
	}
	return ""
}
