package watch

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"

	"shakerwatch/spectra"
)

// TestCorrelationOfKnownWindows: Harris, Proc. IEEE 66, 1978, gives the overlap correlations of Hann; the
// neighbouring lines follow from its three terms.
func TestCorrelationOfKnownWindows(t *testing.T) {
	const n = 1024
	hann, rectangular := spectra.Hann.Values(n), spectra.Rectangular.Values(n)
	for _, test := range []struct {
		name      string
		got, want float64
	}{
		{"hann, itself", newCorrelation(hann, n/2).at(0, 0), 1},
		{"hann, 1 line", newCorrelation(hann, n/2).at(1, 0), 4. / 9},
		{"hann, 2 lines", newCorrelation(hann, n/2).at(2, 0), 1. / 36},
		{"hann, 3 lines", newCorrelation(hann, n/2).at(3, 0), 0},
		{"hann, 50 %", newCorrelation(hann, n/2).at(0, 1), 0.1667 * 0.1667},
		{"hann, 75 %", newCorrelation(hann, n/4).at(0, 1), 0.6592 * 0.6592},
		{"hann, no overlap", newCorrelation(hann, 0).at(0, 1), 0},
		{"rectangular, 1 line", newCorrelation(rectangular, 0).at(1, 0), 0},
		{"rectangular, 50 %", newCorrelation(rectangular, n/2).at(0, 1), 0.25},
		{"rectangular, 1 line and 50 %", newCorrelation(rectangular, n/2).at(1, 1), 1 / (math.Pi * math.Pi)},
		{"hann lines worth one", newCorrelation(hann, n/2).perIndependent(), 1 + 2*4./9 + 2./36},
	} {
		if math.Abs(test.got-test.want) > 1e-4 {
			t.Errorf("%s: %.5f, want %.5f", test.name, test.got, test.want)
		}
	}
}

// TestLimitHoldsItsRate sums |X|² of white noise over windows of lines and blocks and compares how often the limit at
// a rate that can be counted is passed, for windows and overlaps of all kinds.
func TestLimitHoldsItsRate(t *testing.T) {
	const n, lines, first, rounds, rate = 256, 16, 20, 4000, 0.01
	for _, test := range []struct {
		window spectra.Window
		hop    int
		blocks int
	}{
		{spectra.Hann, n / 2, 1}, {spectra.Hann, n / 2, 4}, {spectra.Hann, n / 4, 4},
		{spectra.FlatTop, n / 2, 2}, {spectra.FlatTop, n / 4, 4}, {spectra.Rectangular, n, 1}, {spectra.Rectangular, n / 2, 2},
	} {
		t.Run(fmt.Sprintf("%s, hop %d, %d blocks", test.window, test.hop, test.blocks), func(t *testing.T) {
			rng := rand.New(rand.NewPCG(1, 9))
			window := test.window.Values(n)
			transform := spectra.NewTransform(window)
			limit := newCorrelation(window, test.hop).limitAt(rate, lines, test.blocks, math.Inf(1))
			var squares float64
			for _, w := range window {
				squares += w * w
			}
			samples, dst, above := make([]float64, n+3*n), make([]complex128, n/2), 0
			for range rounds {
				for i := range samples {
					samples[i] = rng.NormFloat64()
				}
				var sum float64
				for b := range test.blocks {
					transform.ChannelTo(dst, 0, 1, samples[b*test.hop:b*test.hop+n])
					for _, v := range dst[first : first+lines] {
						sum += abs2(v) / squares
					}
				}
				if sum > limit {
					above++
				}
			}
			// Gamma is not exact: half to twice the rate is what a limit far out in the tail can bear.
			if got := float64(above) / rounds; got < rate/2 || got > 2*rate {
				t.Errorf("passed in %.4f of the sums, want %.4f", got, rate)
			}
		})
	}
}

func TestTaperIsAHannWindow(t *testing.T) {
	const n, lines = 64, 20
	rng := rand.New(rand.NewPCG(2, 9))
	samples := make([]float64, n)
	for i := range samples {
		samples[i] = rng.NormFloat64()
	}
	plain, hann := make([]complex128, lines*2), make([]complex128, lines*2)
	for ch := range 2 {
		spectra.NewTransform(spectra.Rectangular.Values(n)).ChannelTo(plain, ch, 2, samples)
		spectra.NewTransform(spectra.Hann.Values(n)).ChannelTo(hann, ch, 2, samples)
	}
	got := (&taper{channels: 2}).of(plain)
	for k := range 2 * (lines - 1) {
		if abs2(got[k]-hann[k]) > 1e-24*n*n {
			t.Fatalf("value %d is %v, want %v", k, got[k], hann[k])
		}
	}
}
