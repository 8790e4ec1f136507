package estimate

import "math"

// minEigenvalue is the smallest eigenvalue of the unit-diagonal Gxx with which it still counts as
// invertible; below it twelve digits of the answer are gone.
const minEigenvalue = 1e-12

// A forceLine holds one line's Gxx, factored. Gxx is first scaled to a unit diagonal,
// Gxx = S R S with S = diag(s), so that unequal levels do not look like correlation.
type forceLine struct {
	regular bool // Gxx has an inverse

	s         []float64    // (q) square roots of the diagonal of Gxx
	r         []complex128 // (q,q) R; destroyed
	l         []complex128 // (q,q) R = L L^H, lower triangle
	inverseR  []float64    // (q) diagonal of R^-1
	inverses  []float64    // (q) diagonal of Gxx^-1
	eigenR    []float64    // (q) eigenvalues of R, largest first
	gxx       []complex128 // (q,q) copy of Gxx; destroyed
	principal []float64    // (q) eigenvalues of Gxx, largest first
	column    []complex128 // (q) scratch
}

func newForceLine(q int) *forceLine {
	return &forceLine{
		s:         make([]float64, q),
		r:         make([]complex128, q*q),
		l:         make([]complex128, q*q),
		inverseR:  make([]float64, q),
		inverses:  make([]float64, q),
		eigenR:    make([]float64, q),
		gxx:       make([]complex128, q*q),
		principal: make([]float64, q),
		column:    make([]complex128, q),
	}
}

// factor takes a line's Gxx, of which it keeps no hold.
func (f *forceLine) factor(gxx []complex128) {
	q := len(f.s)
	copy(f.gxx, gxx)
	eigenvalues(f.principal, f.gxx)
	for i := range q {
		f.s[i] = math.Sqrt(real(gxx[i*q+i]))
	}
	for i := range q {
		for j := range q {
			// A silent force makes this 0/0, and so every result NaN.
			f.r[i*q+j] = divide(gxx[i*q+j], f.s[i], f.s[j])
		}
		f.r[i*q+i] = complex(real(gxx[i*q+i])/f.s[i]/f.s[i], 0)
	}
	definite := cholesky(f.l, f.r, q)
	eigenvalues(f.eigenR, f.r)
	f.regular = definite && f.eigenR[q-1] > minEigenvalue
	if f.regular {
		f.invert()
	}
}

// invert fills the diagonals of R^-1 = L^-H L^-1, column by column of L^-1, and of Gxx^-1.
func (f *forceLine) invert() {
	for i := range f.inverseR {
		fill(f.column, 0)
		f.column[i] = 1
		solveLower(f.l, f.column)
		f.inverseR[i] = 0
		for _, v := range f.column {
			f.inverseR[i] += abs2(v)
		}
		f.inverses[i] = f.inverseR[i] / f.s[i] / f.s[i]
	}
}

// principalTo writes the eigenvalues of Gxx, the principal forces. A negative one is rounding, since
// Gxx is a sum of squares.
func (f *forceLine) principalTo(dst []float64) {
	for i, v := range f.principal {
		dst[i] = v
		if v < 0 {
			dst[i] = 0
		}
	}
}

// condition is the 2-norm condition number of R.
func (f *forceLine) condition() float64 {
	return f.eigenR[0] / f.eigenR[len(f.eigenR)-1]
}

// conditionRaw is the 2-norm condition number of Gxx, NaN where rounding hides the smallest
// eigenvalue.
func (f *forceLine) conditionRaw() float64 {
	smallest := f.principal[len(f.principal)-1]
	if !(smallest > 0) {
		return math.NaN()
	}
	return f.principal[0] / smallest
}

// coherence is the multiple coherence of force i with all the others, 1 - 1/(Gxx_ii [Gxx^-1]_ii),
// which R gives directly. It is 0 when there are no others.
func (f *forceLine) coherence(i int) float64 {
	if len(f.s) == 1 {
		return 0
	}
	return clamp01(1 - 1/f.inverseR[i])
}

// inverse is [Gxx^-1]_ii.
func (f *forceLine) inverse(i int) float64 { return f.inverses[i] }

// solve writes the row h = g Gxx^-1 (H1 of one response) and returns g Gxx^-1 g^H, the part of the
// response's density that the forces explain. z is scratch of the same length.
//
// With R z' = (g S^-1)^H solved in two steps, the explained part is the squared length of the
// first: no negative value can come out.
func (f *forceLine) solve(h, g, z []complex128) (explained float64) {
	for i, v := range g {
		z[i] = complex(real(v)/f.s[i], -imag(v)/f.s[i])
	}
	solveLower(f.l, z)
	for _, v := range z {
		explained += abs2(v)
	}
	solveLowerAdjoint(f.l, z)
	for i, v := range z {
		h[i] = complex(real(v)/f.s[i], -imag(v)/f.s[i])
	}
	return explained
}

// clamp01 takes rounding beyond [0, 1] away; NaN stays.
func clamp01(v float64) float64 {
	if v < 0 {
		return 0
	}
	if v > 1 {
		return 1
	}
	return v
}
