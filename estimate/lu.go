package estimate

import "math"

// minPivot is the smallest pivot with which a matrix whose entries are about 1 still counts as
// invertible, in line with minEigenvalue.
const minPivot = 1e-12

// luFactor factors the n by n matrix a (row by row) in place into L U with rows exchanged as pivots (n)
// tells, and returns false when a pivot is not above minPivot or not finite.
// Golub and Van Loan, Matrix Computations, 4th ed., 2013, section 3.4.
func luFactor(a []complex128, pivots []int) bool {
	n := len(pivots)
	for j := range n {
		best := j
		for i := j + 1; i < n; i++ {
			if abs2(a[i*n+j]) > abs2(a[best*n+j]) {
				best = i
			}
		}
		pivots[j] = best
		if best != j {
			for k := range n {
				a[j*n+k], a[best*n+k] = a[best*n+k], a[j*n+k]
			}
		}
		pivot := a[j*n+j]
		if size := abs2(pivot); !(size > minPivot*minPivot) || math.IsInf(size, 1) {
			return false
		}
		for i := j + 1; i < n; i++ {
			f := a[i*n+j] / pivot
			a[i*n+j] = f
			for k := j + 1; k < n; k++ {
				a[i*n+k] -= f * a[j*n+k]
			}
		}
	}
	return true
}

// luSolve replaces b by the solution x of A x = b, A as luFactor left it.
func luSolve(lu []complex128, pivots []int, b []complex128) {
	n := len(pivots)
	for i, from := range pivots {
		b[i], b[from] = b[from], b[i]
	}
	for i := range n {
		for k := range i {
			b[i] -= lu[i*n+k] * b[k]
		}
	}
	for i := n - 1; i >= 0; i-- {
		for k := i + 1; k < n; k++ {
			b[i] -= lu[i*n+k] * b[k]
		}
		b[i] /= lu[i*n+i]
	}
}
