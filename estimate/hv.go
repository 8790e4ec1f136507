package estimate

import (
	"math"
	"math/cmplx"
	"slices"

	"shakerwatch/spectra"
)

// An hvLine finds Hv of one line. Of G = E[v v^H], v = [y; x], the eigenvector u of the smallest eigenvalue λ
// gives H_i = -conj(u_i / u_0) (total least squares; Golub and Van Loan, Matrix Computations, 4th ed., 2013, section
// 6.3). Writing G u = λ u out with u_0 = 1 leaves
//
//	H = Gyx (Gxx - λ)^-1,   Gyy - λ - Gyx (Gxx - λ)^-1 Gxy = 0
//
// so with Gxx diagonal once a line, a response costs the root of a function of one variable.
type hvLine struct {
	levels  []float64    // (q) square roots of the forces' noise densities, or 1
	gxx     []complex128 // (q,q) whitened; destroyed
	vectors []complex128 // (q,q) gxx = vectors^H diag(values) vectors
	values  []float64    // (q) in no order
	z       []complex128 // (q) scratch
	power   []float64    // (q) scratch
}

func newHVLine(q int) *hvLine {
	return &hvLine{
		levels:  make([]float64, q),
		gxx:     make([]complex128, q*q),
		vectors: make([]complex128, q*q),
		values:  make([]float64, q),
		z:       make([]complex128, q),
		power:   make([]float64, q),
	}
}

// factor takes a line's Gxx (q,q), positive definite, and the densities of the forces' noise (q), empty
// to leave it unwhitened. It keeps no hold of them.
func (l *hvLine) factor(gxx []complex128, noise []float64) {
	q := len(l.levels)
	for i := range q {
		l.levels[i] = 1
		if len(noise) > 0 {
			l.levels[i] = noiseLevel(noise[i])
		}
	}
	for i := range q {
		for j := range q {
			l.gxx[i*q+j] = divide(gxx[i*q+j], l.levels[i], l.levels[j])
		}
	}
	diagonalise(l.gxx, l.vectors, q)
	for i := range q {
		l.values[i] = real(l.gxx[i*q+i])
	}
}

// noiseLevel is the square root of a noise density, NaN where that is none to whiten by.
func noiseLevel(density float64) float64 {
	if !(density > 0) || math.IsInf(density, 1) {
		return math.NaN()
	}
	return math.Sqrt(density)
}

// solve writes the row h (q) of one response from its row g (q) of Gyx, its density and the level of
// its noise, 1 when the line is not whitened. It is NaN where a level is, and where u_0 is 0 and H
// infinite.
func (l *hvLine) solve(h, g []complex128, gyy, level float64) {
	q := len(l.levels)
	for n := range q {
		l.z[n] = 0
		for i, v := range g {
			l.z[n] += divide(v, l.levels[i], level) * cmplx.Conj(l.vectors[n*q+i])
		}
		l.power[n] = abs2(l.z[n])
	}
	lambda := smallestBordered(gyy/level/level, l.power, l.values)
	fill(h, 0)
	for n, z := range l.z {
		z = divide(z, l.values[n]-lambda, 1)
		for i := range h {
			h[i] += z * l.vectors[n*q+i]
		}
	}
	for i, v := range h {
		h[i] = complex(real(v)*level/l.levels[i], imag(v)*level/l.levels[i])
	}
}

// maxSteps is more than bisection needs for all digits of a number.
const maxSteps = 200

// smallestBordered is the smallest eigenvalue of the positive semidefinite matrix with gyy and the
// positive values on its diagonal and off it only, in row and column 0, entries whose squared sizes
// are power. It is the root of
//
//	f(λ) = gyy - λ - Σ power/(values - λ)
//
// below the smallest of values (O'Leary and Stewart, J. Comput. Phys. 90, 1990), by Newton's method held within
// a bracket. It is NaN when that root does not lie below by more than rounding, or what is given is
// not finite.
func smallestBordered(gyy float64, power, values []float64) float64 {
	pole := slices.Min(values)
	if !(pole > 0) {
		return math.NaN()
	}
	low, high := 0.0, pole
	x := 0.0
	for range maxSteps {
		f, slope := gyy-x, -1.0
		for n, v := range values {
			term := power[n] / (v - x)
			f -= term
			slope -= term / (v - x)
		}
		switch {
		case f > 0:
			low = x
		case x == 0 && f <= 0:
			return 0 // below zero is rounding
		default:
			high = x
		}
		next := x - f/slope
		if !(next > low && next < high) {
			next = low + (high-low)/2
		}
		if math.Abs(next-x) <= epsilon*next {
			break
		}
		x = next
	}
	if !(pole-x > 4*epsilon*pole) {
		return math.NaN()
	}
	return x
}

// byHV fills H of line k by Hv.
func (e *Estimates) byHV(s *spectra.Snapshot, k int) {
	p, q := e.Responses, e.Forces
	m := e.Method
	var noise []float64
	if m.whitens() {
		noise = m.NoiseForce[k*q : (k+1)*q]
	}
	e.hv.factor(s.Gxx[k*q*q:(k+1)*q*q], noise)
	for at := k * p; at < (k+1)*p; at++ {
		level := 1.0
		if m.whitens() {
			level = noiseLevel(m.NoiseResponse[at])
		}
		e.hv.solve(e.H[at*q:(at+1)*q], s.Gyx[at*q:(at+1)*q], s.Gyy[at], level)
	}
}
