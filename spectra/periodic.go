package spectra

// A PeriodicCutter cuts the periods to keep out of each random block of a stream: a random sequence
// repeated with a known period, then another one. The forces, the first channels, tell where it
// changes.
//
// There the forces differ from what they were a period earlier, for one period. How much they differ,
// relative to their power, is summed over the 32nd part of a period at a time: difference energy over
// mean energy is 2 where two random sequences are compared, 2 n²/(1 + n²) where one repeats under noise
// of n times its level. The forces' energies are added as they are, so that a force of noise alone weighs
// as little as it is; what is constant in them, a load cell's offset, is left out.
//
// A block, the kept periods, starts settle periods behind the change, less a margin of a 32nd part of a
// period, at least 16 frames: within a sequence that repeats, early costs nothing, while late would take
// in frames of the next sequence. Without periods to settle there is no margin.
//
// A random block gives no block when its change was not seen (the stream began in it, or frames were
// lost there or a period before), when it has fewer than settle + keep periods, when the forces do not
// repeat behind its first period, or when they are more than 30 dB below those of the block before: what
// hums while amplifiers are off repeats, too. The third one in a row that is so weak is taken for a new
// level. Kept periods with lost frames are cut all the same, but a loss of three quarters of a period
// or more may hide a change: then there is no block.
type PeriodicCutter struct {
	tape         *tape
	forces       int
	period       int64
	settle, keep int64 // periods
	margin       int64 // frames
	part         int64 // frames whose difference is summed; the stream is parted from frame 0 on

	index  int64
	start  int64 // of the block that is full or being filled
	open   bool  // a change was seen and its block is still to come
	full   bool
	change int64   // the last change seen
	power  float64 // of the last block

	parts   []part // a ring; part a stands at a modulo its length
	now     part   // being filled
	means   []float64
	sums    []float64 // by force, of the frames since the last multiple of the period that were not lost
	counted int64
	step    []float64 // differences around a change
	powers  []float64 // mean energies of the parts of a block

	blind     int64 // parts in a row with lost frames
	differing int64 // parts in a row that differ, but for lost ones
	repeating int64 // parts in a row that repeat, but for lost ones
	repeated  bool
	unlike    int64 // frames with force since the forces last repeated
	still     int64 // frames without force in a row
	short     int   // random blocks in a row that were too short
	weak      int   // the same, too weak
	divisor   int64 // the forces of the last block repeat so many times within the period; 0 is once
	texts     periodicTexts
}

// A part is what became of the frames of one part of the stream.
type part struct {
	difference float64 // energy of the difference to the frames a period earlier
	energy     float64 // mean energy of both about the forces' means
	raw        float64 // of the frames themselves
	lost       bool    // some of either were lost
}

const (
	periodParts = 32

	// Two sequences differ by 2, noise of 30 % makes 0.17, of 50 % still 0.4. Forces in a tenth of the
	// band hold few independent values in a part, which scatter about that.
	unlikeShare = 0.7
	alikeShare  = 0.5

	// edgeParts is how many parts on either side of a change are compared. It is placed with frames from
	// three times as many before, as the scatter may have shown it late.
	edgeParts  = 4
	placeParts = 4*edgeParts + 1

	// differenceFloor is the difference below which nothing matters when a change is placed, as a share of
	// that around it: 30 dB, so that what a decimator makes of a change before it is not taken for it.
	differenceFloor = 1e-3

	// jump is by how much the difference rises at a change behind silence or noise, at least.
	jump = 4

	// changedShare of the parts of a period must differ for a change. A knock is shorter, even with its
	// image a period later.
	changedShare = 0.6

	// A load cell's offset, subtracted, leaves rounding of this share of its energy, far below any signal.
	roundingShare = 1e-20

	// weakShare is 30 dB. Levels change by less between random blocks; from 20 dB on a drive counts as
	// stopped.
	weakShare = 1e-3

	minPeriodMargin = 16 // frames
	shortBlocks     = 3  // in a row are a trouble
	weakBlocks      = 3  // in a row are a new level
	manyBlocks      = 10 // times settle + keep periods without a change are
)

