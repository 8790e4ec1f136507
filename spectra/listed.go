package spectra

// A Listed cuts a stream at given places into blocks.
type Listed struct {
	channels, block int
	starts          []int64   // of the blocks that are still to come
	index           int64     // of the block that is being filled
	at              int64     // stream frames taken
	filled          int       // frames of the block that are here
	samples         []float64 // channel by channel, block samples each
}

// NewListed makes a Listed of blocks of the given number of frames at the given starts, in frames from
// the beginning of the stream. It panics unless starts grow from 0 or more. It keeps starts.
func NewListed(channels, block int, starts []int64) *Listed {
	for i, s := range starts {
		if s < 0 || i > 0 && s <= starts[i-1] {
			panic("spectra: listed starts must grow")
		}
	}
	return &Listed{channels: channels, block: block, starts: starts, samples: make([]float64, channels*block)}
}

// Put takes frames (channel fastest) until a block is full and returns how many samples it took.
// Whether they stand for lost ones makes no difference. It panics when len(frames) is no multiple
// of the number of channels.
func (c *Listed) Put(frames []float64, _ bool) int {
	if len(frames)%c.channels != 0 {
		panic("spectra: cutter got a part of a frame")
	}
	n := len(frames) / c.channels
	if len(c.starts) == 0 {
		c.at += int64(n)
		return len(frames)
	}
	skip := int(min(int64(n), max(0, c.starts[0]-c.at)))
	take := min(n-skip, c.block-c.filled)
	for ch := range c.channels {
		dst := c.samples[ch*c.block+c.filled:][:take]
		for i := range dst {
			dst[i] = frames[(skip+i)*c.channels+ch]
		}
	}
	c.filled += take
	c.at += int64(skip + take)
	return (skip + take) * c.channels
}

// Full tells whether the block is complete. A full Listed takes no frames until Advance.
func (c *Listed) Full() bool { return c.filled == c.block }

// Index is the running number of the block that is being filled.
func (c *Listed) Index() int64 { return c.index }

// Start is the first frame of the block that is being filled. It panics behind the last one.
func (c *Listed) Start() int64 { return c.starts[0] }

// Filled is the share of the block that is here.
func (c *Listed) Filled() float64 { return float64(c.filled) / float64(c.block) }

// Oldest is a frame before which no later block starts.
func (c *Listed) Oldest() int64 {
	if len(c.starts) == 0 {
		return c.at
	}
	return c.starts[0]
}

// Trouble is empty: nothing has to be found.
func (c *Listed) Trouble() string { return "" }

// CopyTo copies the block, channel by channel, block samples each, into dst. It panics when dst
// has another length or the block is not full.
func (c *Listed) CopyTo(dst []float64) {
	if len(dst) != len(c.samples) || !c.Full() {
		panic("spectra: cutter has no such block")
	}
	copy(dst, c.samples)
}

// Advance moves on to the next start. It panics when the block is not full.
func (c *Listed) Advance() {
	if !c.Full() {
		panic("spectra: cutter advanced before its block was full")
	}
	c.index++
	before := c.starts[0] + int64(c.block)
	c.starts = c.starts[1:]
	c.filled = 0
	if len(c.starts) == 0 {
		return
	}
	c.filled = int(max(0, before-c.starts[0])) // what both blocks hold
	for ch := range c.channels {
		row := c.samples[ch*c.block:][:c.block]
		copy(row, row[c.block-c.filled:])
	}
}
