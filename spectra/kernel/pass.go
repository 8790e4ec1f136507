package kernel

import "math"

// A pass splits every transform of r·m points in x, of which one stands behind the other, into r of
// m points (decimation in frequency, in place; Gentleman and Sande, AFIPS Proc. 29, 1966):
//
//	x[p + m·k] <- e^{-2πi·p·k/(r·m)} Σ_j x[p + m·j] e^{-2πi·j·k/r},  p = 0 ... m-1, k = 0 ... r-1
//
// turns are the r-1 complex factors of k = 1 ... r-1 for each p. The last pass of all has m = 1 and
// needs none. Values are elements: of all lanes, each with the same arithmetic.

// The constants of the transforms of 3, 5 and 8 points.
const (
	sin3 = 0.86602540378443864676372317075293618347 // sin 2π/3

	cos5, cos5b = 0.30901699437494742410229341718281905886, -0.80901699437494742410229341718281905886 // cos 2π/5, cos 4π/5
	sin5, sin5b = 0.95105651629515357211643933337938214340, 0.58778525229247312916870595463907276860  // sin 2π/5, sin 4π/5

	half8 = math.Sqrt2 / 2
)

func at(x []float64, n, lane int) complex128 {
	return complex(x[n*element+lane], x[n*element+Lanes+lane])
}

func put(x []float64, n, lane int, v complex128) {
	x[n*element+lane], x[n*element+Lanes+lane] = real(v), imag(v)
}

func turn(turns []float64, n int) complex128 { return complex(turns[2*n], turns[2*n+1]) }

func pass3Plain(x, turns []float64, m int) {
	for ; len(x) > 0; x = x[3*m*element:] {
		for p := range m {
			w1, w2 := turn(turns, 2*p), turn(turns, 2*p+1)
			for l := range Lanes {
				a0, a1, a2 := at(x, p, l), at(x, p+m, l), at(x, p+2*m, l)
				sum := a1 + a2
				u := a0 - scaled(0.5, sum)
				v := timesMinusI(scaled(sin3, a1-a2))
				put(x, p, l, a0+sum)
				put(x, p+m, l, times(u+v, w1))
				put(x, p+2*m, l, times(u-v, w2))
			}
		}
	}
}

func pass4Plain(x, turns []float64, m int) {
	for ; len(x) > 0; x = x[4*m*element:] {
		for p := range m {
			w1, w2, w3 := turn(turns, 3*p), turn(turns, 3*p+1), turn(turns, 3*p+2)
			for l := range Lanes {
				y0, y1, y2, y3 := four(at(x, p, l), at(x, p+m, l), at(x, p+2*m, l), at(x, p+3*m, l))
				put(x, p, l, y0)
				put(x, p+m, l, times(y1, w1))
				put(x, p+2*m, l, times(y2, w2))
				put(x, p+3*m, l, times(y3, w3))
			}
		}
	}
}

func pass5Plain(x, turns []float64, m int) {
	for ; len(x) > 0; x = x[5*m*element:] {
		for p := range m {
			w1, w2, w3, w4 := turn(turns, 4*p), turn(turns, 4*p+1), turn(turns, 4*p+2), turn(turns, 4*p+3)
			for l := range Lanes {
				a0, a1, a2, a3, a4 := at(x, p, l), at(x, p+m, l), at(x, p+2*m, l), at(x, p+3*m, l), at(x, p+4*m, l)
				s1, s2, d1, d2 := a1+a4, a2+a3, a1-a4, a2-a3
				u1 := a0 + scaled(cos5, s1) + scaled(cos5b, s2)
				u2 := a0 + scaled(cos5b, s1) + scaled(cos5, s2)
				v1 := timesMinusI(scaled(sin5, d1) + scaled(sin5b, d2))
				v2 := timesMinusI(scaled(sin5b, d1) - scaled(sin5, d2))
				put(x, p, l, a0+s1+s2)
				put(x, p+m, l, times(u1+v1, w1))
				put(x, p+2*m, l, times(u2+v2, w2))
				put(x, p+3*m, l, times(u2-v2, w3))
				put(x, p+4*m, l, times(u1-v1, w4))
			}
		}
	}
}

func last2Plain(x []float64) {
	for ; len(x) > 0; x = x[2*element:] {
		for l := range Lanes {
			a0, a1 := at(x, 0, l), at(x, 1, l)
			put(x, 0, l, a0+a1)
			put(x, 1, l, a0-a1)
		}
	}
}

func last4Plain(x []float64) {
	for ; len(x) > 0; x = x[4*element:] {
		for l := range Lanes {
			y0, y1, y2, y3 := four(at(x, 0, l), at(x, 1, l), at(x, 2, l), at(x, 3, l))
			put(x, 0, l, y0)
			put(x, 1, l, y1)
			put(x, 2, l, y2)
			put(x, 3, l, y3)
		}
	}
}

func last8Plain(x []float64) {
	for ; len(x) > 0; x = x[8*element:] {
		for l := range Lanes {
			e0, e1, e2, e3 := four(at(x, 0, l), at(x, 2, l), at(x, 4, l), at(x, 6, l))
			o0, o1, o2, o3 := four(at(x, 1, l), at(x, 3, l), at(x, 5, l), at(x, 7, l))
			// e^{-2πi/8} and e^{-6πi/8}, of which only a sum and a difference need rounding.
			o1 = scaled(half8, complex(real(o1)+imag(o1), imag(o1)-real(o1)))
			o2 = timesMinusI(o2)
			o3 = scaled(half8, complex(imag(o3)-real(o3), -(real(o3)+imag(o3))))
			put(x, 0, l, e0+o0)
			put(x, 1, l, e1+o1)
			put(x, 2, l, e2+o2)
			put(x, 3, l, e3+o3)
			put(x, 4, l, e0-o0)
			put(x, 5, l, e1-o1)
			put(x, 6, l, e2-o2)
			put(x, 7, l, e3-o3)
		}
	}
}

// four is the transform of four points.
func four(a0, a1, a2, a3 complex128) (y0, y1, y2, y3 complex128) {
	s02, d02, s13, d13 := a0+a2, a0-a2, a1+a3, timesMinusI(a1-a3)
	return s02 + s13, d02 + d13, s02 - s13, d02 - d13
}
