package web

import "math"

// maxShown is how many chosen responses one plot shows together: more curves than that cannot be told
// apart.
const maxShown = 6

// minLines is the narrowest band that can be looked at.
const minLines = 8

// A view is what one page shows besides what all pages show: which frequency response, which
// responses' coherence, which reciprocity pair, and which band.
type view struct {
	response, force int
	pair            int
	shown           [maxShown]int // responses; -1 is none
	first, last     int           // lines
}

// A shape bounds what can be chosen.
type shape struct {
	lines, responses, forces int
	pairs                    [][2]int // of forces, see pairs
	spacingHz                float64
}

// whole is the view of the first force's driving point, or else the first response, over all lines.
func (s shape) whole(points []int) view {
	v := view{response: max(points[0], 0), last: s.lines - 1}
	for i := range v.shown {
		v.shown[i] = -1
	}
	return v
}

// band sets the view's lines to those that reach from fromHz to toHz, widened to minLines where the
// spectrum has so many.
func (s shape) band(v *view, fromHz, toHz float64) {
	end := float64(s.lines - 1)
	v.first = int(math.Floor(min(max(fromHz/s.spacingHz, 0), end)))
	v.last = int(math.Ceil(min(max(toHz/s.spacingHz, 0), end)))
	if v.last-v.first+1 < minLines {
		v.first = max(0, min(v.first, s.lines-minLines))
		v.last = min(v.first+minLines-1, s.lines-1)
	}
}

// grid is where the view's curves have their points.
func (v view) grid() grid { return newGrid(v.first, v.last) }

// shownCount is the number of chosen responses.
func (v view) shownCount() int {
	n := 0
	for n < maxShown && v.shown[n] >= 0 {
		n++
	}
	return n
}
