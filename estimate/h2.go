package estimate

import (
	"math"
	"math/cmplx"

	"shakerwatch/spectra"
)

// An h2Line solves one line's H2 Gxy = Gyy with the full response matrix. Rows and columns are first
// scaled by the levels of responses and forces, so that units cost no digits.
type h2Line struct {
	pair   []int        // (p,p) where Gyy[a,b] lies among the kept pairs; ^pair where its conjugate does
	s      []float64    // (p) square roots of Gyy
	lu     []complex128 // (p,q) scaled Gyx, factored
	pivots []int
	column []complex128 // (p) scratch
}

const missing = math.MinInt

// newH2Line panics unless pairs hold all pairs of q responses.
func newH2Line(q int, pairs [][2]int) *h2Line {
	l := &h2Line{
		pair:   make([]int, q*q),
		s:      make([]float64, q),
		lu:     make([]complex128, q*q),
		pivots: make([]int, q),
		column: make([]complex128, q),
	}
	fill(l.pair, missing)
	for n, pair := range pairs {
		l.pair[pair[0]*q+pair[1]] = n
		l.pair[pair[1]*q+pair[0]] = ^n
	}
	for at, n := range l.pair {
		if n == missing && at/q != at%q {
			panic("estimate: h2 needs the cross-densities of all pairs of responses")
		}
	}
	return l
}

// solve writes H2 of one line (p,q), from Gyx (p,q), Gyy (p) and its kept pairs; forces are the square
// roots of the diagonal of Gxx. All is NaN when Gxy has no inverse, except that a silent response has 0.
func (l *h2Line) solve(h, gyx []complex128, gyy []float64, pairs []complex128, forces []float64) {
	q := len(l.s)
	for o, v := range gyy {
		l.s[o] = math.Sqrt(v)
	}
	for o := range q {
		for i := range q {
			l.lu[o*q+i] = divide(gyx[o*q+i], l.s[o], forces[i])
		}
	}
	regular := luFactor(l.lu, l.pivots)
	for o := range q {
		row := h[o*q : (o+1)*q]
		switch {
		case gyy[o] == 0:
			fill(row, 0)
		case !regular:
			fill(row, cmplx.NaN())
		default:
			l.row(row, o, pairs, forces)
		}
	}
}

// row writes H2 of response o: the conjugate of H2 Gxy = Gyy has Gyx on the left.
func (l *h2Line) row(h []complex128, o int, pairs []complex128, forces []float64) {
	q := len(l.s)
	for n := range q {
		v := complex(1, 0)
		if n != o {
			v = divide(l.gyy(pairs, n, o), l.s[n], l.s[o])
		}
		l.column[n] = v
	}
	luSolve(l.lu, l.pivots, l.column)
	for i, v := range l.column {
		scale := l.s[o] / forces[i]
		h[i] = complex(real(v)*scale, -imag(v)*scale)
	}
}

// gyy is Gyy[a,b] of two different responses.
func (l *h2Line) gyy(pairs []complex128, a, b int) complex128 {
	n := l.pair[a*len(l.s)+b]
	if n < 0 {
		return cmplx.Conj(pairs[^n])
	}
	return pairs[n]
}

// divide is v / a / b for real a and b, far cheaper than a complex division.
func divide(v complex128, a, b float64) complex128 {
	return complex(real(v)/a/b, imag(v)/a/b)
}

// byH2 fills H of line k by H2.
func (e *Estimates) byH2(s *spectra.Snapshot, k int) {
	q, pairs := e.Forces, len(e.Method.Averaging.Pairs)
	e.h2.solve(e.H[k*q*q:(k+1)*q*q], s.Gyx[k*q*q:(k+1)*q*q], s.Gyy[k*q:(k+1)*q],
		s.GyyPairs[k*pairs:(k+1)*pairs], e.forces.s)
}
