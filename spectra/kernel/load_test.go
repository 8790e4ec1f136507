package kernel

import (
	"slices"
	"testing"
)

func TestLoad(t *testing.T) {
	for n := range 19 {
		window := noise(n, 1)
		var from [Lanes][]float64
		for l := range from {
			from[l] = sprinkle(noise(n, uint64(2+l)), uint64(l))
		}
		want := make([]float64, n*Lanes)
		for i := range want {
			want[i] = window[i/Lanes] * from[i%Lanes][i/Lanes]
		}
		for name, l := range map[string]*loops{"plain": &plain, "fast": fastest} {
			got := make([]float64, n*Lanes)
			l.load(got, window, &from)
			if i := bitsDiffer(got, want); i >= 0 {
				t.Errorf("%s, %d samples: float %d is %v, want %v", name, n, i, got[i], want[i])
			}
		}
	}
}

func TestSpread(t *testing.T) {
	const n = 3
	values := noise(n*Lanes, 1)
	x := make([]float64, n*element)
	for i := range x {
		x[i] = 9
	}
	copy(x, values)
	spread(x, n)
	for i := range n {
		if !slices.Equal(x[i*element:][:Lanes], values[i*Lanes:][:Lanes]) {
			t.Errorf("real parts of point %d are %v", i, x[i*element:][:Lanes])
		}
		if !slices.Equal(x[i*element+Lanes:][:Lanes], make([]float64, Lanes)) {
			t.Errorf("imaginary parts of point %d are %v", i, x[i*element+Lanes:][:Lanes])
		}
	}
}
