package monitor

import (
	"math"

	"shakerwatch/acquire/rig"
	"shakerwatch/estimate"
	"shakerwatch/spectra"
	"shakerwatch/web"
)

// A view is the state of a run at one block.
type view struct {
	snapshot *spectra.Snapshot
	counts   Counts
	timeS    float64
	standing []string
	fault    bool
	paused   bool
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
			o.spare = newEstimates(o.config)
		}
		verdict := o.judge.verdict(v, o.spare)
		o.spare = o.config.OnRefresh(newStatus(o.config.Rig, v, o.judge, verdict), o.spare)
		o.free <- v
	}
}

func (o *observer) close() { close(o.ready) }

func newStatus(r *rig.Rig, v *view, j *judge, verdict estimate.Verdict) web.Status {
	c, s := v.counts, v.snapshot
	blockS := math.NaN() // from one averaged block to the next, all things considered
	if c.Averaged > 0 {
		blockS = v.timeS / float64(c.Averaged)
	}
	if r.Grid.Hop > 0 {
		blockS = float64(r.Grid.Hop) / r.Grid.RateHz
	}
	p := &j.progress
	return web.Status{
		TimeS: v.timeS, Seen: c.Seen, Averaged: c.Averaged, SetAside: c.SetAside,
		EffectiveAverages: s.EffectiveAverages,
		AveragesNeeded:    p.AveragesNeeded,
		NeededLow:         p.AveragesRange[0],
		NeededHigh:        p.AveragesRange[1],
		TimeToGoS:         estimate.Number(math.Max(0, float64(p.AveragesNeeded)-float64(c.Averaged)) * blockS),
		Verdict:           verdict,
		Paused:            v.paused,
		Progress:          p,
		Gxx:               s.Gxx,
		Gyy:               s.Gyy,
		Distortion:        j.distortion,
		Gaps:              c.Gaps, Overranges: c.Overranges, Overloads: c.Overloads,
	}
}
