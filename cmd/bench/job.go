package main

import "shakerwatch/spectra"

// A job takes a recording through cutter, engine and average, in two goroutines as a measurement
// does.
type job struct {
	size      size
	recording []float64 // frame by frame

	workers  *spectra.Workers
	average  *spectra.Average
	engine   *spectra.Engine
	snapshot *spectra.Snapshot
	free     chan *spectra.Block
	batch    []*spectra.Block
}

func newJob(s size, recording []float64, cores int) *job {
	window := spectra.Hann.Values(s.Block)
	j := &job{
		size: s, recording: recording,
		workers:  spectra.NewWorkers(cores),
		average:  spectra.NewAverage(s.shape(), window, s.hop(), 1, rateHz, spectra.Averaging{}),
		snapshot: spectra.NewSnapshot(s.shape(), spectra.Averaging{}),
		free:     make(chan *spectra.Block, max(s.together(), minHeld)),
	}
	j.engine = spectra.NewEngine(j.average, window, j.workers)
	for range cap(j.free) {
		j.free <- spectra.NewBlock(s.shape(), s.Block, 0)
	}
	return j
}

const (
	minHeld     = 3   // blocks, as in cmd/internal/monitor
	chunkFrames = 960 // a fiftieth of a second, in which a measurement's frames come
)

// run does the job once and leaves the result in the snapshot.
func (j *job) run() {
	j.average.Reset()
	cuts := make(chan *spectra.Block, cap(j.free))
	go j.cut(cuts)
	for block := range cuts {
		j.batch = append(j.batch[:0], block)
		for len(cuts) > 0 {
			j.batch = append(j.batch, <-cuts)
		}
		j.engine.Transform(j.batch)
		j.engine.Add(j.batch)
		for _, b := range j.batch {
			j.free <- b
		}
	}
	j.average.SnapshotTo(j.snapshot)
}

// cut sends all blocks of the recording.
func (j *job) cut(cuts chan<- *spectra.Block) {
	defer close(cuts)
	channels := j.size.channels()
	cutter := spectra.NewCutter(channels, j.size.Block, j.size.hop())
	for rest := j.recording; len(rest) > 0; {
		chunk := rest[:min(len(rest), chunkFrames*channels)]
		rest = rest[len(chunk):]
		for len(chunk) > 0 {
			chunk = chunk[cutter.Put(chunk, false):]
			if cutter.Full() {
				b := <-j.free
				b.Index, b.Start = cutter.Index(), cutter.Start()
				cutter.CopyTo(b.Samples)
				cutter.Advance()
				cuts <- b
			}
		}
	}
}
