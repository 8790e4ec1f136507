package main

import (
	"slices"
	"testing"

	"shakerwatch/acquire/demo"
	"shakerwatch/estimate/watch"
)

// everyScenario calls do with each scenario, those in turn too.
func everyScenario(do func(s *scenario)) {
	for _, s := range scenarios() {
		do(&s)
		for _, turn := range s.turns {
			do(&turn)
		}
	}
}

func TestEveryKindOfFaultIsTried(t *testing.T) {
	tried := make(map[string]bool)
	everyScenario(func(s *scenario) {
		for _, f := range s.faults {
			tried[f.kind] = true
		}
	})
	for _, k := range demo.FaultKinds() {
		if !tried[k.Name] {
			t.Errorf("no scenario has %s", k.Name)
		}
	}
}

// TestEveryRightAnswerIsAsked looks for rows that no scenario needs. Drawing panics where a fault has no row.
func TestEveryRightAnswerIsAsked(t *testing.T) {
	asked := make(map[string]bool)
	for _, p := range drawnPlans(t) {
		for i := range p.faults {
			f := &p.faults[i]
			if len(f.answers) == 0 {
				t.Errorf("%s: no answer to %s", p, f.Kind)
				continue
			}
			for _, r := range rights {
				if r.fault == f.Kind && slices.ContainsFunc(r.answers, func(a answer) bool { return a == f.answers[0] }) {
					asked[r.fault+" "+r.on] = true
				}
			}
		}
	}
	for _, r := range rights {
		if !asked[r.fault+" "+r.on] {
			t.Errorf("no scenario has %s on %q", r.fault, r.on)
		}
	}
	for _, r := range rights {
		for _, a := range r.answers {
			if a.why == "" {
				t.Errorf("%s on %q: %s is right without a reason", r.fault, r.on, a.kind)
			}
		}
	}
}

func TestSaidRight(t *testing.T) {
	forces := []string{"S1", "S2", "S3"}
	fault := func(kind, class string, q int, target ...string) planned {
		return planned{
			Fault: demo.Fault{Kind: kind, Target: target}, answers: answersTo(kind, class, q), bandHz: [2]float64{10, 200},
			pointForce: "S1", pointResponse: "A1z",
		}
	}
	for _, c := range []struct {
		name  string
		fault planned
		event watch.Event
		want  bool
	}{
		{"its force", fault("detach", onForce, 3, "S1"), watch.Event{Kind: watch.ForceLost, Channels: []string{"S1"}}, true},
		{"another force", fault("detach", onForce, 3, "S1"), watch.Event{Kind: watch.ForceLost, Channels: []string{"S2"}}, false},
		{"its force and another", fault("detach", onForce, 3, "S1"), watch.Event{Kind: watch.ForceLost, Channels: []string{"S1", "S2"}}, false},
		{"no drive with one of several", fault("detach", onForce, 3, "S1"), watch.Event{Kind: watch.NoDrive, Channels: forces}, false},
		{"no drive with the only one", fault("detach", onForce, 1, "S1"), watch.Event{Kind: watch.NoDrive, Channels: forces}, true},
		{"no drive without all", fault("drive-off", onAll, 3, "all"), watch.Event{Kind: watch.NoDrive, Channels: forces[:2]}, false},
		{"wherever it shows", fault("mode-shift", "", 3), watch.Event{Kind: watch.StructureChanged, Channels: []string{"A9z"}}, true},
		{"level with a coupled one", fault("level", onForce, 3, "S1"), watch.Event{Kind: watch.LevelChanged, Channels: forces[:2]}, true},
		{"level of others", fault("level", onForce, 3, "S1"), watch.Event{Kind: watch.LevelChanged, Channels: forces[1:]}, false},
		{"tied everywhere", fault("tied", onForce, 3, "S1", "S2"), watch.Event{Kind: watch.ForcesCorrelated, Channels: forces, BandsHz: [][2]float64{{12, 80}, {90, 190}}}, true},
		{"a resonance of their own", fault("tied", onForce, 3, "S1", "S2"), watch.Event{Kind: watch.ForcesCorrelated, Channels: forces, BandsHz: [][2]float64{{12, 80}}}, false},
		{"pair with the point", fault("gain", onResponse+fromStart, 3, "A1z"), watch.Event{Kind: watch.ReciprocityOff, Cause: watch.CauseGain, Channels: forces[:2]}, true},
		{"pair without it", fault("gain", onResponse+fromStart, 3, "A1z"), watch.Event{Kind: watch.ReciprocityOff, Cause: watch.CauseGain, Channels: forces[1:]}, false},
		{"another cause", fault("gain", onResponse+fromStart, 3, "A1z"), watch.Event{Kind: watch.ReciprocityOff, Cause: watch.CauseLocal, Channels: forces[:2]}, false},
		{"point", fault("reverse", onResponse+fromStart, 3, "A1z"), watch.Event{Kind: watch.PolaritySuspect, Channels: []string{"S1", "A1z"}}, true},
		{"another point", fault("reverse", onResponse+fromStart, 3, "A1z"), watch.Event{Kind: watch.PolaritySuspect, Channels: []string{"S2", "A2z"}}, false},
	} {
		if got := c.fault.saidRight(&c.event, forces); got != c.want {
			t.Errorf("%s: %v, want %v", c.name, got, c.want)
		}
	}
}
