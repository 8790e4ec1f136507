package main

import (
	"math"
	"math/cmplx"
	"slices"
	"testing"
)

// planOf is the plan drawn for a scenario in the base setting.
func planOf(t *testing.T, name string) *plan {
	t.Helper()
	for _, p := range drawnPlans(t) {
		if p.row.name == name && p.row.setting.name == base.name {
			return p
		}
	}
	t.Fatalf("no scenario %q", name)
	return nil
}

// TestFallOfAForce measures how far the mean square of a force falls when its drive is off, and compares with the same of
// the densities whose median line decides what is right.
func TestFallOfAForce(t *testing.T) {
	p := planOf(t, "drive-off one")
	i, q := slices.Index(names(p.rig.Forces), p.faults[0].Target[0]), len(p.rig.Forces)
	if db := p.fallDB(i, 0); db > falls["drive-off"].farDB {
		t.Fatalf("%s: falls by %.1f dB only: choose a seed with one that falls far", p, db)
	}
	s, err := p.drawn.Source(p.rig, 1)
	if err != nil {
		t.Fatal(err)
	}
	f := p.faults[0].Fault
	f.FromS, f.ToS = 50, 0
	if err := s.SetFaults(f); err != nil {
		t.Fatal(err)
	}
	samples := drain(t, s, 50000, 1000) // 512 a second
	power := func(from, to int) (sum float64) {
		for n := from; n < to; n++ {
			v := samples[n*s.Channels()+p.rig.Forces[i].Index]
			sum += v * v
		}
		return sum / float64(to-from)
	}
	shares := slices.Repeat([]float64{1}, q)
	shares[i] = 0
	var on, off float64
	for hz := 0.05; hz < 200; hz += 0.05 {
		on += real(p.drawn.Truth().ForceDensities(nil, hz, nil)[i*q+i])
		off += real(p.drawn.Truth().ForceDensities(nil, hz, shares)[i*q+i])
	}
	got, want := 10*math.Log10(power(30000, 50000)/power(5000, 25000)), 10*math.Log10(off/on)
	if math.Abs(got-want) > 1.5 {
		t.Errorf("%s: fell by %.1f dB, worked out %.1f", p, got, want)
	}
}

// TestTurnedSensor: turned three times by the letter, a sensor is where it was.
func TestTurnedSensor(t *testing.T) {
	p := planOf(t, "tilt from the start")
	a := slices.Index(names(p.rig.Forces), p.faults[0].pointForce)
	o := p.rig.DrivingPoints()[a]
	const hz = 87
	want := complex(p.rig.Responses[o].Sign(), 0) * p.drawn.Truth().H(hz, o, a)
	copied, rig := *p, *p.rig
	copied.rig, rig.Responses = &rig, slices.Clone(rig.Responses)
	for range 2 {
		letter := "yzx"[rig.Responses[o].Letter()[0]-'x']
		rig.Responses[o].Axis = "+" + string(letter)
	}
	if got := copied.turned(o)(hz, a); cmplx.Abs(got-want) > 1e-12*cmplx.Abs(want) {
		t.Errorf("%v, want %v", got, want)
	}
	effects := make(map[string]tiltEffect)
	for b, name := range names(p.rig.Forces) {
		if b != a {
			effects[name] = p.tiltOf(a, b)
		}
		if said := slices.Contains(p.faults[0].factors, name); said != (b != a && effects[name] != local) {
			t.Errorf("%s with %s: a factor may be said: %v", p, name, said)
		}
	}
}
