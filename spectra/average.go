package spectra

// Shape is the size of an average: lines, forces (q) and responses (p).
type Shape struct {
	Lines, Forces, Responses int
}

// Channels is the number of forces and responses together. In a transformed block the forces
// stand before the responses.
func (s Shape) Channels() int { return s.Forces + s.Responses }

// An Average is the running sum over an explicit list of transformed blocks. A block is in it whole
// or not at all: Sum adds its products range by range of lines, Count enters it in the list.
//
// Every line's sums run over the blocks in the order in which they are given, whatever the ranges
// and however many blocks one call brings, so the result is the same bit for bit on any number of
// cores. Sum and SumScatter may run in several goroutines at once on ranges that do not overlap; all
// else serves one goroutine at a time.
type Average struct {
	shape     Shape
	averaging Averaging

	sums    sums
	scatter sums    // of periods around their block's mean
	halves  *halves // nil unless asked for
	nothing sums    // empty

	scale     []float64 // (line) from a mean product to a one-sided density
	spacingHz float64
	starts    Starts
	effective *Effective
}

// NewAverage makes an empty average of blocks on a grid: window's values, hop in analysis samples (0
// for blocks that never overlap), source frames per analysis sample (decimation) and analysis
// samples per second (rateHz).
func NewAverage(shape Shape, window []float64, hop, decimation int, rateHz float64, averaging Averaging) *Average {
	n, pairs := len(window), len(averaging.Pairs)
	a := &Average{
		shape:     shape,
		averaging: averaging,
		sums:      newSums(shape, pairs),
		scale:     make([]float64, shape.Lines),
		spacingHz: rateHz / float64(n),
		effective: NewEffective(window, hop, decimation, averaging.decay()),
	}
	if averaging.Periods > 0 {
		a.scatter = newSums(shape, pairs)
	}
	if averaging.Halves {
		a.halves = newHalves(shape, pairs)
	}
	for k := range a.scale {
		a.scale[k] = 2 / (rateHz * sumOfSquares(window))
		if k == 0 || 2*k == n {
			a.scale[k] /= 2 // 0 Hz and half the rate have no twin at negative frequency
		}
	}
	return a
}

// Shape is the average's size.
func (a *Average) Shape() Shape { return a.shape }

// Averaging is how the blocks are averaged.
func (a *Average) Averaging() Averaging { return a.averaging }

// Len is the number of blocks, M.
func (a *Average) Len() int { return a.starts.Len() }

// Reset forgets all blocks and keeps the memory.
func (a *Average) Reset() {
	a.sums.reset()
	a.scatter.reset()
	a.starts = Starts{}
	a.effective.reset()
	if a.halves != nil {
		a.halves.counts = [2]int{}
	}
}

// Sum adds the products of lines lo to hi-1 of transformed blocks, each (line, channel) with the
// forces first, in the order given. Blocks whose products were summed on all lines must be
// entered with Count before the next snapshot, one by one where Halves are kept.
func (a *Average) Sum(blocks [][]complex128, lo, hi int) {
	q, p := a.shape.Forces, a.shape.Responses
	decay := a.averaging.decay()
	for k := lo; k < hi; k++ {
		line := a.sums.line(a.shape, len(a.averaging.Pairs), k)
		for _, b := range blocks {
			if decay != 1 {
				line.scale(decay)
			}
			line.add(b[k*(q+p):][:q], b[k*(q+p)+q:][:p], a.averaging.Pairs)
		}
	}
}

// SumScatter adds the products of lines lo to hi-1 of the deviations of a block's periods from
// their mean, like Sum. It panics unless Averaging.Periods says that there are periods.
func (a *Average) SumScatter(periods [][]complex128, lo, hi int) {
	if a.averaging.Periods == 0 {
		panic("spectra: this average has no periods")
	}
	q, p := a.shape.Forces, a.shape.Responses
	for k := lo; k < hi; k++ {
		line := a.scatter.line(a.shape, len(a.averaging.Pairs), k)
		for _, b := range periods {
			line.add(b[k*(q+p):][:q], b[k*(q+p)+q:][:p], a.averaging.Pairs)
		}
	}
}

// Count enters a block whose products were summed on all lines, by its first source frame.
func (a *Average) Count(start int64) {
	a.starts.Append(start)
	a.effective.Add(start)
	if n := a.starts.Len(); a.halves != nil && a.halves.wants(n) {
		a.halves.keep(a.sums, n)
	}
}

// untilKept is how many blocks may be summed before the next must be counted, at least 1.
func (a *Average) untilKept() int {
	n := 1
	if a.halves == nil {
		return maxTogether
	}
	for ; n < maxTogether && !a.halves.wants(a.starts.Len()+n); n++ {
	}
	return n
}

// maxTogether is more blocks than are ever summed in one walk.
const maxTogether = 1 << 20
