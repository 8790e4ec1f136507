package estimate

import (
	"math"
	"math/cmplx"
	"math/rand/v2"
	"slices"
	"testing"

	"gonum.org/v1/gonum/mat"
	"pgregory.net/rapid"
)

// randomHermitian is B B^H of a random n by m matrix B, so positive definite where m >= n.
func randomHermitian(rng *rand.Rand, n, m int) []complex128 {
	b := make([]complex128, n*m)
	for i := range b {
		b[i] = complex(rng.NormFloat64(), rng.NormFloat64())
	}
	a := make([]complex128, n*n)
	for i := range n {
		for j := range n {
			for k := range m {
				a[i*n+j] += b[i*m+k] * cmplx.Conj(b[j*m+k])
			}
		}
		a[i*n+i] = complex(real(a[i*n+i]), 0)
	}
	return a
}

// TestEigenvaluesAgainstLAPACK compares with gonum's symmetric solver on the real matrix
// [Re -Im; Im Re], which has each eigenvalue twice.
func TestEigenvaluesAgainstLAPACK(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.IntRange(1, 8).Draw(t, "n")
		rng := rand.New(rand.NewPCG(rapid.Uint64().Draw(t, "seed"), 0))
		a := randomHermitian(rng, n, rapid.IntRange(1, 12).Draw(t, "rank"))
		double := mat.NewSymDense(2*n, nil)
		for i := range n {
			for j := range n {
				double.SetSym(i, j, real(a[i*n+j]))
				double.SetSym(n+i, n+j, real(a[i*n+j]))
				double.SetSym(i, n+j, -imag(a[i*n+j]))
			}
		}
		var eigen mat.EigenSym
		if !eigen.Factorize(double, false) {
			t.Fatal("the reference found no eigenvalues")
		}
		want := eigen.Values(nil)
		slices.Reverse(want)
		got := make([]float64, n)
		eigenvalues(got, a)
		for i := range got {
			if math.Abs(got[i]-want[2*i]) > 1e-12*want[0] {
				t.Fatalf("eigenvalue %d of %d is %v, want %v", i, n, got[i], want[2*i])
			}
		}
	})
}

// TestDiagonaliseGivesTheMatrixBack: V is unitary and V^H D V the matrix.
func TestDiagonaliseGivesTheMatrixBack(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.IntRange(1, 8).Draw(t, "n")
		rng := rand.New(rand.NewPCG(rapid.Uint64().Draw(t, "seed"), 3))
		a := randomHermitian(rng, n, rapid.IntRange(1, 12).Draw(t, "rank"))
		d, v := slices.Clone(a), make([]complex128, n*n)
		diagonalise(d, v, n)
		for i := range n {
			for j := range n {
				var unit, back complex128
				for k := range n {
					unit += v[i*n+k] * cmplx.Conj(v[j*n+k])
					back += cmplx.Conj(v[k*n+i]) * d[k*n+k] * v[k*n+j]
				}
				if i == j {
					unit--
				} else if cmplx.Abs(d[i*n+j]) > 1e-15*trace(a, n) {
					t.Fatalf("%v is left at %d,%d", d[i*n+j], i, j)
				}
				if cmplx.Abs(unit) > 1e-13 {
					t.Fatalf("rows %d and %d of V are off unitary by %v", i, j, unit)
				}
				if cmplx.Abs(back-a[i*n+j]) > 1e-13*trace(a, n) {
					t.Fatalf("V^H D V has %v at %d,%d, want %v", back, i, j, a[i*n+j])
				}
			}
		}
	})
}

func trace(a []complex128, n int) float64 {
	sum := 0.0
	for i := range n {
		sum += real(a[i*n+i])
	}
	return sum
}

func TestEigenvaluesKeepTheirPrecisionWhenBadlyScaled(t *testing.T) {
	// diag(1, 1e-12) [1 c; c* 1] diag(1, 1e-12) with |c| = 0.5: by the quadratic formula the
	// eigenvalues are 1 + 0.25e-24 and 0.75e-24 to first order.
	c := cmplx.Rect(0.5, 1)
	a := []complex128{1, c * 1e-12, cmplx.Conj(c) * 1e-12, 1e-24}
	got := make([]float64, 2)
	eigenvalues(got, a)
	if math.Abs(got[0]-1) > 1e-15 || math.Abs(got[1]/0.75e-24-1) > 1e-14 {
		t.Errorf("eigenvalues %v, want 1 and 0.75e-24", got)
	}
}

func TestEigenvaluesOfWhatIsNotFinite(t *testing.T) {
	for _, bad := range []complex128{cmplx.NaN(), cmplx.Inf()} {
		a := []complex128{1, bad, bad, 1}
		got := make([]float64, 2)
		eigenvalues(got, a)
		if !math.IsNaN(got[0]) || !math.IsNaN(got[1]) {
			t.Errorf("with %v: eigenvalues %v, want NaN", bad, got)
		}
	}
}

func TestCholeskyGivesTheMatrixBack(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.IntRange(1, 8).Draw(t, "n")
		rng := rand.New(rand.NewPCG(rapid.Uint64().Draw(t, "seed"), 1))
		a := randomHermitian(rng, n, n+2)
		l := make([]complex128, n*n)
		if !cholesky(l, a, n) {
			t.Fatal("a positive definite matrix was refused")
		}
		for i := range n {
			for j := range n {
				var sum complex128
				for k := range min(i, j) + 1 {
					sum += l[i*n+k] * cmplx.Conj(l[j*n+k])
				}
				if cmplx.Abs(sum-a[i*n+j]) > 1e-12*real(a[0]+a[n*n-1]) {
					t.Fatalf("L L^H has %v at %d,%d, want %v", sum, i, j, a[i*n+j])
				}
			}
		}
	})
}

func TestCholeskyRefusesWhatIsNotPositive(t *testing.T) {
	for name, a := range map[string][]complex128{
		"indefinite": {1, 2, 2, 1},
		"singular":   {1, 1, 1, 1},
		"zero":       {0, 0, 0, 0},
		"NaN":        {complex(math.NaN(), 0), 0, 0, 1},
	} {
		if cholesky(make([]complex128, 4), a, 2) {
			t.Errorf("%s: accepted", name)
		}
	}
}
