package watch

import "math"

// A passive fit tells whether a force is only the answer of what hangs at its driving point: of a shaker that is not
// driven, or of the rest of a stinger that came off. Then
//
//	x = -(m + c/(iω) - k/ω² + ...) a
//
// with the acceleration a at the driving point and a mechanical impedance that is smooth in frequency,
// whatever the structure does. A driven force is no such thing: it has a part of its own, and x/a
// follows the structure's resonances.
type passive struct {
	normal [fitTerms][fitTerms]float64
	cross  [fitTerms]complex128
	power  float64    // of the force, weighted
	toward complex128 // the weighted products of force and acceleration
	sizes  float64    // of the same
}

// fitTerms are a mass, a brake (1/ω) such as a coil that an amplifier shorts, a spring (1/ω²) and the stiffness of what
// lies between (ω²), each with a phase.
const fitTerms = 4

const (
	// passiveShare is the share of a force's power that the fit explains when the force is passive; the method's
	// study asks the same of the coherence with the other forces.
	passiveShare = 0.8

	// passiveToward is the mean cosine between the force and what it would be if passive, an inertia's, against the
	// acceleration, or a brake's, against the velocity: on most lines it points there. A force that drives points along
	// the velocity, more than mostInto.
	passiveToward = 0.3
	mostInto      = 0.1

	// drivenShare is what a driven force must not exceed in the average, if a fit is to say anything:
	// a structure that is nothing but a spring at this point looks passive all the time.
	drivenShare = 0.5
)

// A product is the powers of acceleration and force, and x a*, of one line or the sum of several.
type product struct {
	aa, xx float64
	xa     complex128
}

// addCell takes the sums over a cell, in which all cells weigh alike. fraction is the place of the cell in the band, above
// 0 to 1.
func (f *passive) addCell(fraction float64, l product) {
	if !(l.xx > 0) {
		return
	}
	w := 1 / l.xx
	basis := [fitTerms]float64{1, 1 / fraction, 1 / (fraction * fraction), fraction * fraction}
	for m, bm := range basis {
		for n, bn := range basis {
			f.normal[m][n] += w * l.aa * bm * bn
		}
		f.cross[m] += complex(w*bm, 0) * l.xa
	}
	f.power += w * l.xx
	f.toward += complex(w, 0) * l.xa
	f.sizes += w * math.Sqrt(l.aa*l.xx)
}

// share is the share of the force's power that the fit explains, 0 when it points the wrong way.
func (f *passive) share() float64 {
	// Against the acceleration, and, as v = a/(iω), against the velocity.
	inertia, brake := -real(f.toward)/f.sizes, imag(f.toward)/f.sizes
	if !(max(inertia, brake) > passiveToward && brake > -mostInto) {
		return 0
	}
	return f.explained()
}

// explained is the share whatever the direction: c^H N^-1 c over the power, by Gauss without pivots,
// which a positive definite N does not need.
func (f *passive) explained() float64 {
	a, b := f.normal, f.cross
	var sum float64
	for m := range fitTerms {
		if !(a[m][m] > 1e-12*f.normal[m][m]) {
			continue
		}
		sum += abs2(b[m]) / a[m][m]
		for n := m + 1; n < fitTerms; n++ {
			factor := a[n][m] / a[m][m]
			for k := m; k < fitTerms; k++ {
				a[n][k] -= factor * a[m][k]
			}
			b[n] -= complex(factor, 0) * b[m]
		}
	}
	return sum / f.power
}

// passiveShareOf is the share of force i that a block shows to be passive, NaN without a driving
// point.
func (b *block) passiveShareOf(i int) float64 {
	l := b.layout
	o := l.driving[i]
	if o < 0 {
		return math.NaN()
	}
	c, f := l.q+l.p, new(passive)
	for cell := range l.cells.n {
		lo, hi := l.cells.bounds(cell)
		var sum product
		for k := lo; k < hi; k += l.cells.stride {
			x, a := b.lines[k*c+i], b.lines[k*c+l.q+o]
			sum.aa += abs2(a)
			sum.xx += abs2(x)
			sum.xa += complex(real(x)*real(a)+imag(x)*imag(a), imag(x)*real(a)-real(x)*imag(a))
		}
		sum.xa *= complex(l.sign[i], 0)
		f.addCell(l.fraction(cell), sum)
	}
	return f.share()
}

// fraction is the place of a cell's middle in the band.
func (l *layout) fraction(cell int) float64 {
	lo, hi := l.cells.bounds(cell)
	return float64(lo+hi) / 2 / float64(l.cells.last+1)
}
