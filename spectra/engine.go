package spectra

// A Block is one block on its way into the average.
type Block struct {
	Index   int64        // of the grid, from 0
	Start   int64        // its first source frame
	Samples []float64    // channel by channel, forces first, N and m/s²
	Lines   []complex128 // its transform, (line, channel), once Engine.Transform has run
}

// NewBlock makes a block with room for n samples a channel and shape's lines.
func NewBlock(shape Shape, n int) *Block {
	return &Block{
		Samples: make([]float64, shape.Channels()*n),
		Lines:   make([]complex128, shape.Lines*shape.Channels()),
	}
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

	batch []*Block
	lines [][]complex128
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
	if len(blocks) == 0 {
		return
	}
	e.lines = e.lines[:0]
	for _, b := range blocks {
		e.lines = append(e.lines, b.Lines)
	}
	e.workers.Each((e.average.shape.Lines+rangeLines-1)/rangeLines, e.sumRange)
	for _, b := range blocks {
		e.average.Count(b.Start)
	}
}

func (e *Engine) transformChannel(worker, item int) {
	channels := e.average.shape.Channels()
	b, ch := e.batch[item/channels], item%channels
	e.transforms[worker].ChannelTo(b.Lines, ch, channels, b.Samples[ch*e.samples:(ch+1)*e.samples])
}

func (e *Engine) sumLines(_, item int) {
	lo := item * rangeLines
	e.average.Sum(e.lines, lo, min(lo+rangeLines, e.average.shape.Lines))
}
