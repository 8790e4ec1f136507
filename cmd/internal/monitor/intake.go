package monitor

import (
	"math"
	"sync/atomic"
	"time"

	"shakerwatch/acquire/decimate"
	"shakerwatch/acquire/rig"
	"shakerwatch/estimate"
	"shakerwatch/estimate/watch"
	"shakerwatch/spectra"
)

// A cut is one block of the grid, in order, with what is known of it before its transform.
type cut struct {
	index    int64
	start    int64          // its first source frame
	before   int64          // the source frame behind its last one
	block    *spectra.Block // nil when it is not to be averaged
	lost     watch.Lost     // lost frames that it touches
	atLimit  []bool         // by channel; nil when none reached its limit
	overload bool           // no memory was free: the arithmetic is too slow
	gaps     int64          // stretches of lost frames up to here

	// notice says that this is no block: trouble is what has begun to keep blocks from being found, or
	// empty when that is over.
	notice  bool
	trouble string
}

// intake turns chunks into engineering units, decimates them and cuts them into blocks.
type intake struct {
	from *capture
	cuts chan cut
	free chan *spectra.Block
	live bool
	only map[int64]bool // starts of the blocks wanted, whatever is wrong with them; nil is all good ones

	onFrames func([]float64) // Config.OnFrames

	rateHz  float64 // of the source
	factors []float64
	grid    rig.Grid
	half    int64 // the decimator's half length, source frames

	blockFrames int64 // source frames in a block, all its periods

	filter  *decimate.Filter
	cutter  cutter
	trouble string // the cutter's, when it was last told
	meter   *meter
	lost    marks
	atLimit []marks // by channel
	pending []cut   // in order

	frames    int64        // source frames taken, lost ones among them
	taken     atomic.Int64 // the same, for other goroutines
	cutFrames int64        // analysis frames that the cutter has taken
	gaps      int64        // stretches of lost frames so far
	gapBefore bool         // the newest frame was a lost one
	scaled    []float64
	analysis  []float64 // frames that left the decimator
	zeros     []float64
}

// Memory for blocks between intake and average: enough to keep all workers busy and to ride out a
// slow moment, within a bound on memory.
const (
	minBlocks     = 3
	maxBlocks     = 16
	blockMemory   = 256 << 20 // bytes
	maxCuts       = 1024      // blocks without memory may wait, too
	zeroFrames    = 256
	bytesPerFloat = 8
)

func newIntake(c Config, from *capture) *intake {
	r, shape := c.Rig, estimate.ShapeOf(c.Rig)
	n := shape.Channels()
	t := &intake{
		from:     from,
		cuts:     make(chan cut, maxCuts),
		live:     c.Live,
		only:     startSet(c.Only),
		onFrames: c.OnFrames,
		rateHz:   r.Source.RateHz,
		grid:     r.Grid,
		half:     int64(decimate.HalfLength(r.Grid.Decimation)),

		blockFrames: r.BlockFrames(),

		filter:  decimate.New(r.Grid.Decimation, n),
		cutter:  newCutter(r, c.Only),
		meter:   newMeter(r, c.OnLevels),
		atLimit: make([]marks, n),
		zeros:   make([]float64, zeroFrames*n),
	}
	for _, ch := range r.Channels() {
		t.factors = append(t.factors, ch.Scale())
	}
	periods := r.Periodic.KeepPeriods
	perBlock := bytesPerFloat * (n*r.Grid.Block*max(periods, 1) + 2*n*shape.Lines*(1+periods))
	count := min(max(blockMemory/perBlock, minBlocks), maxBlocks) + watch.Delay(r)
	t.free = make(chan *spectra.Block, count)
	for range count {
		t.free <- spectra.NewBlock(shape, r.Grid.Block, r.Periodic.KeepPeriods)
	}
	return t
}

// run takes chunks until there are no more, then closes cuts.
func (t *intake) run() {
	defer close(t.cuts)
	for c := range t.from.chunks {
		if c.lost > 0 {
			t.skip(c.lost)
			continue
		}
		t.take(c.samples)
		t.from.free <- c.samples[:cap(c.samples)]
	}
	t.analysis = t.filter.Flush(t.analysis[:0])
	t.cut(t.analysis)
	t.handOn(math.MaxInt64)
}

// captured is how many source frames were taken so far. It may be called from any goroutine.
func (t *intake) captured() int64 { return t.taken.Load() }

// take takes captured frames.
func (t *intake) take(frames []float64) {
	n := len(t.factors)
	if t.onFrames != nil {
		t.onFrames(frames)
	}
	t.meter.add(frames, t.frames, t.atLimit)
	t.frames += int64(len(frames) / n)
	t.taken.Store(t.frames)
	t.gapBefore = false

	t.scaled = append(t.scaled[:0], frames...)
	for at := 0; at < len(t.scaled); at += n {
		frame := t.scaled[at : at+n]
		for ch, factor := range t.factors {
			frame[ch] *= factor
		}
	}
	t.analysis = t.filter.Append(t.analysis[:0], t.scaled)
	t.cut(t.analysis)
	t.meter.show(float64(t.frames)/t.rateHz, t.cutter.Filled())
}

