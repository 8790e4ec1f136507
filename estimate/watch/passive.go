package watch

import "math"

// A passive fit tells whether a force is only the answer of what hangs at its driving point: of a shaker that is not
// driven, or of the rest of a stinger that came off. Then
//
//	x = -(m - k/ω² + ...) a
//
// with the acceleration a at the driving point and a mechanical impedance that is smooth in frequency,
// whatever the structure does. A driven force is no such thing: it has a part of its own, and x/a
// follows the structure's resonances.
type passive struct {
	normal [fitTerms][fitTerms]float64
	cross  [fitTerms]complex128
	power  float64 // of the force, weighted
	toward float64 // Re of the weighted products of force and acceleration
	sizes  float64 // of the same
}

// fitTerms are a mass, a spring (1/ω²) and the stiffness of what lies between (ω²), each with a phase.
const fitTerms = 3

const (
	// passiveShare is the share of a force's power that the fit explains when the force is passive; the method's
	// study asks the same of the coherence with the other forces.
	passiveShare = 0.8

	// passiveToward is the mean cosine between force and acceleration below which the force is an inertia's:
	// it points against the acceleration on most lines.
	passiveToward = -0.3

	// drivenShare is what a driven force must not exceed in the average, if a fit is to say anything:
	// a structure that is nothing but a spring at this point looks passive all the time.
	drivenShare = 0.5
)

// A product is one line's powers of acceleration and force, and x a*.
type product struct {
	aa, xx float64
	xa     complex128
}

// addCell takes the lines of a cell, which all weigh alike together. fraction is the place of the cell
// in the band, above 0 to 1.
func (f *passive) addCell(fraction float64, lines []product) {
	var xx float64
	for _, l := range lines {
		xx += l.xx
	}
	if !(xx > 0) {
		return
	}
	w := 1 / xx
	basis := [fitTerms]float64{1, 1 / (fraction * fraction), fraction * fraction}
	for _, l := range lines {
		for m, bm := range basis {
			for n, bn := range basis {
				f.normal[m][n] += w * l.aa * bm * bn
			}
			f.cross[m] += complex(w*bm, 0) * l.xa
		}
		f.power += w * l.xx
		f.toward += w * real(l.xa)
		f.sizes += w * math.Sqrt(l.aa*l.xx)
	}
}

// share is the share of the force's power that the fit explains, 0 when it points the wrong way.
func (f *passive) share() float64 {
	if !(f.toward < passiveToward*f.sizes) {
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
	sign, c := l.sign[i], l.q+l.p
	return l.fit(func(k int) product {
		x, a := b.lines[k*c+i], b.lines[k*c+l.q+o]
		return product{abs2(a), abs2(x), x * complex(sign*real(a), -sign*imag(a))}
	}).share()
}

// fit takes all judged lines.
func (l *layout) fit(line func(k int) product) *passive {
	f := new(passive)
	var lines [2 * cellLines]product
	for cell := range l.cells.n {
		lo, hi := l.cells.bounds(cell)
		n := 0
		for k := lo; k < hi && n < len(lines); k++ {
			lines[n] = line(k)
			n++
		}
		f.addCell(float64(lo+hi)/2/float64(l.cells.last+1), lines[:n])
	}
	return f
}
