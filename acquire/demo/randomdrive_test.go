package demo

import (
	"math"
	"slices"
	"testing"
)

func TestRandomDriveLevelAndDistribution(t *testing.T) {
	b := demoBand()
	d := newRandomDrive(b, stream(1, "test"))
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
func TestRandomDriveHasNothingAboveItsStop(t *testing.T) {
	b := demoBand()
	d := newRandomDrive(b, stream(2, "test"))
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

func TestRandomDriveDoesNotDependOnCalls(t *testing.T) {
	whole, parts := make([]float64, 1000), make([]float64, 1000)
	newRandomDrive(demoBand(), stream(3, "test")).next(whole)
	d := newRandomDrive(demoBand(), stream(3, "test"))
	for at, n := 0, 1; at < len(parts); at, n = at+n, n+1 {
		n = min(n, len(parts)-at)
		d.next(parts[at : at+n])
	}
	if !slices.Equal(whole, parts) {
		t.Error("samples depend on how many are asked for at a time")
	}
}
