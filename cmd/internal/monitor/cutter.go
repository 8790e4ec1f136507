package monitor

import (
	"math"
	"slices"

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

// newCutter makes the cutter for a rig's excitation. only are the starts of the blocks wanted, in
// source frames, or nil for those that it finds.
func newCutter(r *rig.Rig, only []int64) cutter {
	n, q, g := len(r.Channels()), len(r.Forces), r.Grid
	rounded := func(s float64) int { return int(math.Round(s * g.RateHz)) }
	switch {
	case r.Analysis.Excitation == "random":
		return spectra.NewCutter(n, g.Block, g.Hop)
	case only != nil:
		return spectra.NewListed(n, g.Block*max(r.Periodic.KeepPeriods, 1), inAnalysisFrames(only, g.Decimation))
	case r.Analysis.Excitation == "periodic":
		return spectra.NewPeriodicCutter(n, q, g.Block, r.Periodic.SettlePeriods, r.Periodic.KeepPeriods, g.Decimation)
	case r.Burst.TriggerForce != "":
		channel := slices.IndexFunc(r.Forces, func(c rig.Channel) bool { return c.Name == r.Burst.TriggerForce })
		return spectra.NewTriggerCutter(n, channel, g.Block, min(rounded(r.Burst.PreTriggerS), g.Block-1), r.Burst.TriggerLevel)
	default:
		return spectra.NewBurstCutter(n, q, g.Block, r.Burst.PeriodS*g.RateHz)
	}
}

func inAnalysisFrames(starts []int64, decimation int) []int64 {
	list := make([]int64, len(starts))
	for i, s := range starts {
		list[i] = s / int64(decimation)
	}
	return list
}
