package estimate

import (
	"math"
	"math/cmplx"
	"testing"

	"gonum.org/v1/gonum/mathext"
	"pgregory.net/rapid"
)

func TestFQuantile(t *testing.T) {
	for _, test := range []struct{ d1, d2, level, want, tolerance float64 }{
		{2, 20, 0.95, 3.493, 5e-4}, // NIST/SEMATECH e-Handbook, table of the F distribution
		{2, 40, 0.90, 2.440, 5e-4}, // as above
		// python3 -c 'from scipy.stats import f; print("%.15g" % f.ppf(level, d1, d2))', SciPy 1.10
		{2, 20, 0.95, 3.49282847673563, 1e-13},
		{2, 3.7, 0.9, 4.57262061501414, 1e-13},
		{4, 21.3, 0.9, 2.22897473841872, 1e-10},
		{6, 50, 0.95, 2.28643590417802, 1e-10},
		{8, 200, 0.99, 2.60123643969359, 1e-10},
		{6, 0.5, 0.9, 3258.66728396529, 1e-10},
		{16, 1e5, 0.9, 1.47143450533623, 1e-10},
		{6, 2e6, 0.9, 1.77410972669204, 1e-9},
		{4, 0.01, 0.9, 6.77879280732354e+197, 1e-9},
	} {
		if got := FQuantile(test.d1, test.d2, test.level); !(math.Abs(got/test.want-1) <= test.tolerance) {
			t.Errorf("F(%v, %v; %v) = %.15g, want %v", test.d1, test.d2, test.level, got, test.want)
		}
	}
}

// TestFQuantileInvertsTheDistribution: the upper tail beyond the quantile, by the incomplete beta
// function, is what the level leaves.
func TestFQuantileInvertsTheDistribution(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		d1 := float64(2 * rapid.IntRange(1, 16).Draw(t, "q"))
		d2 := rapid.Float64Range(0.5, 1e4).Draw(t, "d2")
		level := rapid.Float64Range(0.5, 0.999).Draw(t, "level")
		got := FQuantile(d1, d2, level)
		tail := mathext.RegIncBeta(d2/2, d1/2, d2/(d2+d1*got))
		if math.Abs(tail/(1-level)-1) > 1e-9 {
			t.Fatalf("F(%v, %v) goes beyond its quantile %v with probability %v, want %v", d1, d2, got, tail, 1-level)
		}
	})
}

func TestFQuantileAnswersWhateverIsAsked(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		q := rapid.IntRange(1, 64).Draw(t, "q")
		left := math.Pow(10, rapid.Float64Range(-300, 12).Draw(t, "log of n_e - q"))
		level := rapid.SampledFrom([]float64{0.5, 0.9, 0.999999}).Draw(t, "level")
		one, all := RegionFactor(q, float64(q)+left, level, false), RegionFactor(q, float64(q)+left, level, true)
		if float64(q)+left == float64(q) {
			left = 0
		}
		if (left == 0) != math.IsNaN(one) || (left == 0) != math.IsNaN(all) || one < 0 || all < one*(1-1e-9) {
			t.Fatalf("q = %d, n_e - q = %v: factors %v and, simultaneous, %v", q, left, one, all)
		}
		NewChanceLevels(q, float64(q)+left)
	})
	for name, got := range map[string]float64{
		"no average left": FQuantile(2, 0, 0.9), "fewer than none": FQuantile(4, -2, 0.9), "unknown": FQuantile(4, math.NaN(), 0.9),
		"level 0": FQuantile(2, 4, 0), "level 1": FQuantile(4, 4, 1), "level unknown": FQuantile(4, 4, math.NaN()),
		"as many as forces": RegionFactor(2, 2, 0.9, false), "so for all at once": RegionFactor(2, 2, 0.9, true),
	} {
		if !math.IsNaN(got) {
			t.Errorf("%s: %v, want NaN", name, got)
		}
	}
}

func TestSimultaneousRegionOfOneForceIsItsOwn(t *testing.T) {
	for _, ne := range []float64{1.5, 9.524, 100} {
		if one, all := RegionFactor(1, ne, 0.9, false), RegionFactor(1, ne, 0.9, true); one != all {
			t.Errorf("n_e = %v: factors %v and %v", ne, one, all)
		}
	}
}

