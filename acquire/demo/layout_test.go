package demo

import (
	"slices"
	"testing"
)

func TestLayoutNamesWhatDoesNotFit(t *testing.T) {
	r := Rig()
	r.Path = "my.toml"
	r.Forces[1].Point, r.Forces[1].Axis, r.Forces[1].Line = r.Forces[0].Point, "-z", 8
	r.Responses[0].Point, r.Responses[0].Line = "99", 5
	r.Responses[3].Point, r.Responses[3].Line = "", 7
	_, err := newLayout(r, newSkid())
	const want = `my.toml:5: response "A12z": the simulated structure has no point "99": choose a point from 1 to 20
my.toml:7: response "A5z": the simulated structure has no point "": choose a point from 1 to 20
my.toml:8: force "S2": the simulated shaker of force "S1" pushes at point "12" along z already: choose another point or axis`
	if err == nil || err.Error() != want {
		t.Errorf("error:\n%v\nwant:\n%s", err, want)
	}
	for name, build := range map[string]func() error{
		"New":      func() error { _, err := New(r, 1); return err },
		"NewTruth": func() error { _, err := NewTruth(r); return err },
	} {
		if err := build(); err == nil || err.Error() != want {
			t.Errorf("%s: %v: want the same error", name, err)
		}
	}
}

func TestLayoutKeepsRigOrder(t *testing.T) {
	r, l := demoLayout(t)
	slices.Reverse(r.Responses)
	slices.Reverse(r.Forces)
	turned, err := newLayout(r, newSkid())
	if err != nil {
		t.Fatal(err)
	}
	slices.Reverse(turned.sensors)
	slices.Reverse(turned.shakers)
	if !slices.Equal(turned.sensors, l.sensors) || !slices.Equal(turned.shakers, l.shakers) {
		t.Errorf("reversed rig: %v, %v: want %v, %v", turned.shakers, turned.sensors, l.shakers, l.sensors)
	}
}
