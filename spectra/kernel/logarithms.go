package kernel

import "math"

// Logarithms replaces each of x by its natural logarithm, to within a few units of the last place. Values are
// positive, finite and not subnormal, or NaN, which stays NaN; what becomes of others is not said.
//
// With x = 2^k m and m from √½ to √2, it is k ln 2 + 2 artanh s with s = (m-1)/(m+1), and artanh's power series
// (Abramowitz and Stegun, Handbook of Mathematical Functions, 1964, 4.1.27 and 4.6.33) ends where the rest is below the
// last place: |s| is at most 0.172.
//
// The bits do not depend on the processor's instructions: see the package.
func Logarithms(x []float64) { fastest.logarithms(x) }

const (
	bitsOfOne      = 0x3ff0000000000000
	bitsOfRootHalf = 0x3fe6a09e667f3bcd // of √½
	fractionBits   = 52
	fraction       = 1<<fractionBits - 1
	exponentOfOne  = bitsOfOne >> fractionBits
)

// artanh are the coefficients of s², s⁴, ... in artanh(s)/s - 1, the last one first. The next would be below
// 0.172^20 = 2^-50.8 times 1/21.
var artanh = [...]float64{1. / 19, 1. / 17, 1. / 15, 1. / 13, 1. / 11, 1. / 9, 1. / 7, 1. / 5, 1. / 3}

func logarithmsPlain(x []float64) {
	for n, v := range x {
		bits := math.Float64bits(v) + (bitsOfOne - bitsOfRootHalf)
		k := float64(int64(bits>>fractionBits)) - exponentOfOne
		m := math.Float64frombits(bits&fraction + bitsOfRootHalf)
		s := (m - 1) / (m + 1)
		square := float64(s * s)
		series := artanh[0]
		for _, c := range artanh[1:] {
			series = float64(series*square) + c
		}
		s += s
		series = float64(float64(series*square)*s) + s
		x[n] = float64(k*math.Ln2) + series + (v - v) // v - v is NaN for a NaN
	}
}
