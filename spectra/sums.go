package spectra

import "shakerwatch/spectra/kernel"

// sums are the summed products of some blocks, line by line.
type sums struct {
	gxx   []complex128 // (line, i, j)
	gyx   []complex128 // (line, o, i)
	gyy   []float64    // (line, o)
	pairs []complex128 // (line, pair)
}

func newSums(shape Shape, pairs int) sums {
	d := newDensities(shape, pairs)
	return sums{gxx: d.Gxx, gyx: d.Gyx, gyy: d.Gyy, pairs: d.GyyPairs}
}

func (s *sums) copyFrom(from sums) {
	copy(s.gxx, from.gxx)
	copy(s.gyx, from.gyx)
	copy(s.gyy, from.gyy)
	copy(s.pairs, from.pairs)
}

func (s *sums) reset() {
	clear(s.gxx)
	clear(s.gyx)
	clear(s.gyy)
	clear(s.pairs)
}

// line is the part of one line.
func (s *sums) line(shape Shape, pairs, k int) sums {
	q, p := shape.Forces, shape.Responses
	return sums{
		gxx:   s.gxx[k*q*q : (k+1)*q*q],
		gyx:   s.gyx[k*p*q : (k+1)*p*q],
		gyy:   s.gyy[k*p : (k+1)*p],
		pairs: s.pairs[k*pairs : (k+1)*pairs],
	}
}

// scale multiplies all by a factor.
func (s *sums) scale(by float64) {
	for _, values := range [][]complex128{s.gxx, s.gyx, s.pairs} {
		for n, v := range values {
			values[n] = complex(by*real(v), by*imag(v))
		}
	}
	for n := range s.gyy {
		s.gyy[n] *= by
	}
}

// add adds the products of one line of one block.
func (s *sums) add(x, y []complex128, pairs [][2]int) {
	kernel.AddOuter(s.gxx, x, x)
	kernel.AddOuter(s.gyx, y, x)
	kernel.AddPower(s.gyy, y)
	for n, pair := range pairs {
		s.pairs[n] += product(y[pair[0]], y[pair[1]])
	}
}

// product is a b*. The conversions keep a processor from fusing a product with the sum, as in package kernel.
func product(a, b complex128) complex128 {
	return complex(
		float64(real(a)*real(b))+float64(imag(a)*imag(b)),
		float64(imag(a)*real(b))-float64(real(a)*imag(b)),
	)
}
