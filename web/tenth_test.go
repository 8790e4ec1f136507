package web

import (
	"math"
	"slices"
	"testing"

	"pgregory.net/rapid"
)

func TestWorstAndTenth(t *testing.T) {
	nan := math.NaN()
	ascending := func(n int) []float64 {
		values := make([]float64, n)
		for i := range values {
			values[i] = float64(i + 1)
		}
		return values
	}
	tests := []struct {
		name         string
		values       []float64
		worst, tenth float64
	}{
		{"none", nil, nan, nan},
		{"none known", []float64{nan, nan}, nan, nan},
		{"one", []float64{0.5}, 0.5, 0.5},
		{"unknown ones do not count", []float64{nan, 0.9, nan, 0.2}, 0.2, 0.2},
		{"ten: a tenth is one", ascending(10), 1, 1},
		{"eleven: a tenth is more than one", ascending(11), 1, 2},
		{"a hundred", ascending(100), 1, 10},
		{"504", ascending(504), 1, 51},
	}
	for _, test := range tests {
		t.Run(test.name, func(t *testing.T) {
			worst, at, tenth := worstAndTenth(test.values, make([]float64, len(test.values)))
			if !same(worst, test.worst) || !same(tenth, test.tenth) {
				t.Errorf("%g and %g, want %g and %g", worst, tenth, test.worst, test.tenth)
			}
			if !math.IsNaN(worst) && test.values[at] != worst {
				t.Errorf("the worst is said to stand at %d, where %g is", at, test.values[at])
			}
		})
	}
}

func same(a, b float64) bool { return a == b || math.IsNaN(a) && math.IsNaN(b) }

func TestSmallestIsWhatSortingWouldGive(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		// Few different values, so that there are many equals.
		values := rapid.SliceOfN(rapid.Custom(func(t *rapid.T) float64 {
			return float64(rapid.IntRange(0, 20).Draw(t, "value"))
		}), 1, 200).Draw(t, "values")
		n := rapid.IntRange(0, len(values)-1).Draw(t, "n")
		sorted := slices.Sorted(slices.Values(values))
		if got := smallest(slices.Clone(values), n); got != sorted[n] {
			t.Fatalf("%g at %d, want %g", got, n, sorted[n])
		}
	})
}
