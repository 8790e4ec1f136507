package demo

import (
	"math"
	"testing"
)

func TestSensorNoiseDensity(t *testing.T) {
	const rateHz, block, blocks = 2560.0, 65536, 40
	f := floor{density: 4e-3, rise: 20, cornerHz: 1}
	n := newSensorNoise(f, rateHz, stream(1, "test"))
	// the low-pass has a gain of share / (1 - keep) at 0 Hz
	if got := 1 + n.share/(1-n.keep); math.Abs(got-f.rise) > 1e-9 {
		t.Errorf("rise %g: want %g", got, f.rise)
	}
	psd := make([]float64, block/2+1)
	v := make([]float64, block)
	for range blocks {
		for i := range v {
			v[i] = n.next()
		}
		for k, c := range transform(v, 0, 1) {
			// one-sided density; the Hann window's mean square is 3/8
			psd[k] += 2 / (rateHz * block * 3 / 8) * (real(c)*real(c) + imag(c)*imag(c)) / blocks
		}
	}
	for _, c := range []struct {
		name         string
		lowHz, topHz float64
		want         float64 // root of the mean density
	}{
		{"white part", 800, 1200, f.density},
		// far below the corner the low-pass adds rise-1 times the white part
		{"bottom", 0.12, 0.24, f.density * 20},
	} {
		var sum, lines float64
		for k := range psd {
			if hz := float64(k) * rateHz / block; hz >= c.lowHz && hz <= c.topHz {
				sum += psd[k]
				lines++
			}
		}
		// the bottom holds 4 lines of 40 blocks, 5 % scatter in amplitude, and 0.24 Hz already lost 3 %; the low-pass
		// adds 2 % to the white part
		if got := math.Sqrt(sum / lines); math.Abs(got/c.want-1) > 0.15 {
			t.Errorf("%s: density %.3g per root Hz: want %.3g", c.name, got, c.want)
		}
	}
}
