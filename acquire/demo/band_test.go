package demo

import (
	"math"
	"math/cmplx"
	"testing"

	"pgregory.net/rapid"
)

func demoBand() band {
	return band{rateHz: 2560 * 8, every: 8, passHz: 1000, stopHz: 1280, rms: 1.5}
}

// gainDB is a filter's gain at a frequency against the one at 0 Hz.
func gainDB(taps []float64, freqHz, rateHz float64) float64 {
	var at complex128
	var sum float64
	for i, v := range taps {
		sum += v
		at += complex(v, 0) * cmplx.Exp(complex(0, -2*math.Pi*freqHz*float64(i)/rateHz))
	}
	return 20 * math.Log10(cmplx.Abs(at)/math.Abs(sum))
}

func TestLowPass(t *testing.T) {
	for name, b := range map[string]band{
		"at the lowest rate":   demoBand(),
		"far above the lowest": {rateHz: 51200 * 2, every: 40, passHz: 1000, stopHz: 1280, rms: 1.5},
		"no sub samples":       {rateHz: 3000, every: 1, passHz: 1000, stopHz: 1280, rms: 1.5},
	} {
		taps := lowPass(b)
		for freqHz := 0.0; freqHz <= b.rateHz/2; freqHz += 20 {
			gain := gainDB(taps, freqHz, b.rateHz)
			if freqHz <= b.passHz && math.Abs(gain) > 0.001 {
				t.Errorf("%s: %.4f dB at %g Hz: want 0 up to %g Hz", name, gain, freqHz, b.passHz)
			}
			if freqHz >= b.stopHz && gain > -92 {
				t.Errorf("%s: %.1f dB at %g Hz: want at most -92 from %g Hz", name, gain, freqHz, b.stopHz)
			}
		}
	}
}

func TestDriveBand(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		topHz := rapid.Float64Range(10, 20e3).Draw(t, "topHz")
		rateHz := topHz * rapid.Float64Range(2.56, 200).Draw(t, "rateHz per topHz")
		b := driveBand(rateHz, topHz, subSamples(rateHz, topHz), 1)
		whiteHz := b.rateHz / float64(b.every)
		switch {
		case b.passHz < topHz:
			t.Fatalf("flat to %g Hz: want %g", b.passHz, topHz)
		case b.stopHz > rateHz/2*(1+1e-9):
			t.Fatalf("gone from %g Hz at %g frames/s: aliases", b.stopHz, rateHz)
		case whiteHz < 2*b.stopHz*(1-1e-9):
			t.Fatalf("white samples at %g Hz: want at least twice the stop at %g Hz", whiteHz, b.stopHz)
		case whiteHz > 4*b.stopHz*(1+1e-9):
			t.Fatalf("white samples at %g Hz: want at most four times the stop at %g Hz", whiteHz, b.stopHz)
		case b.rateHz < fineRatio*topHz*(1-1e-9):
			t.Fatalf("sub samples at %g Hz: want at least %d times %g Hz", b.rateHz, fineRatio, topHz)
		}
	})
}
