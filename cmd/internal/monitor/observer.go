package monitor

import (
	"math"

	"shakerwatch/acquire/rig"
	"shakerwatch/estimate"
	"shakerwatch/estimate/setup"
	"shakerwatch/spectra"
	"shakerwatch/web"
)

// A view is the state of a run at one block.
type view struct {
	snapshot *spectra.Snapshot
	counts   Counts
	timeS    float64
	standing []string
}

func newView(r *rig.Rig) *view {
	return &view{snapshot: spectra.NewSnapshot(estimate.ShapeOf(r), estimate.AveragingOf(r))}
}

// An observer makes estimates of views, for whoever watches the run. While it is busy, the averaging
// goes on without it.
type observer struct {
	config Config
	free   chan *view // taken by the analysis
	ready  chan *view // given back by it, filled
	judge  *judge
	spare  *estimate.Estimates
}

func newObserver(c Config) *observer {
	o := &observer{config: c, free: make(chan *view, 1), ready: make(chan *view, 1), judge: newJudge(c)}
	if c.OnRefresh != nil {
		o.free <- newView(c.Rig)
	}
	return o
}

// run makes estimates until close.
func (o *observer) run() {
	for v := range o.ready {
		if o.spare == nil {
			o.spare = estimate.New(estimate.ShapeOf(o.config.Rig), estimate.DrivingPoints(o.config.Rig))
		}
		verdict := o.judge.verdict(v, o.spare)
		o.spare = o.config.OnRefresh(newStatus(o.config.Rig, v.counts, v.timeS, v.snapshot, &o.judge.progress, verdict), o.spare)
		o.free <- v
	}
}

func (o *observer) close() { close(o.ready) }

// A judge turns views into verdicts.
type judge struct {
	rig      *rig.Rig
	noise    *setup.Noise
	target   estimate.Target
	progress estimate.Progress
}

func newJudge(c Config) *judge {
	return &judge{rig: c.Rig, noise: c.Noise, target: estimate.NewTarget(c.Rig)}
}

// verdict fills e with the estimates of v and judges them.
func (j *judge) verdict(v *view, e *estimate.Estimates) estimate.Verdict {
	e.Update(v.snapshot)
	j.progress.Update(e, j.target)
	standing := v.standing
	if j.noise != nil {
		if low := j.noise.LowSignal(j.rig, v.snapshot); low != "" {
			standing = append(standing[:len(standing):len(standing)], low)
		}
	}
	return estimate.Judge(e, &j.progress, j.target, standing, func(n int) string { return frfName(j.rig, n) })
}

func newStatus(r *rig.Rig, c Counts, timeS float64, s *spectra.Snapshot, p *estimate.Progress, v estimate.Verdict) web.Status {
	blockS := math.NaN() // from one averaged block to the next, all things considered
	if c.Averaged > 0 {
		blockS = timeS / float64(c.Averaged)
	}
	if r.Grid.Hop > 0 {
		blockS = float64(r.Grid.Hop) / r.Grid.RateHz
	}
	return web.Status{
		TimeS: timeS, Seen: c.Seen, Averaged: c.Averaged, SetAside: c.SetAside,
		EffectiveAverages: s.EffectiveAverages,
		AveragesNeeded:    p.AveragesNeeded,
		TimeToGoS:         estimate.Number(math.Max(0, float64(p.AveragesNeeded)-float64(c.Averaged)) * blockS),
		Verdict:           v,
		Progress:          p,
		Gxx:               s.Gxx,
		Gaps:              c.Gaps, Overranges: c.Overranges, Overloads: c.Overloads,
	}
}

// status is the final one.
func (r *Result) status(g *rig.Rig) web.Status {
	return newStatus(g, r.Counts, r.TimeS, r.Snapshot, r.Progress, r.Verdict)
}
