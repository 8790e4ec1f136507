package main

import (
	"slices"

	"shakerwatch/estimate/watch"
)

// An outcome is what a run is worth.
type outcome struct {
	plan   *plan
	played *played
	err    error

	detected bool
	named    bool  // rightly and in time, and nothing else was named first
	delay    int64 // hops from the first block that holds the fault to the right event; of the slowest of several
	spoilt   int   // averaged blocks that hold any of a fault
	before   int   // false events before the onset
	other    int   // and later ones
	resumed  int64 // hops until averaging goes on behind the fault; -1 is never

	faults  int                // false events of kinds that are faults, in a healthy run
	apart   map[watch.Kind]int // events of other kinds, in a healthy run
	depends dependence         // of the forces, in a healthy run
}

// faultKinds make the verdict stop-and-look, but for reciprocity that is off by something local.
var faultKinds = []watch.Kind{
	watch.NoDrive, watch.ForceLost, watch.ForceNotReaching, watch.ResponseSuspect, watch.StructureChanged,
	watch.DeadChannel, watch.TwinChannels, watch.PolaritySuspect, watch.ReciprocityOff,
}

func isFault(e *watch.Event) bool {
	return slices.Contains(faultKinds, e.Kind) && e.Cause != watch.CauseLocal
}

// excused events follow from a fault, or are true by themselves: what a fault does may reach a channel's limit; where drives
// are tied the levels of the forces change; and forces depend on each other by physics on many rigs, which is judged on
// healthy runs and, behind a fault, by whether it is true anywhere.
func (p *plan) excused(e *watch.Event, hop int64) bool {
	tied := p.faults[0].Kind == "tied" || p.faults[0].Kind == "tied-band"
	switch e.Kind {
	case watch.Overrange:
		return true
	case watch.LevelChanged:
		return tied
	case watch.ForcesCorrelated:
		from, to := p.window(&p.faults[0])
		return tied || p.scenario.start || hop >= from && hop <= to || !p.invented(e)
	}
	return false
}

// invented tells whether in none of the bands of an event the forces of the sound rig depend on each other.
func (p *plan) invented(e *watch.Event) bool {
	if p.truth == nil {
		p.truth = p.forceCoherence()
	}
	for _, b := range e.BandsHz {
		if slices.Max(p.truth[p.line(b[0]):p.line(b[1])+1]) >= leastCoherence {
			return false
		}
	}
	return true
}

// assess judges what was played by the plan.
func assess(p *plan, r *played) *outcome {
	out := &outcome{plan: p, played: r, resumed: -1}
	if p.faults == nil {
		out.healthy()
		return out
	}
	out.spoilt = p.spoilt(r.starts)
	out.name()
	if !p.scenario.start {
		out.resume()
	}
	return out
}

// healthy counts the events of a run without a fault.
func (out *outcome) healthy() {
	out.apart = make(map[watch.Kind]int)
	for i := range out.played.events {
		switch e := &out.played.events[i]; {
		case e.Edge != watch.Raised:
		case isFault(e):
			out.faults++
		default:
			out.apart[e.Kind]++
		}
	}
	if out.plan.scenario.setting.name == base.name {
		out.depends = out.plan.compare(out.played)
	}
}

// hop is the block whose judgement raised an event.
func (p *plan) hop(e *watch.Event) int64 { return p.grid.hops(e.TimeS*p.rig.Source.RateHz, 0) }

// window is the blocks in which a fault may be named: from the first that holds it until what follows from the last is
// told.
func (p *plan) window(f *planned) (first, last int64) {
	return p.grid.holding(f.from), p.grid.behind(f.to) - 1 + p.scenario.limit()
}

// name finds what was said about the faults.
func (out *outcome) name() {
	p, forces := out.plan, names(out.plan.rig.Forces)
	first := make([]int64, len(p.faults)) // right event about each fault, in hops behind its onset; -1 is none
	for n := range first {
		first[n] = -1
	}
	onset, _ := p.window(&p.faults[0])
	wrong := int64(-1) // hop of the first false event behind the onset
	for i := range out.played.events {
		e := &out.played.events[i]
		if e.Edge != watch.Raised {
			continue
		}
		hop, right := p.hop(e), false
		for n := range p.faults {
			f := &p.faults[n]
			if from, to := p.window(f); hop >= from && hop <= to && f.saidRight(e, forces) {
				right = true
				if first[n] < 0 {
					first[n] = hop - from - out.unseen(from, hop)
				}
			}
		}
		switch {
		case right:
			out.detected = true
		case p.excused(e, hop):
		case hop < onset:
			out.before++
		default:
			out.other++
			out.detected = out.detected || isFault(e)
			if wrong < 0 {
				wrong = hop - onset
			}
		}
	}
	out.settle(first, wrong)
}

// unseen counts the blocks from one before another in which a channel reached its limit, or frames were lost: nobody looks
// at them, so they count for no delay.
func (out *outcome) unseen(from, before int64) (count int64) {
	standing := make(map[watch.Kind]int64)
	for i := range out.played.events {
		e := &out.played.events[i]
		if e.Kind != watch.Overrange && e.Kind != watch.Gap {
			continue
		}
		hop := out.plan.hop(e)
		if e.Edge == watch.Raised {
			standing[e.Kind] = hop
			continue
		}
		count += max(0, min(hop, before)-max(standing[e.Kind], from))
	}
	return count
}

// settle decides whether the faults were named.
func (out *outcome) settle(first []int64, wrong int64) {
	out.named = true
	for _, delay := range first {
		out.delay = max(out.delay, delay)
		switch {
		case delay < 0, wrong >= 0 && wrong <= delay:
			out.named = false
		case out.plan.scenario.start:
			out.named = out.named && wrong < 0
		case len(first) == 1:
			out.named = out.named && delay <= out.plan.scenario.limit()
		}
	}
	if slices.Contains(first, -1) {
		out.delay = -1
	}
}

// spoilt counts the averaged blocks that hold any frame of a fault which should have kept them out.
func (p *plan) spoilt(starts []int64) (count int) {
	if p.scenario.averaged || p.scenario.start {
		return 0
	}
	for _, s := range starts {
		if slices.ContainsFunc(p.faults, func(f planned) bool { return s < f.to && s+p.grid.length > f.from }) {
			count++
		}
	}
	return count
}

// resume finds the first averaged block behind the faults.
func (out *outcome) resume() {
	p := out.plan
	var end int64
	for _, f := range p.faults {
		end = max(end, f.to)
	}
	for _, s := range out.played.starts {
		if s >= end {
			out.resumed = max(0, p.grid.hops(float64(s+p.grid.length), p.grid.behind(end)))
			return
		}
	}
}
