package web

import (
	"math"
	"slices"
	"testing"

	"pgregory.net/rapid"
)

func column(values []float64) func(int) float64 {
	return func(line int) float64 { return values[line] }
}

func TestGridSpreadsLines(t *testing.T) {
	tests := []struct {
		name        string
		first, last int
		step        int
		points      int
	}{
		{"one line", 3, 3, 1, 1},
		{"as many lines as points", 0, maxPoints - 1, 1, maxPoints},
		{"one more", 0, maxPoints, 2, maxPoints/2 + 1},
		{"the demo's lines", 0, 1600, 2, 801},
		{"a band of them", 300, 1299, 1, 1000},
		{"very many", 0, 100_000, 101, 991},
	}
	for _, test := range tests {
		t.Run(test.name, func(t *testing.T) {
			g := newGrid(test.first, test.last)
			if g.step != test.step || g.points() != test.points {
				t.Errorf("step %d, %d points; want %d, %d", g.step, g.points(), test.step, test.points)
			}
		})
	}
}

func TestThinningTakesExtremesNotEveryNthLine(t *testing.T) {
	nan := math.NaN()
	values := []float64{5, 1, 7, nan, nan, nan, 4, 4, nan, 9}
	g := grid{first: 0, last: 9, step: 3}
	tests := []struct {
		name string
		pick pick
		want []int
	}{
		{"lowest", g.lowest, []int{1, 3, 6, 9}},
		{"highest", g.highest, []int{2, 3, 6, 9}},
		{"extremes, in the order of frequency", g.extremes, []int{1, 2, 6, 9}},
	}
	for _, test := range tests {
		t.Run(test.name, func(t *testing.T) {
			if got := test.pick(nil, column(values)); !slices.Equal(got, test.want) {
				t.Errorf("lines %v, want %v", got, test.want)
			}
		})
	}
}

func TestExtremesKeepEveryLineWhereNothingIsThinned(t *testing.T) {
	g := grid{first: 2, last: 6, step: 1}
	got := g.extremes(nil, column([]float64{0, 0, 3, math.NaN(), 1, 2, 9}))
	if want := []int{2, 3, 4, 5, 6}; !slices.Equal(got, want) {
		t.Errorf("lines %v, want %v", got, want)
	}
}

// However a curve is thinned, its smallest and largest values are still there, and every point shows one
// of its own lines.
func TestThinningLosesNoExtreme(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		values := rapid.SliceOfN(rapid.Custom(func(t *rapid.T) float64 {
			if rapid.IntRange(0, 9).Draw(t, "unknown") == 0 {
				return math.NaN()
			}
			return rapid.Float64Range(-1e6, 1e6).Draw(t, "value")
		}), 1, 300).Draw(t, "values")
		first := rapid.IntRange(0, len(values)-1).Draw(t, "first")
		last := rapid.IntRange(first, len(values)-1).Draw(t, "last")
		g := grid{first, last, rapid.IntRange(1, 40).Draw(t, "step")}

		smallest, largest := math.NaN(), math.NaN()
		for _, v := range values[first : last+1] {
			if math.IsNaN(v) {
				continue
			}
			if !(v >= smallest) {
				smallest = v
			}
			if !(v <= largest) {
				largest = v
			}
		}
		check := func(name string, got []int, width int, wantSmallest, wantLargest bool) {
			if len(got) != g.points() {
				t.Fatalf("%s: %d lines for %d points", name, len(got), g.points())
			}
			var shown []float64
			for i, line := range got {
				lo, _ := g.lines(i/width*width, width)
				_, hi := g.lines(i/width*width, width)
				if line < lo || line >= hi {
					t.Fatalf("%s: point %d shows line %d, its lines are %d to %d", name, i, line, lo, hi-1)
				}
				shown = append(shown, values[line])
			}
			if wantSmallest && !math.IsNaN(smallest) && !slices.Contains(shown, smallest) {
				t.Fatalf("%s: the smallest value %g is lost", name, smallest)
			}
			if wantLargest && !math.IsNaN(largest) && !slices.Contains(shown, largest) {
				t.Fatalf("%s: the largest value %g is lost", name, largest)
			}
		}
		check("lowest", g.lowest(nil, column(values)), 1, true, false)
		check("highest", g.highest(nil, column(values)), 1, false, true)
		// Half a pair at the end has room for the smallest value only.
		whole := g.step == 1 || g.points()%2 == 0
		check("extremes", g.extremes(nil, column(values)), 2, true, whole)
	})
}
