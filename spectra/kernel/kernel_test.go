package kernel

import (
	"math"
	"math/rand/v2"
	"testing"
)

func noise(n int, seed uint64) []float64 {
	rng := rand.New(rand.NewPCG(seed, 1))
	x := make([]float64, n)
	for i := range x {
		x[i] = rng.NormFloat64()
	}
	return x
}

func complexNoise(n int, seed uint64) []complex128 {
	parts := noise(2*n, seed)
	x := make([]complex128, n)
	for i := range x {
		x[i] = complex(parts[2*i], parts[2*i+1])
	}
	return x
}

func noises(count, n int, seed uint64) [][]float64 {
	channels := make([][]float64, count)
	for c := range channels {
		channels[c] = noise(n, seed+uint64(c))
	}
	return channels
}

// bitsDiffer is the first place at which two slices differ in bits, or -1. A NaN equals every other.
func bitsDiffer[T float64 | complex128](a, b []T) int {
	if len(a) != len(b) {
		return min(len(a), len(b))
	}
	differ := func(x, y float64) bool {
		return math.Float64bits(x) != math.Float64bits(y) && !(math.IsNaN(x) && math.IsNaN(y))
	}
	for i := range a {
		switch x := any(a[i]).(type) {
		case float64:
			if differ(x, any(b[i]).(float64)) {
				return i
			}
		case complex128:
			y := any(b[i]).(complex128)
			if differ(real(x), real(y)) || differ(imag(x), imag(y)) {
				return i
			}
		}
	}
	return -1
}

// needVector ends a test of two kinds of loops where there is one only.
func needVector(t *testing.T) {
	t.Helper()
	if fastest == &plain {
		t.Skip("this processor has plain loops only: nothing to compare")
	}
}

// awkward are values that a shortcut in the arithmetic would give away.
var awkward = []float64{0, math.Copysign(0, -1), 1e-320, -1e-310, 1e300, -1e300, math.Inf(1), math.Inf(-1), math.NaN()}

// sprinkle puts awkward values at some places of x.
func sprinkle(x []float64, seed uint64) []float64 {
	rng := rand.New(rand.NewPCG(seed, 2))
	for range len(x)/7 + 1 {
		if len(x) > 0 {
			x[rng.IntN(len(x))] = awkward[rng.IntN(len(awkward))]
		}
	}
	return x
}
