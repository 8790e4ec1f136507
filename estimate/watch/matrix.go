package watch

import (
	"math"
	"math/cmplx"
)

// A lower is the Cholesky factor of a line's Gxx = L L^H, row by row; the upper triangle is not used. The diagonal, which
// is real, has its inverse in the imaginary parts, since dividing is slow.
// Cholesky's error does not depend on how the forces are scaled against each other (Golub and Van
// Loan, Matrix Computations, 4th ed., 2013, section 4.2).
type lower struct {
	q int
	l []complex128 // (q,q)
}

// minPivot is the smallest share of a force's power that the forces before it must leave unexplained
// for Gxx to count as invertible; below it twelve digits of the answer are gone.
const minPivot = 1e-12

// factor fills m from the Hermitian gxx and tells whether that has an inverse.
func (m lower) factor(gxx []complex128) bool {
	q, l := m.q, m.l
	for j := range q {
		whole := real(gxx[j*q+j])
		d := whole
		for k := range j {
			d -= abs2(l[j*q+k])
		}
		if !(d > minPivot*whole) || math.IsInf(d, 1) {
			return false
		}
		d = math.Sqrt(d)
		inverse := 1 / d
		l[j*q+j] = complex(d, inverse)
		for i := j + 1; i < q; i++ {
			v := gxx[i*q+j]
			for k := range j {
				v -= l[i*q+k] * cmplx.Conj(l[j*q+k])
			}
			l[i*q+j] = scaled(inverse, v)
		}
	}
	return true
}

// forward replaces b by the solution z of L z = b.
func (m lower) forward(b []complex128) {
	for i := range b {
		for k := range i {
			b[i] -= m.l[i*m.q+k] * b[k]
		}
		b[i] = scaled(imag(m.l[i*m.q+i]), b[i])
	}
}

func scaled(by float64, a complex128) complex128 { return complex(by*real(a), by*imag(a)) }

// back replaces b by the solution z of L^H z = b.
func (m lower) back(b []complex128) {
	for i := len(b) - 1; i >= 0; i-- {
		for k := i + 1; k < len(b); k++ {
			b[i] -= cmplx.Conj(m.l[k*m.q+i]) * b[k]
		}
		b[i] = scaled(imag(m.l[i*m.q+i]), b[i])
	}
}

// row replaces g by g Gxx^-1 and returns g Gxx^-1 g^H, which cannot be negative.
func (m lower) row(g []complex128) (explained float64) {
	for i, v := range g {
		g[i] = cmplx.Conj(v)
	}
	m.forward(g)
	for _, v := range g {
		explained += abs2(v)
	}
	m.back(g)
	for i, v := range g {
		g[i] = cmplx.Conj(v)
	}
	return explained
}

// inverseOwn is [Gxx^-1]_jj, the squared length of column j of L^-1. column is scratch.
func (m lower) inverseOwn(column []complex128, j int) (sum float64) {
	for i := j; i < m.q; i++ {
		var v complex128
		if i == j {
			v = 1
		}
		for k := j; k < i; k++ {
			v -= m.l[i*m.q+k] * column[k]
		}
		column[i] = scaled(imag(m.l[i*m.q+i]), v)
		sum += abs2(column[i])
	}
	return sum
}

// inverse puts column j of Gxx^-1 into column.
func (m lower) inverse(column []complex128, j int) {
	for i := range column {
		column[i] = 0
	}
	column[j] = 1
	m.forward(column)
	m.back(column)
}

func abs2(v complex128) float64 { return real(v)*real(v) + imag(v)*imag(v) }
