package spectra

import "math"

// A TriggerCutter cuts one block for each burst of a stream, started by a trigger on the magnitude
// |x| of one channel.
//
// Frame n triggers when |x(n)| is above a share, the level, of the peak of |x| so far. Its block
// starts a fixed number of frames, pre, before n; no frame of a block triggers a new one, though the
// next block's pre frames may reach back into it. When the peak has grown by more than 1/level
// by the block's end, n stood in the noise before the first real burst: it is dropped, and so is a
// block that would start before frame 0. The search then goes on at n + 1 with the peak now known.
//
// A burst makes a block only when its start was seen, so that neither the rest of a burst (behind the
// beginning of the stream, lost frames, or the end of a block) nor noise alone does: none of the
// triggerHush frames before n may be above the trigger, and the mean square of the frames before n,
// a sixteenth of a block, must be below a quarter of that of as many from n on. With fewer frames
// before n it must be lower in proportion to their number squared.
//
// Lost frames do not trigger and do not count for the peak. A block with lost frames behind its
// trigger is cut all the same.
type TriggerCutter struct {
	tape            *tape
	channel         int
	block, pre, run int // frames; run: those compared before and after a trigger
	level           float64

	index    int64
	scan     int64   // the next frame to test
	known    int64   // frames that the peak counts
	peak     float64 // of |x| over them
	found    bool    // scan has triggered, its start was seen, its block is not complete
	full     bool    // it is
	peakThen float64 // the peak when it triggered

	lastEnd      int64 // the end of the last block
	waited, loud int64 // frames tested since then; those that triggered without quiet before them
	ended        bool  // one of those stood right behind the last block
	overlong     bool  // the same of the last block about which it is known
}

const (
	// triggerHush is for how many frames a force stays below the trigger before a burst. Random force
	// at 10 % of its peak does so in a burst in one place of some 20,000 (0.28^8, normal values).
	triggerHush = 8

	// A step of 6 dB and windows of a sixteenth of a block, which hold hundreds of values, tell a burst
	// from the scatter of steady noise; more than maxTriggerRun frames tell no more.
	triggerStep   = 4
	triggerShare  = 16
	minTriggerRun = 16
	maxTriggerRun = 1024

	// triggerPatience is after how many blocks' length without a block it is said why. Bursts come once a
	// block or a little slower; common practice, no source.
	triggerPatience = 8

	// triggerLoud is one in how many frames a force that is never quiet triggers, at least: random force
	// does so in one of 22 at 50 % of a peak of four standard deviations.
	triggerLoud = 100
)

// NewTriggerCutter makes a TriggerCutter of blocks of the given number of frames that start pre
// frames before channel exceeds level times its peak. It keeps fewer than 2 block + 2048 frames of all
// channels. It panics unless 0 <= channel < channels, 0 < level < 1 and 0 <= pre < block.
func NewTriggerCutter(channels, channel, block, pre int, level float64) *TriggerCutter {
	if channel < 0 || channel >= channels || !(level > 0 && level < 1) || pre < 0 || pre >= block {
		panic("spectra: trigger needs 0 <= channel < channels, 0 < level < 1 and 0 <= pre < block")
	}
	run := min(max(block/triggerShare, minTriggerRun), maxTriggerRun)
	return &TriggerCutter{
		// What a search looks back on (pre or run) and what it takes in at a time, at least a block.
		tape:    newTape(channels, max(pre, run, triggerHush)+block+run),
		channel: channel, block: block, pre: pre, run: run, level: level,
	}
}

// Put takes frames (channel fastest), lost for those that stand for lost ones, until a block is full
// and returns how many samples it took. It panics when len(frames) is no multiple of the number of
// channels.
func (c *TriggerCutter) Put(frames []float64, lost bool) (taken int) {
	n := c.tape.frames(frames)
	for !c.full && n > 0 {
		needed := max(0, c.scan-int64(max(c.pre, c.run, triggerHush)))
		room := min(n, c.tape.room-int(c.tape.end-needed))
		c.tape.put(frames[taken:taken+room*c.tape.channels], lost)
		taken += room * c.tape.channels
		n -= room
		c.search()
	}
	return taken
}

// search goes on until a block is full or more frames are needed.
func (c *TriggerCutter) search() {
	for !c.full {
		if !c.found && !c.next() {
			return
		}
		end := c.Start() + int64(c.block)
		if c.tape.end < end {
			return
		}
		c.listen(end)
		c.found = false
		if c.peak > c.peakThen/c.level {
			c.pass() // what triggered was noise
			continue
		}
		c.full = true
	}
}

