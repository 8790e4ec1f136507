package watch

import (
	"math"
	"slices"
	"testing"
)

// TestLowSignal: near its noise in one band a channel is low there, stays so a little above the limit, and
// what has no noise measured is never low.
func TestLowSignal(t *testing.T) {
	d := newDrawn(1, 1, 2, 200)
	l := newLayout(d.rig)
	s := d.snapshot(16)
	noise := make([]float64, s.Lines*3)
	low := newLowSignal(l, noise)
	band := low.bands[1]
	for _, test := range []struct {
		db   float64
		want bool
	}{{30, false}, {10.5, false}, {9.5, true}, {10.5, true}, {11.8, false}, {10.5, false}, {math.NaN(), false}} {
		for k := range s.Lines {
			noise[k*3+1], noise[k*3+2] = 1e-9*s.Gyy[k*2], math.NaN()
			if k >= band[0] && k < band[1] {
				noise[k*3+1] = s.Gyy[k*2] * math.Pow(10, -test.db/10)
			}
		}
		found := low.find(nil, s)
		if (len(found) == 1) != test.want || len(found) > 1 {
			t.Fatalf("%g dB: %+v", test.db, found)
		}
		if test.want {
			hz := [][2]float64{{float64(band[0]) * drawnSpacingHz, float64(band[1]-1) * drawnSpacingHz}}
			if f := found[0]; !slices.Equal(f.channels, []int{1}) || !slices.Equal(f.bandsHz, hz) {
				t.Errorf("%g dB: %+v, want %v", test.db, f, hz)
			}
		}
	}
}
