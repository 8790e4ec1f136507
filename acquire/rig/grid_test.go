package rig

import (
	"math"
	"testing"

	"pgregory.net/rapid"
)

func TestDecimation(t *testing.T) {
	for _, c := range []struct {
		name          string
		rateHz, maxHz float64
		period, want  int
	}{
		{"exactly enough", 2560, 1000, 0, 1},
		{"too low", 2559, 1000, 0, 0},
		{"too low by rounding only", 2560 * (1 - 5e-10), 1000, 0, 1},
		{"exactly enough after decimation", 25600, 1000, 0, 10},
		{"enough for 18, not for 19", 48000, 1000, 0, 18},
		{"as far as it goes", 1e6, 1, 0, 256},
		{"nothing is enough for an infinite band", 1e6, math.MaxFloat64, 0, 0},
		{"divisor of a power of two", 48000, 1000, 65536, 16},
		{"divisor of a prime", 48000, 1000, 65537, 1},
		{"divisor of a round number", 48000, 1000, 48000, 16},
	} {
		t.Run(c.name, func(t *testing.T) {
			if got := decimation(c.rateHz, c.maxHz, c.period); got != c.want {
				t.Errorf("%d, want %d", got, c.want)
			}
		})
	}
}

func TestSmooth(t *testing.T) {
	for _, c := range []struct {
		name string
		x    float64
		want int
	}{
		{"less than one", 1e-300, 1},
		{"one", 1, 1},
		{"seven", 7, 8},
		{"exact hit", 5400, 5400},
		{"just above a hit", 5400.1, 5625},
		{"above a hit by rounding", 5400 * (1 + 5e-10), 5400},
		{"below a hit by rounding", 5400 * (1 - 5e-10), 5400},
		{"power of five", 15624.5, 15625},
		{"largest", maxBlock, maxBlock},
	} {
		t.Run(c.name, func(t *testing.T) {
			if got := smooth(c.x); got != c.want {
				t.Errorf("%d, want %d", got, c.want)
			}
		})
	}
}

// onlyTwoThreeFive divides out the primes, the definition instead of the search.
func onlyTwoThreeFive(n int) bool {
	for _, prime := range []int{2, 3, 5} {
		for n%prime == 0 {
			n /= prime
		}
	}
	return n == 1
}

func TestSmoothAgainstCounting(t *testing.T) {
	want := 1
	for x := 1; x <= 100_000; x++ {
		if want < x {
			for want = x; !onlyTwoThreeFive(want); {
				want++
			}
		}
		if got := smooth(float64(x)); got != want {
			t.Fatalf("smooth(%d) is %d, want %d", x, got, want)
		}
	}
}

func TestDecimationAgainstCounting(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		rateHz := rapid.Float64Range(1, 1e6).Draw(t, "rateHz")
		maxHz := rapid.Float64Range(1e-3, 1e6).Draw(t, "maxHz")
		period := rapid.IntRange(0, 1<<20).Draw(t, "period")
		want := 0
		for d := 1; d <= 256; d++ {
			if enough := rateHz/float64(d) >= 2.56*maxHz*(1-1e-9); enough && (period == 0 || period%d == 0) {
				want = d
			}
		}
		if got := decimation(rateHz, maxHz, period); got != want {
			t.Fatalf("%d, want %d", got, want)
		}
	})
}

func TestHighestLine(t *testing.T) {
	for _, c := range []struct {
		name             string
		spacingHz, maxHz float64
		want             int
	}{
		{"hit", 0.5, 1000, 2000},
		{"between lines", 0.493827, 1000, 2025},
		{"hit missed by rounding", 0.1, 0.3, 3}, // 3 * 0.1 > 0.3 in float64
		{"quotient rounded down over an integer", 0.10666666677333335, 400, 3750},
		{"above the band by rounding only", 1 + 5e-10, 1, 1},
		{"above the band", 1 + 2e-9, 1, 0},
	} {
		t.Run(c.name, func(t *testing.T) {
			if got := highestLine(c.spacingHz, c.maxHz); got != c.want {
				t.Errorf("%d, want %d", got, c.want)
			}
		})
	}
	rapid.Check(t, func(t *rapid.T) {
		spacingHz := rapid.Float64Range(1e-6, 1e3).Draw(t, "spacingHz")
		maxHz := rapid.Float64Range(1e-3, 1e3).Draw(t, "maxHz")
		k := highestLine(spacingHz, maxHz)
		top := maxHz * (1 + 1e-9)
		if float64(k)*spacingHz > top || float64(k+1)*spacingHz <= top {
			t.Fatalf("line %d", k)
		}
	})
}