// next moves scan on to a frame that triggers and is the start of a burst. It is false when more
// frames are needed to tell.
func (c *TriggerCutter) next() bool {
	for ; c.scan < c.tape.end; c.pass() {
		c.listen(c.scan + 1)
		if !c.above(c.scan) {
			continue
		}
		if c.scan+int64(c.after()) > c.tape.end {
			return false
		}
		c.peakThen = c.peak
		c.listen(c.scan + int64(c.after()))
		if !c.starts() {
			c.loud++
			if c.scan < c.lastEnd+triggerHush && c.index > 0 {
				c.ended, c.overlong = true, true
			}
			continue
		}
		c.overlong = c.ended
		if c.scan >= int64(c.pre) {
			c.found = true
			return true
		}
	}
	return false
}

// pass moves scan on by a frame.
func (c *TriggerCutter) pass() {
	if !c.tape.isLost(c.scan) {
		c.waited++
	}
	c.scan++
	if c.scan == c.lastEnd+triggerHush {
		c.overlong = c.ended
	}
}

// listen counts the frames before end for the peak.
func (c *TriggerCutter) listen(end int64) {
	for ; c.known < end; c.known++ {
		if !c.tape.isLost(c.known) {
			c.peak = max(c.peak, math.Abs(c.tape.at(c.channel, c.known)))
		}
	}
}

// above tells whether a frame is above the trigger.
func (c *TriggerCutter) above(frame int64) bool {
	return !c.tape.isLost(frame) && math.Abs(c.tape.at(c.channel, frame)) > c.level*c.peak
}

// after is how many frames from a trigger on are looked at. They lie in its block.
func (c *TriggerCutter) after() int { return min(c.run, c.block-c.pre) }

// starts tells whether the frames around scan are those at the start of a burst.
func (c *TriggerCutter) starts() bool {
	var before, after float64
	seen, count := 0, 0
	for n := c.scan - 1; n >= 0 && seen < c.run && !c.tape.isLost(n); n-- {
		if seen < triggerHush && c.above(n) {
			return false
		}
		before += square(c.tape.at(c.channel, n))
		seen++
	}
	for n := c.scan; n < c.scan+int64(c.after()); n++ {
		if !c.tape.isLost(n) {
			after += square(c.tape.at(c.channel, n))
			count++
		}
	}
	if seen == 0 {
		return false
	}
	share := float64(seen) / float64(c.run)
	return triggerStep*before/float64(seen) < share*share*after/float64(count)
}

// Full tells whether a block is complete. A full cutter takes no frames until Advance.
func (c *TriggerCutter) Full() bool { return c.full }

// Index is the running number of the block that is full or comes next.
func (c *TriggerCutter) Index() int64 { return c.index }

// Start is the first frame of the full block, counted over the stream, lost frames too.
func (c *TriggerCutter) Start() int64 { return c.scan - int64(c.pre) }

// CopyTo copies the full block, channel by channel, block samples each, into dst. It panics when dst
// has another length or no block is full.
func (c *TriggerCutter) CopyTo(dst []float64) {
	if len(dst) != c.tape.channels*c.block || !c.full {
		panic("spectra: cutter has no such block")
	}
	c.tape.copyTo(dst, c.Start())
}

// Advance leaves the full block. The next one may be full already. It panics when none is.
func (c *TriggerCutter) Advance() {
	if !c.full {
		panic("spectra: cutter advanced before its block was full")
	}
	c.lastEnd = c.Start() + int64(c.block)
	c.scan = c.lastEnd
	c.waited, c.loud, c.ended, c.full = 0, 0, false, false
	c.index++
	c.search()
}

// Filled is the share, 0 to 1, of the block being filled that is here.
func (c *TriggerCutter) Filled() float64 {
	if !c.found && !c.full {
		return 0
	}
	return min(1, float64(c.tape.end-c.Start())/float64(c.block))
}

// Oldest is a frame before which neither the full block nor a later one starts.
func (c *TriggerCutter) Oldest() int64 { return max(0, c.Start()) }

// Trouble says what keeps blocks from being found, or spoils them, and what to do. It is empty when
// nothing does.
func (c *TriggerCutter) Trouble() string {
	switch late := c.waited > triggerPatience*int64(c.block) && !c.found && !c.full; {
	case late && c.loud*triggerLoud > c.waited:
		return "The trigger force is never quiet before it exceeds its trigger level, so no burst begins: check that the excitation is burst random, or raise the trigger level."
	case late:
		return "The trigger force stays below its trigger level: switch the drive on, lower the trigger level, or run again if a knock has set the force's peak too high."
	case c.overlong:
		return "The trigger force is still above its trigger level where a block ends: make the bursts shorter, or the line spacing finer so that blocks are longer."
	}
	return ""
}

func square(x float64) float64 { return x * x }
