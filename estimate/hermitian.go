package estimate

import (
	"math"
	"math/cmplx"
	"slices"
)

// cholesky factors the n by n Hermitian a (row by row; its lower triangle is read) into L L^H and
// writes L into the lower triangle of dst. It returns false when a is not positive definite.
// Golub and Van Loan, Matrix Computations, 4th ed., 2013, section 4.2.
func cholesky(dst, a []complex128, n int) bool {
	for j := range n {
		d := real(a[j*n+j])
		for k := range j {
			d -= abs2(dst[j*n+k])
		}
		if !(d > 0) || math.IsInf(d, 1) {
			return false
		}
		d = math.Sqrt(d)
		dst[j*n+j] = complex(d, 0)
		for i := j + 1; i < n; i++ {
			v := a[i*n+j]
			for k := range j {
				v -= dst[i*n+k] * cmplx.Conj(dst[j*n+k])
			}
			dst[i*n+j] = v / complex(d, 0)
		}
	}
	return true
}

// solveLower replaces b by the solution x of L x = b, L being the lower triangle of l.
func solveLower(l, b []complex128) {
	n := len(b)
	for i := range n {
		for k := range i {
			b[i] -= l[i*n+k] * b[k]
		}
		b[i] = divide(b[i], real(l[i*n+i]), 1)
	}
}

// solveLowerAdjoint replaces b by the solution x of L^H x = b.
func solveLowerAdjoint(l, b []complex128) {
	n := len(b)
	for i := n - 1; i >= 0; i-- {
		for k := i + 1; k < n; k++ {
			b[i] -= cmplx.Conj(l[k*n+i]) * b[k]
		}
		b[i] = divide(b[i], real(l[i*n+i]), 1)
	}
}

// maxSweeps is far above the six or so that Jacobi's method needs at these sizes; it only bounds the
// time that a matrix with NaN in it can take.
const maxSweeps = 40

// diagonalise makes the n by n Hermitian a diagonal, a' = V a V^H, and writes the unitary V into v (n,n)
// unless v is nil: a' has the eigenvalues, in no order, and row k of V is the adjoint of the
// eigenvector of the k-th. What is not finite in a is so afterwards.
//
// Cyclic Jacobi (Golub and Van Loan, section 8.5), which finds small eigenvalues of a badly scaled
// positive matrix as precisely as its entries define them (Demmel and Veselić, SIAM J. Matrix Anal.
// Appl. 13, 1992).
func diagonalise(a, v []complex128, n int) {
	fill(v, 0)
	for i := 0; i < len(v); i += n + 1 {
		v[i] = 1
	}
	for range maxSweeps {
		rotated := false
		for i := 1; i < n; i++ {
			for j := range i {
				rotated = rotate(a, v, n, j, i) || rotated
			}
		}
		if !rotated {
			return
		}
	}
}

// eigenvalues writes the eigenvalues of the Hermitian a, largest first, into dst, and destroys a.
// All are NaN when a holds a value that is not finite.
func eigenvalues(dst []float64, a []complex128) {
	n := len(dst)
	diagonalise(a, nil, n)
	for i := range dst {
		dst[i] = real(a[i*n+i])
	}
	for _, v := range a {
		if cmplx.IsNaN(v) || cmplx.IsInf(v) {
			fill(dst, math.NaN())
			return
		}
	}
	slices.SortFunc(dst, func(x, y float64) int {
		if x > y {
			return -1
		}
		if x < y {
			return 1
		}
		return 0
	})
}

// rotate makes a[i,j] zero by a unitary rotation of rows and columns i and j, i < j, and tells
// whether that changed anything. The rows of v, unless it is nil, turn along.
func rotate(a, v []complex128, n, i, j int) bool {
	off := a[i*n+j]
	size := math.Hypot(real(off), imag(off))
	aii, ajj := real(a[i*n+i]), real(a[j*n+j])
	if !(size > epsilon*math.Sqrt(math.Abs(aii))*math.Sqrt(math.Abs(ajj))) {
		return false
	}
	phase := off / complex(size, 0)
	theta := (ajj - aii) / (2 * size)
	t := 1 / (math.Abs(theta) + math.Hypot(theta, 1))
	if theta < 0 {
		t = -t
	}
	c := 1 / math.Hypot(t, 1)
	s := complex(t*c, 0) * phase
	for k := range n {
		if k == i || k == j {
			continue
		}
		aik, ajk := a[i*n+k], a[j*n+k]
		a[i*n+k] = complex(c, 0)*aik - s*ajk
		a[j*n+k] = cmplx.Conj(s)*aik + complex(c, 0)*ajk
		a[k*n+i] = cmplx.Conj(a[i*n+k])
		a[k*n+j] = cmplx.Conj(a[j*n+k])
	}
	a[i*n+i] = complex(aii-t*size, 0)
	a[j*n+j] = complex(ajj+t*size, 0)
	a[i*n+j], a[j*n+i] = 0, 0
	if v != nil {
		turn(v[i*n:(i+1)*n], v[j*n:(j+1)*n], c, s)
	}
	return true
}

// turn replaces the rows a and b by c a - s b and s* a + c b.
func turn(a, b []complex128, c float64, s complex128) {
	for k, ak := range a {
		bk := b[k]
		a[k] = complex(c, 0)*ak - s*bk
		b[k] = cmplx.Conj(s)*ak + complex(c, 0)*bk
	}
}

const epsilon = 0x1p-53

func abs2(v complex128) float64 { return real(v)*real(v) + imag(v)*imag(v) }
