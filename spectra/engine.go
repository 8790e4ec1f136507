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
	transformSome, sumRange func(worker, item int)
}

// NewEngine makes an Engine that feeds average with blocks weighted by window's values.
func NewEngine(average *Average, window []float64, workers *Workers) *Engine {
	e := &Engine{average: average, workers: workers, samples: len(window)}
	for range workers.Len() {
		e.transforms = append(e.transforms, NewTransform(window))
	}
	e.transformSome = e.transformGroup
	e.sumRange = e.sumLines
	return e
}

// Transform fills the Lines of every block from its Samples.
func (e *Engine) Transform(blocks []*Block) {
	e.batch = blocks
	e.workers.Each(len(blocks)*groups(e.average.shape), e.transformSome)
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

// groups is how many transforms a block takes.
func groups(shape Shape) int { return (shape.Channels() + together - 1) / together }

func (e *Engine) transformGroup(worker, item int) {
	channels, n := e.average.shape.Channels(), e.samples
	b, first := e.batch[item/groups(e.average.shape)], item%groups(e.average.shape)*together
	count := min(together, channels-first)
	t := e.transforms[worker]
	if len(b.Periods) == 0 {
		t.groupTo(b.Lines, first, count, channels, b.Samples[first*n:], n, n)
		return
	}
	k := len(b.Periods)
	for i, lines := range b.Periods {
		t.groupTo(lines, first, count, channels, b.Samples[(first*k+i)*n:], n, k*n)
	}
	centre(b, first, count, channels)
}

// centre moves the mean of the transforms of a block's periods into its Lines, for count channels
// from the first one on.
func centre(b *Block, first, count, channels int) {
	share := complex(1/float64(len(b.Periods)), 0)
	for line := first; line < len(b.Lines); line += channels {
		for at := line; at < line+count; at++ {
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
}

func (e *Engine) sumLines(_, item int) {
	lo := item * rangeLines
	hi := min(lo+rangeLines, e.average.shape.Lines)
	e.average.Sum(e.lines, lo, hi)
	if len(e.periods) > 0 {
		e.average.SumScatter(e.periods, lo, hi)
	}
}
