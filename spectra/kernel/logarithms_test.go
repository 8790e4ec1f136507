package kernel

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"
)

// anyPositive are normal numbers of any size, many of them near 1.
func anyPositive(n int, seed uint64) []float64 {
	rng := rand.New(rand.NewPCG(seed, 4))
	x := make([]float64, n)
	for i := range x {
		switch i % 3 {
		case 0:
			x[i] = math.Float64frombits(1<<fractionBits + rng.Uint64N(2046<<fractionBits))
		case 1:
			x[i] = 1 + math.Ldexp(rng.Float64()-0.5, -rng.IntN(53))
		default:
			x[i] = math.Exp(2 * rng.NormFloat64())
		}
	}
	return x
}

// TestLogarithms against the standard library's, to four units of the last place.
func TestLogarithms(t *testing.T) {
	x := append([]float64{
		1, 2, 0.5, math.E, 1e18, 0x1p-1022, math.MaxFloat64,
		math.Sqrt2, math.Nextafter(math.Sqrt2, 0), math.Nextafter(math.Sqrt2, 2),
		math.Sqrt2 / 2, math.Nextafter(math.Sqrt2/2, 0), math.Nextafter(math.Sqrt2/2, 1),
		math.Nextafter(1, 0), math.Nextafter(1, 2),
	}, anyPositive(30000, 1)...)
	got := slices.Clone(x)
	Logarithms(got)
	for n, v := range x {
		if want := math.Log(v); math.Abs(got[n]-want) > 4*0x1p-52*math.Abs(want) {
			t.Fatalf("the logarithm of %v is %v, want %v", v, got[n], want)
		}
	}
}

func TestTheLogarithmOfAnUnknownIsUnknown(t *testing.T) {
	for name, l := range map[string]*loops{"plain": &plain, "fast": fastest} {
		x := []float64{math.NaN(), 1, 2, -math.NaN(), math.NaN()}
		l.logarithms(x)
		if !math.IsNaN(x[0]) || x[1] != 0 || !math.IsNaN(x[3]) || !math.IsNaN(x[4]) {
			t.Errorf("%s: %v", name, x)
		}
	}
}

func TestLogarithmsHaveTheSameBits(t *testing.T) {
	needVector(t)
	for n := range 40 {
		for seed := range uint64(50) {
			want := sprinkle(anyPositive(n, seed), seed)
			got := slices.Clone(want)
			plain.logarithms(want)
			fastest.logarithms(got)
			if i := bitsDiffer(got, want); i >= 0 {
				t.Fatalf("%d of %d is %v, plain %v", i, n, got[i], want[i])
			}
		}
	}
}
