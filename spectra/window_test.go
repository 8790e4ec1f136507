package spectra

import (
	"math"
	"testing"

	"pgregory.net/rapid"
)

func TestWindowNoiseBandwidth(t *testing.T) {
	for _, test := range []struct {
		window Window
		want   float64
		source string
	}{
		{Hann, 1.5, "Harris, Proc. IEEE 66, 1978"},
		{Rectangular, 1, "Harris, Proc. IEEE 66, 1978"},
		{FlatTop, 3.7709, "1 + ½ Σ a_k² by hand, from the coefficients of ISO 18431-2"},
	} {
		t.Run(string(test.window), func(t *testing.T) {
			got := NoiseBandwidth(test.window.Values(4096))
			if math.Abs(got-test.want) > 5e-4 {
				t.Errorf("noise bandwidth %.5f lines, want %.3f (%s)", got, test.want, test.source)
			}
		})
	}
}

func TestWindowIsPeriodic(t *testing.T) {
	w := Hann.Values(16)
	if w[0] != 0 || w[8] != 1 {
		t.Errorf("a periodic Hann begins with %v and has %v in its middle, want 0 and 1", w[0], w[8])
	}
	// N = 5, w(n) = ½ - ½ cos(2πn/5): from the definition.
	for n, v := range Hann.Values(5) {
		if want := 0.5 - 0.5*math.Cos(2*math.Pi*float64(n)/5); math.Abs(v-want) > 1e-15 {
			t.Errorf("w(%d) = %v, want %v", n, v, want)
		}
	}
}

func TestFlatTopAsWritten(t *testing.T) {
	const n = 640
	for i, v := range FlatTop.Values(n) {
		c := func(k int) float64 { return math.Cos(2 * math.Pi * float64(k) * float64(i) / n) }
		want := 1 - 1.933*c(1) + 1.286*c(2) - 0.388*c(3) + 0.0322*c(4) // ISO 18431-2
		if math.Abs(v-want) > 1e-12 {
			t.Fatalf("w(%d) = %v, want %v", i, v, want)
		}
	}
}

func TestWindowSmear(t *testing.T) {
	for window, want := range map[Window]int{Hann: 2, FlatTop: 5, Rectangular: 1} {
		if got := window.Smear(); got != want {
			t.Errorf("%s smears 0 Hz up to line %d, want %d", window, got, want)
		}
	}
}

func TestOverlapCorrelation(t *testing.T) {
	hann := Hann.Values(4096)
	for _, test := range []struct {
		lag  int
		want float64
	}{
		{2048, 0.1667}, // 50 %: Harris 1978
		{1024, 0.6592}, // 75 %: Harris 1978
		{0, 1},
		{4096, 0},
		{5000, 0},
	} {
		if got := OverlapCorrelation(hann, test.lag); math.Abs(got-test.want) > 5e-5 {
			t.Errorf("lag %d: %.5f, want %.4f", test.lag, got, test.want)
		}
	}
}

func TestWindowSumMatchesNoiseBandwidth(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		window := rapid.SampledFrom([]Window{Hann, Rectangular, FlatTop}).Draw(t, "window")
		n := rapid.IntRange(10, 3000).Draw(t, "n") // below 10 samples the flat top's terms fold
		// Of a cosine sum with coefficients a, N Σw² / (Σw)² is 1 + ½ Σ_{k>0} (a_k/a_0)².
		a := window.cosines()
		want := 1.0
		for _, ak := range a[1:] {
			want += ak * ak / (a[0] * a[0]) / 2
		}
		if got := NoiseBandwidth(window.Values(n)); math.Abs(got-want) > 1e-12*want {
			t.Errorf("%s of %d: %v, want %v", window, n, got, want)
		}
	})
}

func TestUnknownWindowPanics(t *testing.T) {
	defer func() {
		if recover() == nil {
			t.Error("a window of unknown name did not panic")
		}
	}()
	Window("gauss").Values(8)
}
