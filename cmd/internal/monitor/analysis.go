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
	watch   *watch.Watch

	counts  Counts
	timeS   float64        // at the end of the last block seen
	trouble string         // what keeps blocks from being found, empty for nothing
	decay   *spectra.Decay // nil but with burst excitation
	events  []watch.Event

	// Those waiting, scratch of one batch.
	batch     []cut
	transform []*spectra.Block
	accepted  []*spectra.Block
	shown     time.Time
}

func newAnalysis(c Config, from *intake, stop func()) *analysis {
	g := c.Rig.Grid
	window := spectra.Window(c.Rig.Analysis.Window).Values(g.Block)
	average := spectra.NewAverage(estimate.ShapeOf(c.Rig), window, g.Hop, g.Decimation, g.RateHz, estimate.AveragingOf(c.Rig))
	workers := spectra.NewWorkers(c.Workers)
	a := &analysis{
		config:  c,
		from:    from,
		stop:    stop,
		workers: workers,
		average: average,
		engine:  spectra.NewEngine(average, window, workers),
		watch:   watch.New(names(c.Rig)),
	}
	if c.Rig.Analysis.Excitation == "burst" {
		a.decay = spectra.NewDecay(len(c.Rig.Channels()), g.Block, c.Rig.Analysis.MinFrequencyHz/g.RateHz)
	}
	return a
}

func (a *analysis) close() { a.workers.Close() }

// run takes cuts until there are no more. Those that wait are worked on together.
func (a *analysis) run(o *observer) {
	for c := range a.from.cuts {
		a.batch = append(a.batch[:0], c)
		for len(a.batch) < maxBlocks {
			next, ok := a.more()
			if !ok {
				break
			}
			a.batch = append(a.batch, next)
		}
		a.work()
		a.show(o)
	}
}

// more is a cut that is waiting, if there is one.
func (a *analysis) more() (cut, bool) {
	select {
	case c, ok := <-a.from.cuts:
		return c, ok
	default:
		return cut{}, false
	}
}

// work takes a batch to its end: into the average or aside.
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
	a.accepted = a.accepted[:0]
	for _, c := range a.batch {
		if a.complete() {
			break // blocks behind the last one wanted are neither seen nor set aside
		}
		if c.notice {
			a.trouble, a.timeS = c.trouble, float64(c.before)/a.config.Rig.Source.RateHz
			continue
		}
		a.judge(c)
	}
	a.engine.Add(a.accepted)
	for _, b := range a.transform {
		a.from.free <- b
	}
	if a.complete() {
		a.stop()
	}
}

// judge counts a block and decides where it goes.
func (a *analysis) judge(c cut) {
	rateHz := a.config.Rig.Source.RateHz
	a.timeS = float64(c.before) / rateHz
	a.counts.Seen++
	a.counts.Frames, a.counts.Gaps = c.before, c.gaps
	if c.atLimit != nil {
		a.counts.Overranges++
	}
	if c.overload {
		a.counts.Overloads++
	}
	if a.config.Only == nil {
		a.raise(watch.Evidence{
			Block: c.index, StartS: float64(c.start) / rateHz, EndS: a.timeS,
			Lost: c.lost, AtLimit: c.atLimit,
		})
	}
	if c.block == nil {
		a.counts.SetAside++
		return
	}
	a.counts.Averaged++
	a.accepted = append(a.accepted, c.block)
	if a.decay != nil {
		a.decay.Add(c.block.Samples)
	}
}

func (a *analysis) raise(e watch.Evidence) {
	n := len(a.events)
	a.events = a.watch.Judge(a.events, e)
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
	v.counts, v.timeS = a.counts, a.timeS
	v.standing = a.watch.Standing(v.standing[:0])
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
		a.counts.Frames, a.counts.Gaps = t.frames, t.gaps
	}
	a.viewTo(v)
	j := newJudge(a.config)
	estimates := newEstimates(a.config)
	verdict := j.verdict(v, estimates)
	return &Result{
		Counts: a.counts, TimeS: a.timeS, Snapshot: v.snapshot, Estimates: estimates,
		Progress: &j.progress, Drift: j.drift, Resonances: j.resonances, Distortion: j.distortion,
		Verdict: verdict, Events: a.events, Trouble: a.trouble, DecayDB: a.ends().EndDB,
		status: newStatus(a.config.Rig, a.counts, a.timeS, v.snapshot, j, verdict),
	}
}