func TestBands(t *testing.T) {
	nan, inf := math.NaN(), math.Inf(-1)
	for _, test := range []struct {
		name             string
		h                complex128
		radius           float64
		lowDB, highDB    float64
		lowDeg, highDeg  float64
		infinite, circle bool
	}{
		// 20 log10 of 5 and 15; asin(5/10) = 30 degrees.
		{name: "half the size", h: 10, radius: 5, lowDB: 13.9794, highDB: 23.5218, lowDeg: -30, highDeg: 30},
		{name: "beyond the half turn", h: -10, radius: 5, lowDB: 13.9794, highDB: 23.5218, lowDeg: 150, highDeg: 210},
		{name: "upright", h: 1i, radius: 0, lowDB: 0, highDB: 0, lowDeg: 90, highDeg: 90},
		{name: "just reaching zero", h: 10i, radius: 10, lowDB: inf, highDB: 26.0206, lowDeg: -90, highDeg: 270},
		{name: "around zero", h: 1, radius: 9, lowDB: inf, highDB: 20, lowDeg: -180, highDeg: 180},
		{name: "zero itself", h: 0, radius: 10, lowDB: inf, highDB: 20, lowDeg: -180, highDeg: 180},
		{name: "no end", h: 10, radius: math.Inf(1), lowDB: inf, highDB: math.Inf(1), lowDeg: -180, highDeg: 180},
		{name: "no H", h: cmplx.NaN(), radius: 1, lowDB: nan, highDB: nan, lowDeg: nan, highDeg: nan},
		{name: "no radius", h: 1, radius: nan, lowDB: nan, highDB: nan, lowDeg: nan, highDeg: nan},
	} {
		t.Run(test.name, func(t *testing.T) {
			low, high := MagnitudeBandDB(test.h, test.radius)
			if !near(low, test.lowDB, 1e-4) || !near(high, test.highDB, 1e-4) {
				t.Errorf("%v to %v dB, want %v to %v", low, high, test.lowDB, test.highDB)
			}
			low, high = PhaseBandDegrees(test.h, test.radius)
			if !near(low, test.lowDeg, 1e-9) || !near(high, test.highDeg, 1e-9) {
				t.Errorf("%v to %v degrees, want %v to %v", low, high, test.lowDeg, test.highDeg)
			}
		})
	}
}

// near is got == want within tolerance, or both unknown, or both the same infinity.
func near(got, want, tolerance float64) bool {
	return got == want || math.Abs(got-want) <= tolerance || math.IsNaN(got) && math.IsNaN(want)
}

// TestBandsHoldTheCircle: what lies in the circle lies in both bands, and the bands are not wider.
func TestBandsHoldTheCircle(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		h := cmplx.Rect(rapid.Float64Range(0.1, 10).Draw(t, "size"), rapid.Float64Range(-3.14, 3.14).Draw(t, "phase"))
		radius := rapid.Float64Range(0, 0.9).Draw(t, "share") * cmplx.Abs(h)
		lowDB, highDB := MagnitudeBandDB(h, radius)
		lowDeg, highDeg := PhaseBandDegrees(h, radius)
		least, most, left, right := math.Inf(1), math.Inf(-1), math.Inf(1), math.Inf(-1)
		const steps = 2000
		for n := range steps {
			ratio := (h + cmplx.Rect(radius, 2*math.Pi*float64(n)/steps)) / h
			least, most = min(least, cmplx.Abs(ratio)), max(most, cmplx.Abs(ratio))
			left, right = min(left, cmplx.Phase(ratio)), max(right, cmplx.Phase(ratio))
		}
		size := cmplx.Abs(h)
		if math.Abs(math.Pow(10, lowDB/20)-least*size) > 1e-4*size || math.Abs(math.Pow(10, highDB/20)-most*size) > 1e-4*size {
			t.Fatalf("%v to %v dB, on the circle |H| is %v to %v", lowDB, highDB, least*size, most*size)
		}
		phase := cmplx.Phase(h) * 180 / math.Pi
		if math.Abs(lowDeg-phase-left*180/math.Pi) > 0.2 || math.Abs(highDeg-phase-right*180/math.Pi) > 0.2 {
			t.Fatalf("%v to %v degrees around %v, on the circle %v to %v", lowDeg, highDeg, phase, left, right)
		}
	})
}

// TestConfidenceRadiusIsGoodmans: of the estimates, from the random error that stands beside it.
func TestConfidenceRadiusIsGoodmans(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		q := rapid.IntRange(1, 4).Draw(t, "q")
		s := randomMade(newRand(t), 2, q, 2, q+rapid.IntRange(1, 20).Draw(t, "more")).snapshot(newRand(t))
		level := rapid.SampledFrom([]float64{0, 0.5, 0.95}).Draw(t, "level")
		all := rapid.Bool().Draw(t, "simultaneous")
		e := New(s.Shape, Method{Points: noPoints(q), Level: level, Simultaneous: all})
		e.Update(s)
		if level == 0 {
			level = 0.90
		}
		factor := RegionFactor(q, s.EffectiveAverages, level, all)
		for n, h := range e.H {
			deviation := e.RandomError[n] * cmplx.Abs(h) // half of the variance lies along H
			if want := math.Sqrt(2*factor) * deviation; math.Abs(e.ConfidenceRadius[n]/want-1) > 1e-12 {
				t.Fatalf("radius %v, want %v", e.ConfidenceRadius[n], want)
			}
		}
	})
}
