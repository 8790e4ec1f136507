package watch

// cellLines is the number of lines in a cell, the smallest unit that sums are made of. The narrowest
// window, 16 lines, is two of them.
const cellLines = 8

// cells are the judged lines, first to last, cut into cells. What is left over is in the last one.
type cells struct {
	first, last int
	n           int
	stride      int // every so many lines one is judged, from the first of a cell on
}

func newCells(first, last, stride int) cells {
	return cells{first: first, last: last, n: max(1, (last-first+1)/cellLines), stride: stride}
}

// judged is how many lines are judged in so many cells, the last one of all among them or not.
func (c cells) judged(count int, ended bool) int {
	lines := count * cellLines / c.stride
	if ended {
		lo, hi := c.bounds(c.n - 1)
		lines += (hi-lo+c.stride-1)/c.stride - cellLines/c.stride
	}
	return max(1, lines)
}

// perCell is how many lines are judged in a cell.
func (c cells) perCell() float64 { return float64(cellLines / c.stride) }

// every is the number of lines when only each stride-th is counted from the first on.
func (c cells) every() int { return (c.lines() + c.stride - 1) / c.stride }

// lines is the number of judged lines, 0 when the band is empty.
func (c cells) lines() int { return max(0, c.last-c.first+1) }

// bounds are the lines lo to hi-1 of a cell.
func (c cells) bounds(cell int) (lo, hi int) {
	lo = c.first + cell*cellLines
	if cell == c.n-1 {
		return lo, c.last + 1
	}
	return lo, lo + cellLines
}
