package spectra

// A Block is one block on its way into the average.
type Block struct {
	Index   int64        // of the grid, from 0
	Start   int64        // its first source frame
	Samples []float64    // channel by channel, forces first, N and m/s²; of all its periods
	Lines   []complex128 // its transform, (line, channel), once Engine.Transform has run

	// Periods are the deviations of the transforms of its periods from Lines, their mean. Empty for
	// blocks without periods.
	Periods [][]complex128
}

// NewBlock makes a block with room for n samples a channel, for each period where there are any, and
// shape's lines.
func NewBlock(shape Shape, n, periods int) *Block {
	b := &Block{
		Samples: make([]float64, shape.Channels()*n*max(periods, 1)),
		Lines:   make([]complex128, shape.Lines*shape.Channels()),
	}
	for range periods {
		b.Periods = append(b.Periods, make([]complex128, len(b.Lines)))
	}
	return b
}

// rangeLines is how many lines a worker sums at a time: few enough to keep all workers busy to
// the end, enough to make taking the next range cheap.
const rangeLines = 32

// An Engine transforms blocks and sums them into an average, several blocks at a time where several
// are waiting, on all workers. The results do not depend on how many workers or blocks there are.
type Engine struct {
	average    *Average
	workers    *Workers
	transforms []*Transform // one a worker
	samples    int          // of a channel in a block

	batch   []*Block
	lines   [][]complex128
	periods [][]complex128
	// Made once, so that a batch allocates nothing.
	transformOne, sumRange func(worker, item int)
}

// NewEngine makes an Engine that feeds average with blocks weighted by window's values.
func NewEngine(average *Average, window []float64, workers *Workers) *Engine {
	e := &Engine{average: average, workers: workers, samples: len(window)}
	for range workers.Len() {
		e.transforms = append(e.transforms, NewTransform(window))
	}
	e.transformOne = e.transformChannel
	e.sumRange = e.sumLines
	return e
}

// Transform fills the Lines of every block from its Samples.
func (e *Engine) Transform(blocks []*Block) {
	e.batch = blocks
	e.workers.Each(len(blocks)*e.average.shape.Channels(), e.transformOne)
}

// Add sums transformed blocks into the average, in the order given, and enters them in its list.
func (e *Engine) Add(blocks []*Block) {
	for len(blocks) > 0 {
		n := min(e.average.untilKept(), len(blocks))
		e.add(blocks[:n])
		blocks = blocks[n:]
	}
}

// add is Add for blocks that one walk over the sums can take.
func (e *Engine) add(blocks []*Block) {
	e.lines, e.periods = e.lines[:0], e.periods[:0]
	for _, b := range blocks {
		e.lines = append(e.lines, b.Lines)
		e.periods = append(e.periods, b.Periods...)
	}
	e.workers.Each((e.average.shape.Lines+rangeLines-1)/rangeLines, e.sumRange)
	for _, b := range blocks {
		e.average.Count(b.Start)
	}
}

func (e *Engine) transformChannel(worker, item int) {
	channels := e.average.shape.Channels()
	b, ch := e.batch[item/channels], item%channels
	t := e.transforms[worker]
	if len(b.Periods) == 0 {
		t.ChannelTo(b.Lines, ch, channels, b.Samples[ch*e.samples:(ch+1)*e.samples])
		return
	}
	k := len(b.Periods)
	for n, lines := range b.Periods {
		t.ChannelTo(lines, ch, channels, b.Samples[(ch*k+n)*e.samples:][:e.samples])
	}
	centre(b, ch, channels)
}

// centre moves the mean of the transforms of a block's periods into its Lines, for one channel.
func centre(b *Block, channel, channels int) {
	share := complex(1/float64(len(b.Periods)), 0)
	for at := channel; at < len(b.Lines); at += channels {
		var sum complex128
		for _, lines := range b.Periods {
			sum += lines[at]
		}
		b.Lines[at] = sum * share
		for _, lines := range b.Periods {
			lines[at] -= b.Lines[at]
		}
	}
}

func (e *Engine) sumLines(_, item int) {
	lo := item * rangeLines
	hi := min(lo+rangeLines, e.average.shape.Lines)
	e.average.Sum(e.lines, lo, hi)
	if len(e.periods) > 0 {
		e.average.SumScatter(e.periods, lo, hi)
	}
}
