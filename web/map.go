package web

import (
	"math"
	"strconv"
)

// A map has at most so many rows and columns: cells that a person can tell apart and point at.
const (
	mapRows    = 40
	mapColumns = 64
)

// mapStep is the step of a map's coherences. They are rounded down, so that none looks better than it is.
const mapStep = 0.01

// mapPlot shows the multiple coherence of every response over frequency: which response has trouble, and
// where. The page draws it itself.
func mapPlot(responses int) plot {
	of := "A row is a response"
	if mapGroup(responses) > 1 {
		of = "A row is a group of responses that stand together in the rig file, and shows the worst of them"
	}
	return plot{
		ID:     "map",
		Title:  "Coherence map",
		Help:   of + ", a column some lines of frequency, and a cell shows the lowest multiple coherence in it. Cells below the chosen limit carry a stroke. A click on a cell, or Enter, goes to its response and its band.",
		Axis:   overFrequency,
		Panes:  []pane{},
		Curves: []curve{},
		common: mapCommon,
	}
}

// mapGroup is how many responses share a row.
func mapGroup(responses int) int { return (responses + mapRows - 1) / mapRows }

// A heat is a map: the lowest coherence of each cell, and whose it is.
type heat struct {
	group   int // responses in a row; the last row may have fewer
	columns grid
	lowest  []float64 // (rows, columns), NaN where nothing is known
	worst   []int     // (rows, columns) responses
	known   []bool    // (p) responses of which anything is known
}

func (h *heat) rows() int { return (len(h.known) + h.group - 1) / h.group }

// fill makes the map of coherence, of p responses line by line.
func (h *heat) fill(coherence []float64, p int, s span) {
	h.group = mapGroup(p)
	h.columns = newGrid(span{s.first, s.last, mapColumns, s.log})
	h.known = resized(h.known, p)
	cells := h.rows() * h.columns.points()
	h.lowest, h.worst = resized(h.lowest, cells), resized(h.worst, cells)
	for i := range h.lowest {
		h.lowest[i] = math.NaN()
	}
	for column := range h.columns.points() {
		lo, hi := h.columns.lines(column, 1)
		for line := lo; line < hi; line++ {
			h.line(column, coherence[line*p:(line+1)*p])
		}
	}
}

// line enters the coherences of all responses at one line.
func (h *heat) line(column int, coherence []float64) {
	n := h.columns.points()
	for o, v := range coherence {
		if math.IsNaN(v) {
			continue
		}
		h.known[o] = true
		if cell := o/h.group*n + column; !(v >= h.lowest[cell]) {
			h.lowest[cell], h.worst[cell] = v, o
		}
	}
}

// resized is list with n zero elements.
func resized[T any](list []T, n int) []T {
	if cap(list) < n {
		return make([]T, n)
	}
	list = list[:n]
	clear(list)
	return list
}

// mapCommon writes the map: its cells, row by row; in groups, how far the worst response of each cell
// stands behind the first of its row; and how many responses of each row are unknown in the whole band.
func mapCommon(c *curver, dst []byte, g grid) []byte {
	h := &c.heat
	h.fill(c.e.MultipleCoherence, c.e.Responses, g.span)
	n := h.columns.points()
	dst = strconv.AppendInt(appendName(dst, "map.group"), int64(h.group), 10)
	dst = h.appendRows(append(dst, `,"map.cells":`...), mapStep, func(cell int) float64 {
		return math.Floor(h.lowest[cell]/mapStep+1e-9) * mapStep
	})
	dst = append(dst, `,"map.worst":`...)
	if h.group == 1 {
		dst = append(dst, `[]`...)
	} else {
		dst = h.appendRows(dst, 1, func(cell int) float64 { return float64(h.worst[cell] - cell/n*h.group) })
	}
	dst = appendSteps(append(dst, `,"map.unknown":`...), h.rows(), 1, h.unknown)
	dst = append(dst, `,"map.runs":`...)
	return append(append(dst, mustMarshal(h.columns.runs())...), ',')
}

// unknown is how many responses of a row are unknown.
func (h *heat) unknown(row int) float64 {
	count := 0.0
	for o := row * h.group; o < min((row+1)*h.group, len(h.known)); o++ {
		if !h.known[o] {
			count++
		}
	}
	return count
}

func (h *heat) appendRows(dst []byte, step float64, value func(cell int) float64) []byte {
	n := h.columns.points()
	dst = append(dst, '[')
	for row := range h.rows() {
		if row > 0 {
			dst = append(dst, ',')
		}
		dst = appendSteps(dst, n, step, func(column int) float64 { return value(row*n + column) })
	}
	return append(dst, ']')
}
