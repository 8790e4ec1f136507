package web

import (
	"slices"
	"testing"

	"pgregory.net/rapid"

	"shakerwatch/acquire/rig"
	"shakerwatch/estimate"
	"shakerwatch/spectra"
)

func TestDrivingPoints(t *testing.T) {
	r := &rig.Rig{
		Forces: []rig.Channel{{Point: "7", Axis: "+z"}, {Point: "7", Axis: "-x"}, {Point: "9", Axis: "+y"}},
		Responses: []rig.Channel{
			{Point: "8", Axis: "+z"}, {Point: "7", Axis: "-z"}, {Point: "7", Axis: "+z"}, {Point: "9", Axis: "+x"}, {Point: "7", Axis: "+x"},
		},
	}
	// The first in file order counts, whatever the sign of its axis; force 3 has none.
	if got, want := drivingPoints(r), []int{1, 4, -1}; !slices.Equal(got, want) {
		t.Errorf("%v, want %v", got, want)
	}
}

// The pairs are those of the estimates, in the same order.
func TestPairsAreThoseOfTheEstimates(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		points := rapid.SliceOfN(rapid.IntRange(-1, 3), 1, 6).Draw(t, "points")
		var same []estimate.DrivingPoint
		for _, o := range points {
			same = append(same, estimate.DrivingPoint{Response: o, Sign: 1})
		}
		e := estimate.New(spectra.Shape{Lines: 1, Forces: len(points), Responses: 4}, same)
		if got := pairs(points); !slices.Equal(got, e.ReciprocityPairs) {
			t.Fatalf("%v, want %v", got, e.ReciprocityPairs)
		}
	})
}
