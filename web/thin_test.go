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
		name string
		span span
		runs [][2]int
	}{
		{"one line", span{3, 3, 1000, false}, [][2]int{{1, 1}}},
		{"as many lines as points", span{0, 999, 1000, false}, [][2]int{{1000, 1}}},
		{"one more", span{0, 1000, 1000, false}, [][2]int{{500, 2}, {1, 1}}},
		{"the demo's lines", span{0, 1600, 1000, false}, [][2]int{{800, 2}, {1, 1}}},
		{"the same on a small plot", span{0, 1600, 400, false}, [][2]int{{320, 5}, {1, 1}}},
		{"a band of them", span{300, 1299, 1000, false}, [][2]int{{1000, 1}}},
		{"very many", span{0, 100_000, 1000, false}, [][2]int{{990, 101}, {1, 11}}},
		{"by ratio, wide enough for each line", span{1, 6, 1000, true}, [][2]int{{6, 1}}},
		// Three octaves over six points: each edge is at least a root of two above the last, rounded up.
		{"by ratio", span{16, 127, 6, true}, [][2]int{{1, 7}, {1, 10}, {1, 14}, {1, 20}, {1, 28}, {1, 33}}},
	}
	for _, test := range tests {
		t.Run(test.name, func(t *testing.T) {
			if got := newGrid(test.span).runs(); !slices.Equal(got, test.runs) {
				t.Errorf("points and lines %v, want %v", got, test.runs)
			}
		})
	}
}

// drawSpan draws any span within so many lines.
func drawSpan(t *rapid.T, lines int) span {
	log := lines > 1 && rapid.Bool().Draw(t, "log")
	first := rapid.IntRange(0, lines-1).Draw(t, "first")
	if log {
		first = max(first, 1)
	}
	return span{first, rapid.IntRange(first, lines-1).Draw(t, "last"), rapid.IntRange(1, 200).Draw(t, "points"), log}
}

// Every line belongs to exactly one point, and there are never more points than asked for.
func TestGridLosesNoLine(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		s := drawSpan(t, rapid.IntRange(1, 5000).Draw(t, "lines"))
		g := newGrid(s)
		if g.points() > s.most {
			t.Fatalf("%d points of at most %d", g.points(), s.most)
		}
		next := s.first
		for i := range g.points() {
			lo, hi := g.lines(i, 1)
			if lo != next || hi <= lo {
				t.Fatalf("point %d has lines %d to %d, line %d is next", i, lo, hi-1, next)
			}
			next = hi
		}
		if next != s.last+1 {
			t.Fatalf("the points end before line %d, the last is %d", next, s.last)
		}
	})
}

func TestThinningTakesExtremesNotEveryNthLine(t *testing.T) {
	nan := math.NaN()
	values := []float64{5, 1, 7, nan, nan, nan, 4, 4, nan, 9}
	g := newGrid(span{first: 0, last: 9, most: 4})
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
	g := newGrid(span{first: 2, last: 6, most: 5})
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
		g := newGrid(drawSpan(t, len(values)))

		smallest, largest := math.NaN(), math.NaN()
		for _, v := range values[g.first : g.last+1] {
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
		lo, hi := g.lines(g.points()-1, 1)
		whole := hi-lo == 1 || g.points()%2 == 0
		check("extremes", g.extremes(nil, column(values)), 2, true, whole)
	})
}
