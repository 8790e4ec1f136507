package demo

import "gonum.org/v1/gonum/mat"

// A folder makes one matrix of several sub steps of a frame.
type folder struct {
	phi, old, fresh *mat.Dense // of one sub step: see triangleHold
	sub             int        // sub steps a frame
}

func newFolder(sys stateSpace, stepS float64, sub int) folder {
	phi, old, fresh := sys.triangleHold(stepS)
	return folder{phi, old, fresh, sub}
}

// fold returns what the first steps of a frame make of the states and, for each input, its last sample
// and the frame's sub new ones: a row for each state.
func (f folder) fold(steps int) *mat.Dense {
	n, q := f.old.Dims()
	advance := mat.NewDense(n, n+q*(f.sub+1), nil)
	// after is what the rest of the steps makes of the states at the end of sub step k
	after := mat.NewDense(n, n, nil)
	for i := range n {
		after.Set(i, i, 1)
	}
	var product mat.Dense
	for k := steps - 1; k >= 0; k-- {
		product.Mul(after, f.old)
		addInputs(advance, &product, n+k, f.sub+1)
		product.Reset()
		product.Mul(after, f.fresh)
		addInputs(advance, &product, n+k+1, f.sub+1)
		product.Reset()
		product.Mul(after, f.phi)
		after.Copy(&product)
		product.Reset()
	}
	advance.Slice(0, n, 0, n).(*mat.Dense).Copy(after)
	return advance
}

// outputAt returns the weights, as those of a row of fold, of output o after so many steps of a frame.
func (f folder) outputAt(sys stateSpace, o, steps int) []float64 {
	n, q := f.old.Dims()
	var row mat.Dense
	row.Mul(sys.c.Slice(o, o+1, 0, n), f.fold(steps))
	for i := range q {
		column := n + i*(f.sub+1) + steps
		row.Set(0, column, row.At(0, column)+sys.d.At(o, i))
	}
	return row.RawRowView(0)
}

// addInputs adds the columns of m to every stride-th column of dst from first on.
func addInputs(dst, m *mat.Dense, first, stride int) {
	n, q := m.Dims()
	for i := range q {
		for r := range n {
			column := first + i*stride
			dst.Set(r, column, dst.At(r, column)+m.At(r, i))
		}
	}
}