// NewPeriodicCutter makes a PeriodicCutter of blocks of keep periods of the given number of frames
// from a stream whose first forces channels are forces. settle is how many periods behind a change are
// left out. decimation is how many source frames make a frame, for the sentences of Trouble. It keeps at most
// keep + 1 periods and 32 frames of all channels. It panics unless 1 <= forces <= channels, period >= 1,
// settle >= 0, keep >= 2 and decimation >= 1.
//
// A change is placed well with periods from some 256 frames on; periods below 64 may give no blocks.
func NewPeriodicCutter(channels, forces, period, settle, keep, decimation int) *PeriodicCutter {
	if forces < 1 || forces > channels || period < 1 || settle < 0 || keep < 2 || decimation < 1 {
		panic("spectra: periodic cutter needs 1 <= forces <= channels, period >= 1, settle >= 0, keep >= 2 and decimation >= 1")
	}
	c := &PeriodicCutter{
		forces: forces,
		period: int64(period), settle: int64(settle), keep: int64(keep),
		part:  int64(max(1, period/periodParts)),
		means: make([]float64, forces),
		sums:  make([]float64, forces),
		texts: newPeriodicTexts(period*decimation, settle, keep),
	}
	if settle > 0 {
		c.margin = min(max(c.period/32, minPeriodMargin), c.period/4)
	}
	c.parts = make([]part, c.wait()+2*edgeParts+1)
	c.step = make([]float64, placeParts*c.part)
	c.powers = make([]float64, 0, c.keep*c.period/c.part)
	// A change is placed when a period and two parts are behind it, from differences to the period before it.
	c.tape = newTape(channels, keep*period+int(8*edgeParts*c.part))
	return c
}

// wait is how many parts behind an edge must be here for it to be judged.
func (c *PeriodicCutter) wait() int64 { return max(c.period/c.part, 2*edgeParts) + 1 }

// Put takes frames (channel fastest), lost for those that stand for lost ones, until a block is full
// and returns how many samples it took. It panics when len(frames) is no multiple of the number of
// channels.
func (c *PeriodicCutter) Put(frames []float64, lost bool) (taken int) {
	n := int64(c.tape.frames(frames))
	for !c.full && n > 0 {
		end := c.tape.end
		size := min(n, c.part-end%c.part, c.period-end%c.period)
		if c.open && c.end() > end {
			size = min(size, c.end()-end)
		}
		c.tape.put(frames[taken:taken+int(size)*c.tape.channels], lost)
		taken += int(size) * c.tape.channels
		n -= size
		c.take(end)
	}
	return taken
}

// end is the frame behind the block that is being filled.
func (c *PeriodicCutter) end() int64 { return c.start + c.keep*c.period }

// take looks at the frames from one on that are new on the tape.
func (c *PeriodicCutter) take(from int64) {
	for n := from; n < c.tape.end; n++ {
		c.addTo(&c.now, n)
		if !c.tape.isLost(n) {
			c.counted++
			for i := range c.sums {
				c.sums[i] += c.tape.at(i, n)
			}
		}
	}
	if c.tape.end%c.period == 0 {
		c.centre()
	}
	if c.tape.end%c.part == 0 {
		c.close()
	}
	if c.open && c.tape.end >= c.end() {
		c.decide()
	}
}

// addTo adds a frame to a part.
func (c *PeriodicCutter) addTo(p *part, n int64) {
	before := n - c.period
	p.lost = p.lost || c.tape.isLost(n) || c.tape.isLost(before)
	for i, mean := range c.means {
		x, y := c.tape.at(i, n), c.tape.at(i, before)
		p.difference += square(x - y)
		p.energy += (square(x-mean) + square(y-mean)) / 2
		p.raw += square(x)
	}
}

// centre makes the forces' means those of the period that has ended, if half of it is known.
func (c *PeriodicCutter) centre() {
	if 2*c.counted >= c.period {
		for i, sum := range c.sums {
			c.means[i] = sum / float64(c.counted)
		}
	}
	clear(c.sums)
	c.counted = 0
}

// unlike and alike tell whether a part's frames are others than a period before, or the same but for
// noise. Neither is true of silence and of lost frames.
func (p part) unlike() bool { return p.sounds() && p.difference > unlikeShare*p.energy }
func (p part) alike() bool  { return p.sounds() && p.difference < alikeShare*p.energy }
func (p part) sounds() bool { return !p.lost && p.energy > roundingShare*p.raw }

