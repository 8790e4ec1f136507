package watch

import (
	"math/cmplx"
	"math/rand/v2"
	"testing"

	"pgregory.net/rapid"
)

// anyGxx is a Hermitian matrix of n outer products of random forces of unequal level.
func anyGxx(t *rapid.T, q, n int) []complex128 {
	rng := rand.New(rand.NewPCG(rapid.Uint64().Draw(t, "seed"), 3))
	gxx := make([]complex128, q*q)
	for range n {
		x := make([]complex128, q)
		for i := range x {
			level := float64(int(1) << (4 * i))
			x[i] = complex(level*rng.NormFloat64(), level*rng.NormFloat64())
		}
		for i, a := range x {
			for j, b := range x {
				gxx[i*q+j] += a * cmplx.Conj(b)
			}
		}
	}
	return gxx
}

// TestRowSolves: what row makes of g, times Gxx, is g again.
func TestRowSolves(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		q := rapid.IntRange(1, 6).Draw(t, "q")
		gxx := anyGxx(t, q, 3*q)
		m := lower{q, make([]complex128, q*q)}
		if !m.factor(gxx) {
			t.Fatal("no inverse")
		}
		want := gxx[:q] // E[x_0 x*], so that the row is (1, 0, ...)
		got := append([]complex128(nil), want...)
		explained := m.row(got)
		for i, v := range got {
			unit := complex(0, 0)
			if i == 0 {
				unit = 1
			}
			// Levels spread by 2^20 and a chance correlation leave this of 16 digits.
			if cmplx.Abs(v-unit)*float64(int(1)<<(4*i)) > 1e-6*float64(int(1)<<(4*(q-1))) {
				t.Fatalf("row %v", got)
			}
		}
		if d := explained - real(gxx[0]); d > 1e-9*real(gxx[0]) || d < -1e-9*real(gxx[0]) {
			t.Fatalf("explained %v of %v", explained, gxx[0])
		}
	})
}

// TestInverseOwnIsThatOfInverse: both ways to the diagonal of the inverse agree.
func TestInverseOwnIsThatOfInverse(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		q := rapid.IntRange(1, 6).Draw(t, "q")
		m, column := lower{q, make([]complex128, q*q)}, make([]complex128, q)
		m.factor(anyGxx(t, q, 3*q))
		for j := range q {
			own := m.inverseOwn(column, j)
			m.inverse(column, j)
			if d := real(column[j])/own - 1; d > 1e-9 || d < -1e-9 {
				t.Fatalf("%v and %v", own, column[j])
			}
		}
	})
}

// TestTooFewAverages: fewer outer products than forces have no inverse.
func TestTooFewAverages(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		q := rapid.IntRange(2, 6).Draw(t, "q")
		m := lower{q, make([]complex128, q*q)}
		if m.factor(anyGxx(t, q, q-1)) {
			t.Fatal("inverted")
		}
	})
}
