package demo

import (
	"math"
	"math/cmplx"
	"testing"
)

// coherenceAround is that of two signals, over blocks of 4096 samples, averaged over the lines within 10 % of
// a frequency.
func coherenceAround(a, b []float64, rateHz, freqHz float64) float64 {
	const n = 4096
	lo, hi := int(math.Ceil(0.9*freqHz*n/rateHz)), int(1.1*freqHz*n/rateHz)
	aa, bb, ab := make([]float64, n), make([]float64, n), make([]complex128, n)
	for from := 0; from+n <= len(a); from += n {
		x, y := transform(a[from:from+n], 0, 1), transform(b[from:from+n], 0, 1)
		for k := lo; k <= hi; k++ {
			aa[k] += real(x[k] * cmplx.Conj(x[k]))
			bb[k] += real(y[k] * cmplx.Conj(y[k]))
			ab[k] += x[k] * cmplx.Conj(y[k])
		}
	}
	var sum float64
	for k := lo; k <= hi; k++ {
		sum += real(ab[k]*cmplx.Conj(ab[k])) / (aa[k] * bb[k])
	}
	return sum / float64(hi-lo+1)
}

func TestTie(t *testing.T) {
	const rateHz = 20480
	s := &Source{rateHz: 2560, sub: 8, topHz: 1000}
	for _, c := range []struct {
		name      string
		fault     Fault
		at300, at float64 // coherence at 300 and at 800 Hz
	}{
		{"whole band", Fault{Kind: "tied", Amount: 0.8}, 0.64, 0.64},
		{"usual", Fault{Kind: "tied"}, 0.81, 0.81},
		// the mean of 1/(1+u²) for u = Q (f/m - m/f) up to 0.67, and at 7.6; chance adds 0.01
		{"band", Fault{Kind: "tied-band"}, 0.88, 0.027},
	} {
		tie := s.newTie(&c.fault, 0, 1)
		a, b := make([]float64, 100*4096), make([]float64, 100*4096)
		newRandomDrive(demoBand(), stream(1, "a")).next(a)
		newRandomDrive(demoBand(), stream(1, "b")).next(b)
		tie.mix(a, b)
		var power float64
		for _, v := range b {
			power += v * v
		}
		// 20 s of 1.1 kHz scatter by 0.5 %
		if rms := math.Sqrt(power / float64(len(b))); math.Abs(rms/demoBand().rms-1) > 0.03 {
			t.Errorf("%s: %.3f A rms: want %g as before", c.name, rms, demoBand().rms)
		}
		for freqHz, want := range map[float64]float64{300: c.at300, 800: c.at} {
			if got := coherenceAround(a, b, rateHz, freqHz); math.Abs(got-want) > 0.03 {
				t.Errorf("%s: coherence %.2f at %g Hz: want %.2f", c.name, got, freqHz, want)
			}
		}
	}
}
