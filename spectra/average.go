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
// cores. Sum may run in several goroutines at once on ranges that do not overlap; all else serves
// one goroutine at a time.
type Average struct {
	shape Shape
	gxx   []complex128 // (line, i, j); only j <= i is summed
	gyx   []complex128 // (line, o, i)
	gyy   []float64    // (line, o)

	scale     []float64 // (line) from a mean product to a one-sided density
	spacingHz float64
	starts    Starts
	effective *Effective
}

// NewAverage makes an empty average of blocks on a grid: window's values, hop in analysis samples,
// source frames per analysis sample (decimation) and analysis samples per second (rateHz).
func NewAverage(shape Shape, window []float64, hop, decimation int, rateHz float64) *Average {
	n := len(window)
	a := &Average{
		shape:     shape,
		gxx:       make([]complex128, shape.Lines*shape.Forces*shape.Forces),
		gyx:       make([]complex128, shape.Lines*shape.Responses*shape.Forces),
		gyy:       make([]float64, shape.Lines*shape.Responses),
		scale:     make([]float64, shape.Lines),
		spacingHz: rateHz / float64(n),
		effective: NewEffective(window, hop, decimation),
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

// Sum adds the products of lines lo to hi-1 of transformed blocks, each (line, channel) with the
// forces first, in the order given. Blocks whose products were summed on all lines must be
// entered with Count before the next snapshot.
func (a *Average) Sum(blocks [][]complex128, lo, hi int) {
	q, p := a.shape.Forces, a.shape.Responses
	for k := lo; k < hi; k++ {
		gxx := a.gxx[k*q*q : (k+1)*q*q]
		gyx := a.gyx[k*p*q : (k+1)*p*q]
		gyy := a.gyy[k*p : (k+1)*p]
		for _, b := range blocks {
			x := b[k*(q+p):][:q]
			y := b[k*(q+p)+q:][:p]
			sumLine(gxx, gyx, gyy, x, y)
		}
	}
}

// sumLine adds the products of one line of one block.
func sumLine(gxx, gyx []complex128, gyy []float64, x, y []complex128) {
	q := len(x)
	for i, xi := range x {
		row := gxx[i*q : i*q+i+1]
		for j := range row {
			row[j] += product(xi, x[j])
		}
	}
	for o, yo := range y {
		row := gyx[o*q : (o+1)*q]
		for i := range row {
			row[i] += product(yo, x[i])
		}
		gyy[o] += real(product(yo, yo))
	}
}

// product is a b*, written out because the language's complex product checks for infinities.
func product(a, b complex128) complex128 {
	return complex(
		real(a)*real(b)+imag(a)*imag(b),
		imag(a)*real(b)-real(a)*imag(b),
	)
}

// Count enters a block whose products were summed on all lines, by its first source frame.
func (a *Average) Count(start int64) {
	a.starts.Append(start)
	a.effective.Add(start)
}
