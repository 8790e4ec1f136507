package setup

import (
	"math"
	"slices"
)

// median is the middle of values, the mean of the middle two of an even number of them, and NaN of
// none or when one is NaN. It sorts values.
func median(values []float64) float64 {
	n := len(values)
	if n == 0 {
		return math.NaN()
	}
	slices.Sort(values) // NaN goes first
	if math.IsNaN(values[0]) {
		return math.NaN()
	}
	return (values[(n-1)/2] + values[n/2]) / 2
}
