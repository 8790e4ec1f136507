package monitor

import (
	"time"

	"shakerwatch/estimate"
	"shakerwatch/estimate/watch"
	"shakerwatch/spectra"
)

// analysis transforms, judges and averages blocks.
type analysis struct {
	config  Config
	from    *intake
	stop    func() // ends the capture
	workers *spectra.Workers
	average *spectra.Average
	engine  *spectra.Engine
	gate    *gate
	desk    desk

	counts  Counts
	aside   map[watch.Kind]int64
	base    Counts         // what was counted before the average was started over
	timeS   float64        // at the end of the last block judged
	last    int64          // the last block judged
	trouble string         // what keeps blocks from being found, empty for nothing
	decay   *spectra.Decay // nil but with burst excitation
	events  []watch.Event
	learnt  *spectra.Snapshot // for the watch

	// Those waiting, scratch of one batch.
	batch     []cut
	transform []*spectra.Block
	accepted  []*spectra.Block
	shown     time.Time
}

func newAnalysis(c Config, from *intake, stop func()) *analysis {
	g := c.Rig.Grid
	window := spectra.Window(c.Rig.Analysis.Window).Values(g.Block)
	shape, averaging := estimate.ShapeOf(c.Rig), estimate.AveragingOf(c.Rig)
	average := spectra.NewAverage(shape, window, g.Hop, g.Decimation, g.RateHz, averaging)
	workers := spectra.NewWorkers(c.Workers)
	a := &analysis{
		config:  c,
		from:    from,
		stop:    stop,
		workers: workers,
		average: average,
		engine:  spectra.NewEngine(average, window, workers),
		gate:    newGate(c, workers),
		aside:   make(map[watch.Kind]int64),
	}
	if a.gate.watch != nil {
		// The watch needs neither parts nor noise.
		a.learnt = spectra.NewSnapshot(shape, spectra.Averaging{Memory: averaging.Memory, Pairs: averaging.Pairs})
	}
	if c.Rig.Analysis.Excitation == "burst" {
		a.decay = spectra.NewDecay(len(c.Rig.Channels()), g.Block, c.Rig.Analysis.MinFrequencyHz/g.RateHz)
	}
	return a
}

func (a *analysis) close() { a.workers.Close() }

// run takes cuts, and what the operator asks, until there are no more cuts. Those that wait are worked
// on together.
func (a *analysis) run(o *observer) {
	for {
		select {
		case c, ok := <-a.from.cuts:
			if !ok {
				a.end()
				return
			}
			a.gather(c)
			a.work()
		case command := <-a.config.Commands:
			a.obey(command)
		}
		a.show(o)
	}
}

// gather takes c and the cuts that wait behind it as a batch.
func (a *analysis) gather(c cut) {
	a.batch = append(a.batch[:0], c)
	for len(a.batch) < maxBlocks {
		select {
		case next, ok := <-a.from.cuts:
			if !ok {
				return
			}
			a.batch = append(a.batch, next)
		default:
			return
		}
	}
}

// work takes a batch through the gate.
func (a *analysis) work() {
	a.transform = a.transform[:0]
	for _, c := range a.batch {
		if c.block != nil {
			a.transform = append(a.transform, c.block)
		}
	}
	if !a.complete() {
		a.engine.Transform(a.transform)
	}
	for _, c := range a.batch {
		switch {
		case a.complete(): // blocks behind the last one wanted are neither seen nor set aside
			a.free(c.block)
		case c.notice:
			a.trouble, a.timeS = c.trouble, float64(c.before)/a.config.Rig.Source.RateHz
		default:
			a.judge(c)
		}
	}
	a.flush()
	if a.complete() {
		a.stop()
	}
}

// judge has a block judged and follows the decisions that are due.
func (a *analysis) judge(c cut) {
	a.timeS, a.last = float64(c.before)/a.config.Rig.Source.RateHz, c.index
	if a.desk.startedOver(c) {
		a.free(c.block)
		return
	}
	n := len(a.events)
	a.events = a.gate.judge(a.events, c, a.desk.paused(c))
	a.publish(n)
	a.settle()
}