// skip takes lost frames, which the decimator sees as zeros.
func (t *intake) skip(frames int64) {
	t.lost.add(t.frames, t.frames+frames)
	t.frames += frames
	t.taken.Store(t.frames)
	if !t.gapBefore {
		t.gaps++
		t.gapBefore = true
	}
	var silent int64
	t.analysis, silent = t.filter.AppendZeros(t.analysis[:0], frames)
	t.cut(t.analysis)
	for ; silent > 0; silent -= min(silent, zeroFrames) {
		t.cut(t.zeros[:int(min(silent, zeroFrames))*len(t.factors)])
	}
}

// cut takes analysis frames and hands on every block that they complete.
func (t *intake) cut(frames []float64) {
	for len(frames) > 0 {
		run, lost := t.alike(frames)
		taken := t.cutter.Put(run, lost)
		frames = frames[taken:]
		t.cutFrames += int64(taken / len(t.factors))
		for t.cutter.Full() {
			t.enqueue()
			t.cutter.Advance()
			t.handOn(t.frames)
		}
	}
	t.handOn(t.frames)
	if now := t.cutter.Trouble(); now != t.trouble {
		t.trouble = now
		t.cuts <- cut{notice: true, trouble: now, before: t.frames}
	}
}

// alike is the beginning of frames that stands for lost frames throughout or not at all, and which
// of the two. What a lost frame reaches through the decimator counts as lost.
func (t *intake) alike(frames []float64) (run []float64, lost bool) {
	if len(t.lost.spans) == 0 {
		return frames, false
	}
	n, d := len(t.factors), int64(t.grid.Decimation)
	isLost := func(at int64) bool {
		_, lost := t.lost.in(at*d-t.half, at*d+t.half+1)
		return lost
	}
	lost = isLost(t.cutFrames)
	count := 1
	for count*n < len(frames) && isLost(t.cutFrames+int64(count)) == lost {
		count++
	}
	return frames[:count*n], lost
}

// enqueue takes the block that is in the cutter. Whether a lost frame touches it is known only
// when the source has gone on for another half length of the decimator.
func (t *intake) enqueue() {
	start := t.cutter.Start() * int64(t.grid.Decimation)
	c := cut{index: t.cutter.Index(), start: start, before: start + t.blockFrames}
	if c.before > t.frames {
		return // its last sample lies in the source, but not every frame that it stands for
	}
	if t.wanted(&c) {
		c.block = t.memory()
		c.overload = c.block == nil
	}
	if c.block != nil {
		c.block.Index, c.block.Start = c.index, c.start
		t.cutter.CopyTo(c.block.Samples)
	}
	t.pending = append(t.pending, c)
}

// handOn hands on the pending blocks about which all is known when the source is known up to a
// frame.
func (t *intake) handOn(known int64) {
	n := 0
	for ; n < len(t.pending) && t.pending[n].before+t.half <= known; n++ {
		c := t.pending[n]
		if !t.wanted(&c) {
			c.overload = false
			if c.block != nil {
				t.free <- c.block
				c.block = nil
			}
		}
		c.gaps = t.gaps
		t.cuts <- c
	}
	t.pending = t.pending[:copy(t.pending, t.pending[n:])]
	t.forget()
}

// forget drops the marks that no later block can touch.
func (t *intake) forget() {
	d := int64(t.grid.Decimation)
	next := t.cutter.Oldest() * d
	if len(t.pending) > 0 {
		next = min(next, t.pending[0].start)
	}
	t.lost.forget(min(next, t.cutFrames*d) - t.half)
	for ch := range t.atLimit {
		t.atLimit[ch].forget(next)
	}
}

// wanted writes what is known against c into it and tells whether it is to be averaged.
func (t *intake) wanted(c *cut) bool {
	if s, ok := t.lost.in(c.start-t.half, c.before+t.half); ok {
		c.lost = watch.Lost{StartS: float64(s.from) / t.rateHz, Frames: s.before - s.from}
	}
	for ch := range t.atLimit {
		if _, ok := t.atLimit[ch].in(c.start, c.before); ok {
			if c.atLimit == nil {
				c.atLimit = make([]bool, len(t.atLimit))
			}
			c.atLimit[ch] = true
		}
	}
	if t.only != nil {
		return t.only[c.start]
	}
	return c.lost.Frames == 0 && c.atLimit == nil
}

// memory is a free block. It waits for one, but live, no longer than the ring has room for what
// comes meanwhile; then it returns nil.
func (t *intake) memory() *spectra.Block {
	if !t.live {
		return <-t.free
	}
	for {
		select {
		case b := <-t.free:
			return b
		default:
		}
		if t.from.crowded() {
			return nil
		}
		time.Sleep(crowdedCheck)
	}
}

// crowdedCheck is how often a wait for memory looks: many times in the second that the ring holds at
// least.
const crowdedCheck = 5 * time.Millisecond

// startSet is nil for nil starts.
func startSet(starts []int64) map[int64]bool {
	if starts == nil {
		return nil
	}
	set := make(map[int64]bool, len(starts))
	for _, s := range starts {
		set[s] = true
	}
	return set
}
