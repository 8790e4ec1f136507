package web

import "math"

// mostPoints is how many points of a curve travel at most: no plot is wider than that in pixels, and a
// reader who wants each line narrows the band. leastPoints is for the smallest of plots.
const (
	mostPoints  = 1000
	leastPoints = 200
	pointsStep  = 100
)

// A span is the lines first to last of a spectrum, and over how many points they are spread at most:
// each point stands for as many lines or, with log, for about the same ratio of frequencies.
type span struct {
	first, last, most int
	log               bool // then first > 0
}

// A grid is a span spread over points: point i stands for lines edges[i] to edges[i+1]-1.
//
// Where a point stands for several lines a curve is thinned without losing what matters: each point
// shows the lowest, the highest or, in turns, one of both extremes of its lines, never every n-th line.
type grid struct {
	span
	edges []int
}

// newGrid makes the grid of a span.
func newGrid(s span) grid {
	step := (s.last - s.first + s.most) / s.most
	ratio := 1.0
	if s.log {
		step = 1
		ratio = math.Pow(float64(s.last+1)/float64(s.first), 1/float64(s.most))
	}
	g := grid{s, make([]int, 1, s.most+1)}
	g.edges[0] = s.first
	for edge := s.first; edge <= s.last; {
		next := max(edge+step, int(math.Ceil(float64(edge)*ratio)))
		if len(g.edges) == s.most {
			next = s.last + 1 // the ratio's rounding leaves no line over
		}
		edge = min(next, s.last+1)
		g.edges = append(g.edges, edge)
	}
	return g
}

// points is the number of points.
func (g grid) points() int { return len(g.edges) - 1 }

// lines are those that n points from the given one on stand for: lo to hi-1.
func (g grid) lines(point, n int) (lo, hi int) {
	return g.edges[point], g.edges[min(point+n, g.points())]
}

// runs are the widths of the points as pairs: so many points of so many lines each, one after another.
func (g grid) runs() [][2]int {
	var list [][2]int
	for i := range g.points() {
		lo, hi := g.lines(i, 1)
		if n := len(list); n > 0 && list[n-1][1] == hi-lo {
			list[n-1][0]++
			continue
		}
		list = append(list, [2]int{1, hi - lo})
	}
	return list
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
	negative := func(line int) float64 { return -value(line) }
	n := g.points()
	for i := 0; i < n; i += 2 {
		lo, hi := g.lines(i, 2)
		switch {
		case i+1 == n: // half a pair has room for one
			dst = append(dst, lowestLine(lo, hi, value))
		case hi-lo == 2:
			dst = append(dst, lo, lo+1)
		default:
			low, high := lowestLine(lo, hi, value), lowestLine(lo, hi, negative)
			dst = append(dst, min(low, high), max(low, high))
		}
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
