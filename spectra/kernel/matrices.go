package kernel

// Matrices are one complex matrix a line, in single precision, that say what each of some channels is expected
// to be when others are given. Methods that do not change it may be called from several goroutines.
type Matrices struct {
	lines, rows, columns int

	values []float32 // (line, group of Lanes rows, column, real and imaginary, lane); 0 behind the last row
}

// NewMatrices makes matrices of zeros.
func NewMatrices(lines, rows, columns int) *Matrices {
	m := &Matrices{lines: lines, rows: rows, columns: columns}
	m.values = make([]float32, lines*m.size())
	return m
}

// Whole is n, rounded up to whole groups of Lanes.
func Whole(n int) int { return (n + Lanes - 1) / Lanes * Lanes }

// size is the number of floats of a line.
func (m *Matrices) size() int { return 2 * Whole(m.rows) * m.columns }

// place is where the real part of a value stands. The imaginary part stands Lanes behind it.
func (m *Matrices) place(line, row, column int) int {
	if uint(row) >= uint(m.rows) || uint(column) >= uint(m.columns) {
		panic("kernel: no such row or column")
	}
	return line*m.size() + (row/Lanes*m.columns+column)*element + row%Lanes
}

// At is one value. It panics unless the matrices have such a line, row and column.
func (m *Matrices) At(line, row, column int) complex64 {
	at := m.place(line, row, column)
	return complex(m.values[at], m.values[at+Lanes])
}

// Set sets one value. It panics unless the matrices have such a line, row and column.
func (m *Matrices) Set(line, row, column int, v complex64) {
	at := m.place(line, row, column)
	m.values[at], m.values[at+Lanes] = real(v), imag(v)
}

// MultiplyMisfits multiplies products[o] by 1 + min(t, most), where
//
//	t = |y[o] - Σ_i h_oi x[i]|² · weights[o] · gain
//
// and h is the matrix of a line. The sum runs from i = 0 on. Where t is NaN, the product becomes NaN. There are a y for each
// row, an x for each column, and Whole(rows) products and weights; what becomes of the products without a row is not
// said. It panics when there are not.
//
// The bits do not depend on the processor's instructions: see the package.
func (m *Matrices) MultiplyMisfits(products []float64, line int, y, x []complex128, weights []float32, gain, most float64) {
	if len(y) != m.rows || len(x) != m.columns || len(products) != Whole(m.rows) || len(weights) != Whole(m.rows) {
		panic("kernel: matrix and channels differ in shape")
	}
	fastest.misfit(products, y, x, m.values[line*m.size():][:m.size()], weights, gain, most)
}

func misfitPlain(products []float64, y, x []complex128, values, weights []float32, gain, most float64) {
	for o, v := range y {
		re, im := real(v), imag(v)
		at := o/Lanes*len(x)*element + o%Lanes
		for _, b := range x {
			hr, hi := float64(values[at]), float64(values[at+Lanes])
			at += element
			re -= float64(hr*real(b)) - float64(hi*imag(b))
			im -= float64(hr*imag(b)) + float64(hi*real(b))
		}
		t := float64((float64(re*re)+float64(im*im))*float64(weights[o])) * gain
		if t > most {
			t = most
		}
		products[o] *= 1 + float64(t)
	}
}
