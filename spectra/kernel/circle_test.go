package kernel

import (
	"math"
	"math/cmplx"
	"testing"
)

func TestUnitIsExactWhereItCanBe(t *testing.T) {
	for _, n := range []int{4, 8, 12, 100, 4096} {
		for quarter, want := range []complex128{1, -1i, -1, 1i, 1} {
			if got := unit(quarter*n/4, n); got != want {
				t.Errorf("unit(%d/4 of %d) = %v, want %v", quarter, n, got, want)
			}
		}
	}
}

func TestUnitGoesRound(t *testing.T) {
	for _, n := range []int{1, 2, 3, 5, 7, 24, 125, 4096} {
		for k := range n + 1 {
			// cmplx.Rect's own angle is rounded: half a unit in the last place of 2π is 4.4e-16.
			if got, want := unit(k, n), cmplx.Rect(1, -2*math.Pi*float64(k)/float64(n)); cmplx.Abs(got-want) > 1e-15 {
				t.Errorf("unit(%d, %d) = %v, want %v", k, n, got, want)
			}
			mirrored := unit(n-k, n)
			if got := unit(k, n); real(got) != real(mirrored) || imag(got) != -imag(mirrored) {
				t.Errorf("unit(%d, %d) = %v is not the conjugate of %v", k, n, got, mirrored)
			}
		}
	}
}
