package spectra

import (
	"math"
	"slices"
)

// decaySegments is into how many parts a block is parted to see how it ends.
const decaySegments = 20

// A Decay measures what is left of each channel's signal at the end of a block, over many blocks: a
// burst that has not died out there leaks.
type Decay struct {
	channels, block int
	blocks          int
	filter          highPass
	sums            []float64 // (channel, segment) of samples, over all blocks
	squares         []float64 // (channel, segment) of squared samples, over all blocks
}

// NewDecay makes a Decay without blocks that looks at what lies above an edge, as a share of the
// sampling rate: a structure that swings on its suspension below the band of interest is not meant.
// With an edge of 0 it looks at everything. It panics unless channels and block are at least 1 and
// 0 <= edge < 1/2.
func NewDecay(channels, block int, edge float64) *Decay {
	if channels < 1 || block < 1 || !(edge >= 0 && edge < 0.5) {
		panic("spectra: decay needs channels >= 1, block >= 1 and 0 <= edge < 1/2")
	}
	return &Decay{
		channels: channels, block: block, filter: newHighPass(edge),
		sums:    make([]float64, channels*decaySegments),
		squares: make([]float64, channels*decaySegments),
	}
}

// Add adds a block, channel by channel, block samples each. It panics when samples has another
// length.
func (d *Decay) Add(samples []float64) {
	if len(samples) != d.channels*d.block {
		panic("spectra: decay got a block of another shape")
	}
	d.blocks++
	for ch := range d.channels {
		f := d.filter
		for j := range decaySegments {
			from, before := d.segment(j)
			at := ch*decaySegments + j
			for _, v := range samples[ch*d.block+from : ch*d.block+before] {
				v = f.next(v)
				d.sums[at] += v
				d.squares[at] += v * v
			}
		}
	}
}

// Reset forgets all blocks.
func (d *Decay) Reset() {
	d.blocks = 0
	clear(d.sums)
	clear(d.squares)
}

// segment is where the j-th segment begins and ends.
func (d *Decay) segment(j int) (from, before int) {
	return j * d.block / decaySegments, (j + 1) * d.block / decaySegments
}

// DB is the last segment's level relative to the largest one's of a channel, 10 log10(last/largest) in
// dB: 0 when the signal never falls, -Inf when nothing is left. Levels are mean squares, over all blocks,
// in 20 segments of the block as the edge's filter leaves it, the j-th from sample j block / 20 to (j+1) block / 20 - 1, rounded down.
//
// They are about the channel's offset, the mean of the last segments of all blocks together: there
// an offset is the same from block to block, and what is left of a random burst is not. It is NaN below
// two blocks, which cannot tell the two, and for a channel without signal.
func (d *Decay) DB(channel int) float64 {
	levels, ok := d.levels(channel)
	if !ok {
		return math.NaN()
	}
	return 10 * math.Log10(levels[decaySegments-1]/slices.Max(levels[:]))
}

// FallDB is by how much a channel's signal falls over the last quarter of the block, in dB: near 0 when
// what is left is noise. It is NaN where DB is, and +Inf when nothing is left.
func (d *Decay) FallDB(channel int) float64 {
	levels, ok := d.levels(channel)
	if !ok {
		return math.NaN()
	}
	if levels[decaySegments-1] == 0 {
		return math.Inf(1)
	}
	return 10 * math.Log10(levels[decaySegments*3/4]/levels[decaySegments-1])
}

// levels are the mean squares of a channel's segments, and false when there is nothing to compare.
func (d *Decay) levels(channel int) (levels [decaySegments]float64, ok bool) {
	if d.blocks < 2 {
		return levels, false
	}
	at := channel * decaySegments
	count := func(j int) float64 {
		from, before := d.segment(j)
		return float64((before - from) * d.blocks)
	}
	const last = decaySegments - 1
	offset := d.sums[at+last] / count(last)
	for j := range levels {
		n := count(j)
		if n == 0 {
			continue // a block of fewer samples than segments
		}
		level := (d.squares[at+j]-2*offset*d.sums[at+j])/n + offset*offset
		if level > offset*offset*0x1p-40 { // less is rounding
			levels[j] = level
		}
	}
	return levels, slices.Max(levels[:]) > 0
}
