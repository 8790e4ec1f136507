// Package monitor is the pipeline that ties the rooms together: from a source, through blocks,
// judgement and average, to estimates and verdict.
//
// It knows the order of the steps and which goroutine runs them. It may not know arithmetic, files
// or HTTP.
package monitor

import (
	"context"
	"runtime"
	"sync"
	"time"

	"shakerwatch/acquire"
	"shakerwatch/acquire/rig"
	"shakerwatch/estimate"
	"shakerwatch/estimate/setup"
	"shakerwatch/estimate/watch"
	"shakerwatch/spectra"
	"shakerwatch/web"
)

// Config says what to run. The functions are called from goroutines of the pipeline, each from one
// at a time; nil ones are not called.
type Config struct {
	Rig    *rig.Rig
	Source acquire.Source // of all channels of the stream

	// Live says that the source does not wait: what is not taken in time is lost. From a source
	// that is not live nothing is ever lost.
	Live bool

	// Interrupt ends a Read of the source that waits, once the run is to end. nil is for sources whose
	// Read never waits long.
	Interrupt func()

	Blocks  int64   // end after so many averaged blocks; 0 is no end
	Only    []int64 // average exactly the blocks with these starts, watch off; nil is the normal run
	Workers int     // goroutines for the arithmetic; 0 is one a core

	// Noise is a noise measurement of the rig: channels too near to it are named in the verdict's
	// reasons. nil is none.
	Noise *setup.Noise

	// Confidence is the probability of the confidence regions, 0 for estimate.DefaultLevel; Simultaneous
	// has them hold for all forces of a response at once.
	Confidence   float64
	Simultaneous bool

	// Trouble says what outside of the pipeline stands against the measurement, for the verdict's
	// reasons. It may be called from several goroutines; nil is nothing.
	Trouble func() []string

	// Commands are what the operator asks; nil is nothing.
	Commands <-chan web.Command

	// OnBreak breaks or mends the simulated rig as a command says, and says in a sentence what it has done.
	OnBreak func(web.Command) string

	OnFrames   func(frames []float64) // what was captured of the channels in use, not to be kept
	OnEvent    func(watch.Event)
	OnLevels   func(web.Levels)
	OnProgress func(Counts)
	// OnRefresh gets the estimates at most ten times a second and at the end, and gives back
	// estimates of the same rig that it does not need any more, or nil.
	OnRefresh func(web.Status, *estimate.Estimates) *estimate.Estimates
}

// Counts say what became of the source's frames and blocks so far.
type Counts struct {
	Frames     int64 // source frames up to the end of the last block seen; of the whole run in the end
	Seen       int64 // blocks
	Averaged   int64
	SetAside   int64
	Gaps       int64 // stretches of lost frames
	Overranges int64 // blocks in which a channel reached its limit
	Overloads  int64 // blocks that the arithmetic was too slow for
}

// Result is the outcome of a run.
type Result struct {
	Counts
	TimeS     float64 // source seconds at the end of the last block seen
	Snapshot  *spectra.Snapshot
	Estimates *estimate.Estimates
	Progress  *estimate.Progress
	Verdict   estimate.Verdict
	Events    []watch.Event

	// Aside counts the blocks set aside by the kind of what stood against them; "held" is a block that
	// was normal by itself while a fault stood. Never nil.
	Aside map[watch.Kind]int64

	Drift      *estimate.Drift
	Resonances *estimate.Resonances
	Distortion *estimate.Distortion // nil but with periodic excitation

	// DecayDB (q+p) is what is left of each channel's signal at the end of bursts' blocks, below its
	// peak; nil but with burst excitation.
	DecayDB []float64

	// Trouble is what kept blocks from being found at the end, empty for nothing.
	Trouble string

	status web.Status
}

// Run drives the source through the pipeline until it ends, ctx ends or Config.Blocks are averaged,
// and returns the result. When the source breaks it returns the result so far and the source's
// error.
//
// Three goroutines hand on to one another: capture reads the source, intake makes blocks, and the
// caller's transforms, judges and averages them. A fourth makes estimates for whoever watches. They
// stop in that order: each ends when the one before it has, so everything captured is also
// averaged.
func Run(ctx context.Context, c Config) (*Result, error) {
	ctx, stop := context.WithCancel(ctx)
	defer stop()
	if c.Interrupt != nil {
		defer context.AfterFunc(ctx, c.Interrupt)()
	}
	if c.Workers == 0 {
		c.Workers = runtime.GOMAXPROCS(0)
	}

	capture := newCapture(c)
	intake := newIntake(c, capture)
	analysis := newAnalysis(c, intake, stop)
	defer analysis.close()
	observer := newObserver(c)

	var running sync.WaitGroup
	running.Go(func() { capture.run(ctx) })
	running.Go(intake.run)
	var observing sync.WaitGroup
	observing.Go(observer.run)

	analysis.run(observer)
	running.Wait()
	observer.close()
	observing.Wait()

	result := analysis.result(intake)
	if c.OnRefresh != nil {
		c.OnRefresh(result.status, result.Estimates)
	}
	return result, capture.broken
}

// refreshInterval is the shortest time between two refreshes of what is shown.
const refreshInterval = 100 * time.Millisecond
