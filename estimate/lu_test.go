package estimate

import (
	"math/cmplx"
	"math/rand/v2"
	"slices"
	"testing"

	"pgregory.net/rapid"
)

func TestLUSolves(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.IntRange(1, 8).Draw(t, "n")
		rng := rand.New(rand.NewPCG(rapid.Uint64().Draw(t, "seed"), 4))
		a, x := make([]complex128, n*n), make([]complex128, n)
		draw(rng, a)
		draw(rng, x)
		if rapid.Bool().Draw(t, "zero first pivot") && n > 1 {
			a[0] = 0
		}
		b := make([]complex128, n)
		for i := range n {
			for j := range n {
				b[i] += a[i*n+j] * x[j]
			}
		}
		lu, pivots, got := slices.Clone(a), make([]int, n), slices.Clone(b)
		if !luFactor(lu, pivots) {
			t.Fatal("a random matrix was refused")
		}
		luSolve(lu, pivots, got)
		for i := range n {
			left := -b[i]
			for j := range n {
				left += a[i*n+j] * got[j]
			}
			// Elimination with pivots leaves a residual of rounding, whatever the condition.
			if cmplx.Abs(left) > 1e-13*(1+largest(got)) {
				t.Fatalf("row %d of A x - b is %v", i, left)
			}
		}
	})
}

func largest(list []complex128) float64 {
	size := 0.0
	for _, v := range list {
		size = max(size, cmplx.Abs(v))
	}
	return size
}

func TestLURefusesWhatHasNoInverse(t *testing.T) {
	for name, a := range map[string][]complex128{
		"zero":            {0, 0, 0, 0},
		"equal rows":      {1, 2i, 1, 2i},
		"dependent":       {1, 1 + 1i, 1 - 1i, 2},
		"nearly so":       {1, 1, 1, 1 + 1e-13},
		"NaN":             {cmplx.NaN(), 0, 0, 1},
		"NaN further on":  {1, 0, 0, cmplx.NaN()},
		"a silent column": {0, 1, 0, 1},
	} {
		if luFactor(a, make([]int, 2)) {
			t.Errorf("%s: accepted", name)
		}
	}
}
