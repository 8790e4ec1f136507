package spectra

// A Cutter cuts a stream of frames into overlapping blocks. Block k holds frames k·hop to
// k·hop + block - 1 of the stream, counted from 0.
//
// Put takes frames until a block is full; the caller copies the block out, then calls Advance:
//
//	for len(frames) > 0 {
//		frames = frames[c.Put(frames, false):]
//		if c.Full() {
//			c.CopyTo(dst)
//			c.Advance()
//		}
//	}
type Cutter struct {
	channels, block, hop int
	index                int64     // of the block that is being filled
	filled               int       // frames of it that are here
	samples              []float64 // channel by channel, block samples each
}

// NewCutter makes a Cutter of blocks of the given number of frames, hop frames apart. It panics
// unless channels >= 1 and 1 <= hop <= block.
func NewCutter(channels, block, hop int) *Cutter {
	if channels < 1 || hop < 1 || hop > block {
		panic("spectra: cutter needs channels >= 1 and 1 <= hop <= block")
	}
	return &Cutter{channels: channels, block: block, hop: hop, samples: make([]float64, channels*block)}
}

// Put takes frames (channel fastest) until the block is full and returns how many samples it took.
// Whether they stand for lost ones makes no difference. It panics when len(frames) is no multiple of the number of channels.
func (c *Cutter) Put(frames []float64, _ bool) int {
	if len(frames)%c.channels != 0 {
		panic("spectra: cutter got a part of a frame")
	}
	n := min(len(frames)/c.channels, c.block-c.filled)
	for ch := range c.channels {
		dst := c.samples[ch*c.block+c.filled:][:n]
		for i := range dst {
			dst[i] = frames[i*c.channels+ch]
		}
	}
	c.filled += n
	return n * c.channels
}

// Full tells whether the block is complete. A full Cutter takes no frames until Advance.
func (c *Cutter) Full() bool { return c.filled == c.block }

// Index is the number k of the block that is being filled.
func (c *Cutter) Index() int64 { return c.index }

// Filled is the share, 0 to 1, of the block that is being filled that is here.
func (c *Cutter) Filled() float64 { return float64(c.filled) / float64(c.block) }

// Start is the first frame of the block that is being filled, counted over the stream.
func (c *Cutter) Start() int64 { return c.index * int64(c.hop) }

// Oldest is a frame before which neither the block that is being filled nor a later one starts.
func (c *Cutter) Oldest() int64 { return c.Start() }

// Trouble is empty: nothing keeps the blocks of a grid from being found.
func (c *Cutter) Trouble() string { return "" }

// CopyTo copies the block, channel by channel, block samples each, into dst. It panics when dst
// has another length or the block is not full.
func (c *Cutter) CopyTo(dst []float64) {
	if len(dst) != len(c.samples) || !c.Full() {
		panic("spectra: cutter has no such block")
	}
	copy(dst, c.samples)
}

// Advance moves a full block on by hop frames. It panics when the block is not full.
func (c *Cutter) Advance() {
	if !c.Full() {
		panic("spectra: cutter advanced before its block was full")
	}
	c.index++
	c.filled = c.block - c.hop
	for ch := range c.channels {
		row := c.samples[ch*c.block:][:c.block]
		copy(row, row[c.hop:])
	}
}
