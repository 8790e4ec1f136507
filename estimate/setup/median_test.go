package setup

import (
	"math"
	"testing"

	"pgregory.net/rapid"
)

func TestMedian(t *testing.T) {
	nan := math.NaN()
	for _, test := range []struct {
		name   string
		values []float64
		want   float64
	}{
		{"none", nil, nan},
		{"one", []float64{3}, 3},
		{"odd", []float64{9, 1, 4}, 4},
		{"even", []float64{9, 1, 4, 5}, 4.5},
		{"not a number", []float64{9, nan, 4}, nan},
	} {
		got := median(test.values)
		if got != test.want && !(math.IsNaN(got) && math.IsNaN(test.want)) {
			t.Errorf("%s: %v, want %v", test.name, got, test.want)
		}
	}
}

// TestMedianIsRobust spoils fewer than half of the values: the median stays among the others.
func TestMedianIsRobust(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		good := rapid.SliceOfN(rapid.Float64Range(1, 2), 1, 50).Draw(t, "good")
		bad := rapid.SliceOfN(rapid.SampledFrom([]float64{-1e9, 0, 1e9, math.Inf(1)}), 0, len(good)-1).Draw(t, "bad")
		if got := median(append(good, bad...)); !(got >= 1 && got <= 2) {
			t.Errorf("%v", got)
		}
	})
}