// close ends the part that is being filled.
func (c *PeriodicCutter) close() {
	c.parts[(c.tape.end/c.part-1)%int64(len(c.parts))] = c.now
	c.follow(c.now)
	c.now = part{}
	if edge := c.tape.end/c.part - 1 - c.wait(); edge >= 0 {
		if at, ok := c.changeAt(edge); ok {
			c.begin(at)
		}
	}
}

// begin begins a random block at its change.
func (c *PeriodicCutter) begin(change int64) {
	if c.open {
		c.short++
	}
	c.open, c.change = true, change
	c.start = max(0, change-c.margin) + c.settle*c.period
}

// follow keeps count of how the forces repeat, and gives up the block being filled when they stop to
// behind its first period: either the random block changes, or it did while frames were lost.
func (c *PeriodicCutter) follow(p part) {
	if p.lost {
		if c.blind++; 4*c.blind*c.part >= 3*c.period {
			c.open = false // too few frames are left to compare
		}
		return
	}
	c.blind = 0
	if !p.unlike() || c.tape.end <= c.change+c.period+3*c.part {
		c.differing = 0
	} else if c.differing++; c.open && 4*c.differing*c.part >= c.period {
		c.open = false
		c.short++
	}
	if p.alike() {
		c.repeating++
	} else if p.unlike() {
		c.repeating = 0
	}
	switch {
	case 2*c.repeating*c.part >= c.period:
		c.repeated, c.unlike = true, 0
	case p.sounds():
		c.unlike += c.part
	}
	if c.still += c.part; p.sounds() {
		c.still = 0
	}
}

// decide decides about the block whose last frame is here.
func (c *PeriodicCutter) decide() {
	c.open = false
	power, ok := c.repeats()
	if !ok {
		c.short++
		return
	}
	if c.weak++; power < weakShare*c.power && c.weak < weakBlocks {
		return
	}
	c.power, c.weak, c.short, c.divisor = power, 0, 0, c.repeatsWithin()
	c.full = true
}

// Full tells whether a block is complete. A full cutter takes no frames until Advance.
func (c *PeriodicCutter) Full() bool { return c.full }

// Index is the running number of the block that is full or comes next.
func (c *PeriodicCutter) Index() int64 { return c.index }

// Start is the first kept frame of the full block, counted over the stream, lost frames too.
func (c *PeriodicCutter) Start() int64 { return c.start }

// CopyTo copies the kept periods of the full block, channel by channel, keep · period samples each,
// into dst. It panics when dst has another length or no block is full.
func (c *PeriodicCutter) CopyTo(dst []float64) {
	if int64(len(dst)) != int64(c.tape.channels)*c.keep*c.period || !c.full {
		panic("spectra: cutter has no such block")
	}
	c.tape.copyTo(dst, c.start)
}

// Advance leaves the full block. It panics when none is.
func (c *PeriodicCutter) Advance() {
	if !c.full {
		panic("spectra: cutter advanced before its block was full")
	}
	c.full = false
	c.index++
}

// Filled is the share, 0 to 1, of the random block being filled that is here, its settling periods
// counted; 0 until its change is known, which takes a period.
func (c *PeriodicCutter) Filled() float64 {
	if !c.open && !c.full {
		return 0
	}
	return min(1, float64(c.tape.end-c.change)/float64(c.end()-c.change))
}

// Oldest is a frame before which neither the full block nor a later one starts.
func (c *PeriodicCutter) Oldest() int64 {
	// The earliest change that is not yet judged.
	oldest := (c.tape.end/c.part-c.wait()-3*edgeParts)*c.part - c.margin + c.settle*c.period
	oldest = min(max(0, oldest), c.tape.end)
	if c.open || c.full {
		oldest = min(oldest, c.start)
	}
	return oldest
}

// Repeated tells whether the forces have ever repeated with the period, for half a period at least.
// Where they never do, the period is wrong, or generator and input run on clocks of their own.
func (c *PeriodicCutter) Repeated() bool { return c.repeated }
