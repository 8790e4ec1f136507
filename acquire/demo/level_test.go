package demo

import (
	"math"
	"testing"
)

// rms is the root mean square of each channel over some seconds.
func rms(s *Source, seconds float64) []float64 {
	n := int(seconds * s.RateHz())
	frames := make([]float64, n*s.Channels())
	s.Read(frames)
	sums := make([]float64, s.Channels())
	for i, v := range frames {
		sums[i%s.Channels()] += v * v
	}
	for ch := range sums {
		sums[ch] = math.Sqrt(sums[ch] / float64(n))
	}
	return sums
}

// TestSetDrive: at a tenth of the drive every level is 20 dB lower; at none only the sensors' noise
// is left, once the suspension has come to rest.
func TestSetDrive(t *testing.T) {
	s, err := New(Rig(), 3)
	if err != nil {
		t.Fatal(err)
	}
	full := rms(s, 20)
	s.SetDrive(0.1)
	rms(s, 60)
	low := rms(s, 20)
	s.SetDrive(0)
	rms(s, 120)
	none := rms(s, 5)
	for ch := range full {
		// 20 s of noise with a few narrow modes in it scatter by a decibel or two.
		if db := 20 * math.Log10(low[ch]/full[ch]); math.Abs(db+20) > 3 {
			t.Errorf("channel %d: a tenth of the drive is %.1f dB, want -20", ch+1, db)
		}
		if db := 20 * math.Log10(none[ch]); db > -65 || db < -85 {
			t.Errorf("channel %d: without drive %.1f dB re full scale, want a noise floor near -70", ch+1, db)
		}
	}
}
