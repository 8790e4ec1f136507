package main

import (
	"bytes"
	"sync"
	"testing"
)

// drawnPlans are a plan of each scenario, drawn once for all tests, from a seed that nobody reports on.
func drawnPlans(t *testing.T) []*plan {
	t.Helper()
	plans, err := drawn()
	if err != nil {
		t.Fatal(err)
	}
	return plans
}

const drawnSeed = 7

var drawn = sync.OnceValues(func() (plans []*plan, err error) {
	for _, s := range scenarios() {
		p, err := newPlan(&s, drawnSeed)
		if err != nil {
			return nil, err
		}
		plans = append(plans, p)
	}
	return plans, nil
})

func TestPlanDependsOnItsSeedAlone(t *testing.T) {
	texts := make(map[string]string)
	for n, a := range drawnPlans(t) {
		if other, twice := texts[string(a.drawn.Text)]; twice {
			t.Errorf("%s and %s: the same rig, want one of their own", a, other)
		}
		texts[string(a.drawn.Text)] = a.String()
		if n%8 != 0 {
			continue
		}
		b, err := newPlan(a.row, drawnSeed)
		if err != nil {
			t.Fatal(err)
		}
		if a.String() != b.String() || !bytes.Equal(a.drawn.Text, b.drawn.Text) || a.frames != b.frames || a.source != b.source {
			t.Errorf("%s and %s: want the same run", a, b)
		}
	}
}

// TestPlanKeepsToItsScenario: the onset lies in the block behind those that are averaged before, and the run goes on
// behind the end.
func TestPlanKeepsToItsScenario(t *testing.T) {
	for _, p := range drawnPlans(t) {
		if p.faults == nil {
			continue
		}
		if p.scenario.start {
			if f := p.faults[0]; f.FromS != 0 || f.ToS != 0 || f.to != p.frames {
				t.Errorf("%s: want it from the first frame to the last", p)
			}
			continue
		}
		if q := len(p.rig.Forces); q < p.scenario.shakers {
			t.Errorf("%s: %d shakers, want %d", p, q, p.scenario.shakers)
		}
		first, set := p.grid.holding(p.faults[0].from), p.scenario.setting
		if first < int64(set.healthy[0]) || first > int64(set.healthy[1]) {
			t.Errorf("%s: block %d is the first to hold it, want %v", p, first, set.healthy)
		}
		for _, f := range p.faults {
			end := p.grid.behind(f.to)
			if behind := (p.frames - p.grid.first - p.grid.length) / p.grid.step; behind-end < int64(set.after)-1 {
				t.Errorf("%s: %d blocks behind the end, want %d", p, behind-end, set.after)
			}
			if f.from >= f.to {
				t.Errorf("%s: from frame %d to %d", p, f.from, f.to)
			}
		}
	}
}
