package kernel

import (
	"fmt"
	"math/cmplx"
	"slices"
	"testing"
)

// forSizes runs a test for all small numbers of channels: every remainder of a register's width.
func forSizes(t *testing.T, test func(t *testing.T, q, p int)) {
	for q := range 10 {
		for p := range 10 {
			t.Run(fmt.Sprintf("%dx%d", q, p), func(t *testing.T) { test(t, q, p) })
		}
	}
}

func TestProductsAreTheirDefinition(t *testing.T) {
	forSizes(t, func(t *testing.T, q, p int) {
		x, y := complexNoise(q, 1), complexNoise(p, 2)
		outer, before := complexNoise(p*q, 3), complexNoise(p*q, 3)
		power, powerBefore := noise(p, 4), noise(p, 4)
		AddOuter(outer, y, x)
		AddPower(power, y)
		for o := range y {
			for i := range x {
				// A language product may be fused with the sum, so the last bit may differ.
				if got, want := outer[o*q+i], before[o*q+i]+y[o]*cmplx.Conj(x[i]); cmplx.Abs(got-want) > 1e-14 {
					t.Errorf("product of %d and %d: %v, want %v", o, i, got, want)
				}
			}
			if got, want := power[o], powerBefore[o]+real(y[o]*cmplx.Conj(y[o])); got-want > 1e-14 || want-got > 1e-14 {
				t.Errorf("power of %d: %v, want %v", o, got, want)
			}
		}
	})
}

func TestProductsHaveTheSameBits(t *testing.T) {
	needVector(t)
	forSizes(t, func(t *testing.T, q, p int) {
		parts := sprinkle(noise(2*(p*q+q+p), 5), 6)
		values := make([]complex128, p*q+q+p)
		for i := range values {
			values[i] = complex(parts[2*i], parts[2*i+1])
		}
		x, y, sums := values[:q], values[q:q+p], values[q+p:]
		want, got := slices.Clone(sums), slices.Clone(sums)
		plain.outer(want, y, x)
		fastest.outer(got, y, x)
		if i := bitsDiffer(got, want); i >= 0 {
			t.Errorf("product %d is %v, plain %v", i, got[i], want[i])
		}
		wantPower, gotPower := slices.Clone(parts[:p]), slices.Clone(parts[:p])
		plain.power(wantPower, y)
		fastest.power(gotPower, y)
		if i := bitsDiffer(gotPower, wantPower); i >= 0 {
			t.Errorf("power %d is %v, plain %v", i, gotPower[i], wantPower[i])
		}
	})
}

// TestProductsWithThemselves: the sums of x with itself are Hermitian to the last bit, and real on
// the diagonal.
func TestProductsWithThemselves(t *testing.T) {
	for q := 1; q < 10; q++ {
		sums := make([]complex128, q*q)
		for block := range 5 {
			x := complexNoise(q, uint64(block))
			AddOuter(sums, x, x)
		}
		for i := range q {
			for j := range q {
				if sums[i*q+j] != cmplx.Conj(sums[j*q+i]) {
					t.Errorf("%d channels: (%d, %d) is %v and (%d, %d) %v", q, i, j, sums[i*q+j], j, i, sums[j*q+i])
				}
			}
		}
	}
}

func TestProductsRefuseOtherShapes(t *testing.T) {
	x := make([]complex128, 3)
	for name, call := range map[string]func(){
		"outer": func() { AddOuter(make([]complex128, 8), x, x) },
		"power": func() { AddPower(make([]float64, 4), x) },
	} {
		t.Run(name, func(t *testing.T) {
			defer func() {
				if recover() == nil {
					t.Error("no panic")
				}
			}()
			call()
		})
	}
}
