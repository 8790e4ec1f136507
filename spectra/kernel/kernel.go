// Package kernel holds the loops in which nearly all of the arithmetic's time goes: the Fourier transform
// of many channels at once, the sums of their products, and how far some are from what others say.
//
// It knows channels, samples and lines. It may not know forces from responses, averages, densities
// or goroutines.
//
// Each loop stands here twice: in plain Go, which says what it computes and serves every processor,
// and for amd64 with AVX2 in vector instructions, which a generator (internal/vectorgen) writes.
// Both take the same steps in the same order and round after each one, so their results are the same
// bit for bit, but for the sign and payload of a NaN. The plain loops convert products with
// float64(...), which forbids the compiler to fuse them with the addition that follows.
package kernel

//go:generate go run ./internal/vectorgen vector_amd64.s

// Lanes is how many channels go through one transform side by side.
const Lanes = 4

// element is the number of floats of a complex value of all lanes: the real parts, then the
// imaginary ones. It is as long as a line of the cache.
const element = 2 * Lanes

// loops are the inner loops, plain or vector. Lengths are the caller's business: none of them
// checks any.
type loops struct {
	// load puts window[i]·from[l][i] into x[i·Lanes+l].
	load func(x, window []float64, from *[Lanes][]float64)

	// The passes: see pass.go.
	pass3, pass4, pass5 func(x, turns []float64, m int)
	last2, last4, last8 func(x []float64)

	// split writes line k of every bin k into dst[k·stride:][:Lanes]: see bin.
	split func(dst []complex128, stride int, z []float64, bins []bin)

	// outer adds y[o]·x[i]* to sums[o·len(x)+i].
	outer func(sums, y, x []complex128)

	// power adds |y[o]|² to sums[o].
	power func(sums []float64, y []complex128)

	// misfit multiplies products[o] by 1 + t of row o: see Matrices.MultiplyMisfits. values are those of one
	// line.
	misfit func(products []float64, y, x []complex128, values, weights []float32, gain, most float64)

	// logarithms replaces each of x by its logarithm: see Logarithms.
	logarithms func(x []float64)
}

var plain = loops{
	load:  loadPlain,
	pass3: pass3Plain, pass4: pass4Plain, pass5: pass5Plain,
	last2: last2Plain, last4: last4Plain, last8: last8Plain,
	split: splitPlain,
	outer: outerPlain,
	power: powerPlain,

	misfit:     misfitPlain,
	logarithms: logarithmsPlain,
}

// times is a·b, rounded after every step.
func times(a, b complex128) complex128 {
	return complex(
		float64(real(a)*real(b))-float64(imag(a)*imag(b)),
		float64(real(a)*imag(b))+float64(imag(a)*real(b)),
	)
}

// timesMinusI is -i·a.
func timesMinusI(a complex128) complex128 { return complex(imag(a), -real(a)) }

// scaled is c·a for a real c.
func scaled(c float64, a complex128) complex128 {
	return complex(float64(c*real(a)), float64(c*imag(a)))
}
