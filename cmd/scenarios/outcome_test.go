package main

import (
	"testing"

	"shakerwatch/acquire/demo"
	"shakerwatch/acquire/rig"
	"shakerwatch/estimate/watch"
)

// storyPlan is a run of blocks of 200 frames every 100, with a stinger off in frames 3050 to 5009: blocks 29 to 50 hold it.
func storyPlan() *plan {
	s := come("detach", "detach", aForce)
	return &plan{
		row: &s, scenario: &s, grid: grid{step: 100, length: 200}, frames: 7000,
		rig:   &rig.Rig{Source: rig.Source{RateHz: 100}, Forces: []rig.Channel{{Name: "S1"}, {Name: "S2"}}, Grid: rig.Grid{SpacingHz: 1}},
		truth: []float64{0, 0, 0.9, 0.1, 0.1},
		faults: []planned{{
			Fault: demo.Fault{Kind: "detach", Target: []string{"S1"}}, from: 3050, to: 5010, answers: answersTo("detach", onForce, 2),
		}},
	}
}

// said is an event that the judgement of a block raised.
func said(block int64, kind watch.Kind, channels ...string) watch.Event {
	return watch.Event{TimeS: float64(block) + 2, Block: block, Edge: watch.Raised, Kind: kind, Channels: channels}
}

func TestAssess(t *testing.T) {
	lost := func(block int64) watch.Event { return said(block, watch.ForceLost, "S1") }
	correlated := func(block int64, lo, hi float64) watch.Event {
		e := said(block, watch.ForcesCorrelated, "S1", "S2")
		e.BandsHz = [][2]float64{{lo, hi}}
		return e
	}
	ended := func(block int64, kind watch.Kind) watch.Event {
		e := said(block, kind)
		e.Edge = watch.Cleared
		return e
	}
	clears := lost(30)
	clears.Edge = watch.Cleared
	for _, c := range []struct {
		name          string
		events        []watch.Event
		starts        []int64
		detected      bool
		named         bool
		delay         int64
		spoilt        int
		before, other int
		resumed       int64
	}{
		{name: "nothing", delay: -1, resumed: -1},
		{name: "in time", events: []watch.Event{lost(31)}, detected: true, named: true, delay: 2, resumed: -1},
		{name: "in the last hop", events: []watch.Event{lost(32)}, detected: true, named: true, delay: 3, resumed: -1},
		{name: "late", events: []watch.Event{lost(33)}, detected: true, delay: 4, resumed: -1},
		{name: "before it was there", events: []watch.Event{lost(28)}, delay: -1, before: 1, resumed: -1},
		{name: "when all was over", events: []watch.Event{lost(54)}, detected: true, delay: -1, other: 1, resumed: -1},
		{name: "an end is no beginning", events: []watch.Event{clears}, delay: -1, resumed: -1},
		{name: "another force", events: []watch.Event{said(31, watch.ForceLost, "S2")}, detected: true, delay: -1, other: 1, resumed: -1},
		{name: "another name first", events: []watch.Event{said(30, watch.StructureChanged, "A1z"), lost(31)}, detected: true, delay: 2, other: 1, resumed: -1},
		{name: "another name later", events: []watch.Event{lost(31), said(40, watch.StructureChanged, "A1z")}, detected: true, named: true, delay: 2, other: 1, resumed: -1},
		{name: "no fault, but false", events: []watch.Event{said(30, watch.Disturbance, "A1z")}, delay: -1, other: 1, resumed: -1},
		{name: "false earlier", events: []watch.Event{said(5, watch.TwinChannels, "A1z", "A2z"), lost(31)}, detected: true, named: true, delay: 2, before: 1, resumed: -1},
		{name: "at a limit", events: []watch.Event{said(29, watch.Overrange, "S1"), lost(31)}, detected: true, named: true, delay: 2, resumed: -1},
		{name: "late, but nobody could look", events: []watch.Event{said(30, watch.Overrange, "A1z"), ended(32, watch.Overrange), lost(34)}, detected: true, named: true, delay: 3, resumed: -1},
		{name: "forces that do depend", events: []watch.Event{correlated(20, 2, 3), lost(31)}, detected: true, named: true, delay: 2, resumed: -1},
		{name: "forces that do not", events: []watch.Event{correlated(60, 3, 4), lost(31)}, detected: true, named: true, delay: 2, other: 1, resumed: -1},
		{name: "while it stands they may", events: []watch.Event{lost(31), correlated(40, 3, 4)}, detected: true, named: true, delay: 2, resumed: -1},
		{name: "blocks at its edges", starts: []int64{2850, 5010}, delay: -1, resumed: 0},
		{name: "blocks that hold it", starts: []int64{2851, 4000, 5009}, delay: -1, spoilt: 3, resumed: -1},
		{name: "goes on", starts: []int64{2800, 5300}, delay: -1, resumed: 2},
	} {
		p := storyPlan()
		got := assess(p, &played{events: c.events, starts: c.starts})
		if got.detected != c.detected || got.named != c.named || got.delay != c.delay || got.spoilt != c.spoilt ||
			got.before != c.before || got.other != c.other || got.resumed != c.resumed {
			t.Errorf("%s: detected %v, named %v, delay %d, spoilt %d, before %d, other %d, resumed %d; want %+v", c.name,
				got.detected, got.named, got.delay, got.spoilt, got.before, got.other, got.resumed, c)
		}
	}
}

// TestAssessTwoFaults: each has its own onset, and both must be named.
func TestAssessTwoFaults(t *testing.T) {
	p := storyPlan()
	p.faults = append(p.faults, planned{
		Fault: demo.Fault{Kind: "loose", Target: []string{"A1z"}}, from: 4050, to: 5010, answers: answersTo("loose", onResponse, 2),
	})
	first, second := said(31, watch.ForceLost, "S1"), said(44, watch.ResponseSuspect, "A1z") // five hops behind block 39
	if got := assess(p, &played{events: []watch.Event{first}}); got.named || got.delay != -1 {
		t.Errorf("the first alone: named %v, delay %d", got.named, got.delay)
	}
	if got := assess(p, &played{events: []watch.Event{first, second}}); !got.named || got.delay != 5 {
		t.Errorf("both: named %v, delay %d, want 5", got.named, got.delay)
	}
	early := said(35, watch.ResponseSuspect, "A1z")
	if got := assess(p, &played{events: []watch.Event{first, early}}); got.named || got.other != 1 {
		t.Errorf("the second before it came: named %v, other %d", got.named, got.other)
	}
}

func TestAssessHealthy(t *testing.T) {
	p := storyPlan()
	p.faults, p.scenario.setting.name = nil, "not the base"
	local := said(20, watch.ReciprocityOff, "S1", "S2")
	local.Cause = watch.CauseLocal
	got := assess(p, &played{events: []watch.Event{
		said(10, watch.TwinChannels, "A1z", "A2z"), said(20, watch.Disturbance, "A1z"), local, said(30, watch.ForcesCorrelated, "S1", "S2"),
	}})
	if got.faults != 1 || len(got.apart) != 3 || got.apart[watch.Disturbance] != 1 || got.apart[watch.ReciprocityOff] != 1 {
		t.Errorf("%d faults, apart %v: want 1 and three kinds", got.faults, got.apart)
	}
}
