package demo

import (
	"math"
	"math/cmplx"
	"slices"
	"testing"
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

func TestNoiseDriveLevelAndDistribution(t *testing.T) {
	b := demoBand()
	d := newNoiseDrive(b, stream(1, "test"))
	v := make([]float64, 400_000)
	d.next(v)
	var power, fourth float64
	for _, x := range v {
		power += x * x
		fourth += x * x * x * x
	}
	power /= float64(len(v))
	fourth /= float64(len(v))
	// 50 000 white samples; the mean square of Gaussian noise scatters by sqrt(2/(2 bandwidth time)), here
	// 0.7 %, its kurtosis by sqrt(24/n), 2 %; four times that
	if rms := math.Sqrt(power); math.Abs(rms/b.rms-1) > 0.014 {
		t.Errorf("rms %g A: want %g", rms, b.rms)
	}
	if kurtosis := fourth / (power * power); math.Abs(kurtosis-3) > 0.1 {
		t.Errorf("kurtosis %.3f: want 3", kurtosis)
	}
}

// The images of the white noise around multiples of its rate must be gone, else they alias.
func TestNoiseDriveHasNothingAboveItsStop(t *testing.T) {
	b := demoBand()
	d := newNoiseDrive(b, stream(2, "test"))
	v := make([]float64, 8*8192)
	d.next(v)
	x := transform(v, 0, 1)
	lineHz := b.rateHz / float64(len(v))
	var in, out float64
	for k, c := range x {
		power := real(c)*real(c) + imag(c)*imag(c)
		switch freqHz := float64(k) * lineHz; {
		case freqHz < b.passHz:
			in = max(in, power)
		case freqHz > b.stopHz:
			out = max(out, power)
		}
	}
	// the window's own side lobes are far below -92 dB that far out
	if dB := 10 * math.Log10(out/in); dB > -85 {
		t.Errorf("loudest line above the stop at %.1f dB of the loudest below: want below -85", dB)
	}
}

func TestNoiseDriveDoesNotDependOnCalls(t *testing.T) {
	whole, parts := make([]float64, 1000), make([]float64, 1000)
	newNoiseDrive(demoBand(), stream(3, "test")).next(whole)
	d := newNoiseDrive(demoBand(), stream(3, "test"))
	for at, n := 0, 1; at < len(parts); at, n = at+n, n+1 {
		n = min(n, len(parts)-at)
		d.next(parts[at : at+n])
	}
	if !slices.Equal(whole, parts) {
		t.Error("samples depend on how many are asked for at a time")
	}
}
