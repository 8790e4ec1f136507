package rig

import (
	"math"
	"slices"
	"testing"
)

func TestDrivingPoints(t *testing.T) {
	at := func(point, axis string) Channel { return Channel{Point: point, Axis: axis} }
	r := &Rig{
		Forces: []Channel{at("112", "+z"), at("131", "-y"), at("131", "-x"), at("07", "+z"), at("140", "-x")},
		Responses: []Channel{
			at("131", "+x"), at("112", "-z"), at("112", "+z"), at("131", "-y"), at("7", "+z"), at("112", "+y"),
			at("140", "+x"),
		},
	}
	// The first of two at 112; 131 by its letter; "07" is not "7".
	if got, want := r.DrivingPoints(), []int{1, 3, 0, -1, 6}; !slices.Equal(got, want) {
		t.Errorf("driving points %v, want %v", got, want)
	}
	if got, want := r.DrivingPairs(), []Pair{{0, 1}, {1, 3}, {2, 0}, {4, 6}}; !slices.Equal(got, want) {
		t.Errorf("pairs %v, want %v", got, want)
	}
	for force, want := range []float64{-1, 1, -1, math.NaN(), -1} {
		if got := r.DrivingSign(force); got != want && !(math.IsNaN(got) && math.IsNaN(want)) {
			t.Errorf("force %d: sign %v, want %v", force, got, want)
		}
	}
}
