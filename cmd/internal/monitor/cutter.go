package monitor

import (
	"shakerwatch/acquire/rig"
	"shakerwatch/spectra"
)

// A cutter finds the blocks in a stream of analysis frames.
type cutter interface {
	// Put takes frames until a block is full and returns how many samples it took. lost says that
	// they stand for lost frames.
	Put(frames []float64, lost bool) (taken int)
	Full() bool
	Index() int64     // running number of the full block
	Start() int64     // its first analysis frame
	CopyTo([]float64) // channel by channel
	Advance()         // to the next block, which may be full already
	Filled() float64  // share of the next block that is here
	Oldest() int64    // no later block starts before this analysis frame
	Trouble() string  // what keeps blocks from being found, empty for nothing
}

func newCutter(r *rig.Rig, only []int64) cutter {
	n := len(r.Channels())
	return gridCutter{spectra.NewCutter(n, r.Grid.Block, r.Grid.Hop), r.Grid}
}

type gridCutter struct {
	*spectra.Cutter
	grid rig.Grid
}

func (c gridCutter) Put(frames []float64, _ bool) int { return c.Cutter.Put(frames) }
func (c gridCutter) Start() int64                     { return c.Index() * int64(c.grid.Hop) }
func (c gridCutter) Filled() float64                  { return float64(c.Cutter.Filled()) / float64(c.grid.Block) }
func (c gridCutter) Oldest() int64                    { return c.Start() }
func (c gridCutter) Trouble() string                  { return "" }
