package main

import (
	"bytes"
	"testing"
)

// TestSmallSuite plays a part of the suite with fixed seeds, on short blocks so that it takes seconds: each fault in turn,
// faults from the start, a healthy run. It has to meet all aims. The command plays all of it.
func TestSmallSuite(t *testing.T) {
	short := "block 1024"
	s := &suite{from: reportFrom, runs: len(inTurn), again: 2, workers: parallel}
	for _, c := range scenarios() {
		if c.setting.name == short {
			s.scenarios = append(s.scenarios, c)
		}
	}
	for _, c := range []scenario{
		stays("gain", "gain", aDrivingPoint, reciprocal), stays("reversed response", "reverse", aDrivingPoint, reciprocal),
		come("dead response", "dead", aResponse), come("cut cell", "cut", aForce),
	} {
		c.setting, c.share = s.scenarios[0].setting, 1./float64(s.runs)
		s.scenarios = append(s.scenarios, c)
	}
	tallies, err := s.play(t.Context())
	if err != nil {
		t.Fatal(err)
	}
	var table bytes.Buffer
	if err := report(&table, tallies); err != nil {
		t.Fatal(err)
	}
	for _, text := range missed(tallies) {
		t.Error(text)
	}
	for _, y := range tallies {
		for _, o := range y.outcomes {
			if o.plan.faults != nil && !o.plan.scenario.start && o.resumed < 0 {
				t.Errorf("%s: averaging did not go on", o.plan)
			}
		}
	}
	for _, y := range tallies {
		for _, o := range y.outcomes {
			if o.plan.faults != nil && !o.named || o.spoilt+o.before+o.faults > 0 {
				o.tell(&table)
			}
		}
	}
	t.Log("\n" + table.String())
}
