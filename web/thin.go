package web

import "math"

// maxPoints is how many points of a curve travel at most: a plot on a wall screen is about that many
// pixels wide, and a reader who wants each line narrows the band.
const maxPoints = 1000

// A grid spreads the lines first to last of a spectrum over points, step lines to a point. The last
// point may stand for fewer.
//
// Where step > 1 a curve is thinned without losing what matters: each point stands for the lowest, the
// highest or, in turns, one of both extremes of its lines, never for every n-th line.
type grid struct {
	first, last, step int
}

// newGrid makes the grid for lines first to last, 0 <= first <= last.
func newGrid(first, last int) grid {
	return grid{first, last, (last - first + maxPoints) / maxPoints}
}

// points is the number of points.
func (g grid) points() int { return (g.last - g.first + g.step) / g.step }

// lines are those from the given one on that n points stand for: lo to hi-1.
func (g grid) lines(point, n int) (lo, hi int) {
	lo = g.first + point*g.step
	return lo, min(lo+n*g.step, g.last+1)
}

// lowest appends for each point the line of the smallest value to dst. A line whose value is NaN is
// taken only where no other is there.
func (g grid) lowest(dst []int, value func(line int) float64) []int {
	for i := range g.points() {
		lo, hi := g.lines(i, 1)
		dst = append(dst, lowestLine(lo, hi, value))
	}
	return dst
}

// highest is lowest with the largest value.
func (g grid) highest(dst []int, value func(line int) float64) []int {
	return g.lowest(dst, func(line int) float64 { return -value(line) })
}

// extremes appends for each pair of points the lines of the smallest and the largest value of both
// points' lines to dst, in the order of frequency. NaN is treated as by lowest.
func (g grid) extremes(dst []int, value func(line int) float64) []int {
	if g.step == 1 {
		return g.lowest(dst, value)
	}
	negative := func(line int) float64 { return -value(line) }
	n := g.points()
	for i := 0; i < n; i += 2 {
		lo, hi := g.lines(i, 2)
		if i+1 == n {
			dst = append(dst, lowestLine(lo, hi, value)) // half a pair has room for one
			break
		}
		low, high := lowestLine(lo, hi, value), lowestLine(lo, hi, negative)
		dst = append(dst, min(low, high), max(low, high))
	}
	return dst
}

// lowestLine is the line from lo to hi-1 with the smallest value, the first of equals.
func lowestLine(lo, hi int, value func(line int) float64) int {
	best, smallest := lo, math.NaN()
	for line := lo; line < hi; line++ {
		if v := value(line); v < smallest || math.IsNaN(smallest) && !math.IsNaN(v) {
			best, smallest = line, v
		}
	}
	return best
}