// settle follows the gate's decisions.
func (a *analysis) settle() {
	for _, d := range a.gate.decisions() {
		if a.complete() {
			a.free(d.block)
			continue
		}
		a.count(d)
		if !d.average {
			a.free(d.block)
			continue
		}
		a.accepted = append(a.accepted, d.block)
		if a.decay != nil {
			a.decay.Add(d.block.Samples)
		}
		if a.gate.wants(int(a.counts.Averaged)) {
			a.flush()
			a.average.SnapshotTo(a.learnt)
			a.gate.learn(a.learnt)
		}
	}
}

// count enters a decision in the counts.
func (a *analysis) count(d decision) {
	a.counts.Frames, a.counts.Gaps = d.before-a.base.Frames, d.gaps-a.base.Gaps
	a.counts.Seen++
	if d.atLimit {
		a.counts.Overranges++
	}
	if d.overload {
		a.counts.Overloads++
	}
	if d.average {
		a.counts.Averaged++
		return
	}
	a.counts.SetAside++
	a.aside[d.kind]++
}

// flush averages the accepted blocks.
func (a *analysis) flush() {
	a.engine.Add(a.accepted)
	for _, b := range a.accepted {
		a.free(b)
	}
	a.accepted = a.accepted[:0]
}

// free gives a block's memory back.
func (a *analysis) free(b *spectra.Block) {
	if b != nil {
		a.from.free <- b
	}
}

// end decides on the blocks that still wait when no more will come.
func (a *analysis) end() {
	a.gate.end()
	a.settle()
	a.flush()
}

// publish hands on the events from the n-th on.
func (a *analysis) publish(n int) {
	if a.config.OnEvent == nil {
		return
	}
	for _, event := range a.events[n:] {
		a.config.OnEvent(event)
	}
}

// complete tells whether as many blocks are averaged as were asked for.
func (a *analysis) complete() bool {
	return a.config.Blocks > 0 && a.counts.Averaged >= a.config.Blocks
}

// show gives progress, and a snapshot to the observer when it is waiting for one and it is time.
func (a *analysis) show(o *observer) {
	if a.config.OnProgress != nil {
		a.config.OnProgress(a.counts)
	}
	if time.Since(a.shown) < refreshInterval {
		return
	}
	select {
	case v := <-o.free:
		a.shown = time.Now()
		a.viewTo(v)
		o.ready <- v
	default:
	}
}

// viewTo writes the present state into v.
func (a *analysis) viewTo(v *view) {
	a.average.SnapshotTo(v.snapshot)
	v.counts, v.timeS, v.paused = a.counts, a.timeS, a.desk.stopped
	v.standing, v.fault = a.gate.standing(v.standing[:0])
	if a.trouble != "" {
		v.standing = append(v.standing, a.trouble)
	}
	if text := a.ends().Undecayed(names(a.config.Rig)); text != "" {
		v.standing = append(v.standing, text)
	}
	if a.config.Trouble != nil {
		v.standing = append(v.standing, a.config.Trouble()...)
	}
}

// ends is how the signals of each channel end; empty but with burst excitation.
func (a *analysis) ends() (d estimate.Decay) {
	if a.decay == nil {
		return d
	}
	for ch := range a.config.Rig.Channels() {
		d.EndDB = append(d.EndDB, a.decay.DB(ch))
		d.FallDB = append(d.FallDB, a.decay.FallDB(ch))
	}
	return d
}

// result is the outcome. The goroutines must have ended.
func (a *analysis) result(t *intake) *Result {
	v := newView(a.config.Rig)
	if !a.complete() {
		a.counts.Frames, a.counts.Gaps = t.frames-a.base.Frames, t.gaps-a.base.Gaps
	}
	a.viewTo(v)
	j := newJudge(a.config)
	estimates := newEstimates(a.config)
	verdict := j.verdict(v, estimates)
	return &Result{
		Counts: a.counts, TimeS: a.timeS, Snapshot: v.snapshot, Estimates: estimates,
		Progress: &j.progress, Drift: j.drift, Resonances: j.resonances, Distortion: j.distortion,
		Verdict: verdict, Events: a.events, Aside: a.aside, Trouble: a.trouble, DecayDB: a.ends().EndDB,
		status: newStatus(a.config.Rig, v, j, verdict),
	}
}
