package spectra

import (
	"math"
	"testing"
)

// Impulse responses by scipy.signal.sosfilt(scipy.signal.butter(4, 2*edge, "highpass", output="sos"), unit impulse).
func TestHighPass(t *testing.T) {
	for _, c := range []struct {
		edge float64
		want []float64
	}{
		{0.01, []float64{0.92117099349994147, -0.1512327498291981, -0.13869493239330699, -0.12677473001155251, -0.11545653761989488, -0.10472475156886848}},
		{0.2, []float64{0.16717926860848989, -0.53796697124620585, 0.46865591394477751, 0.094162043568005241, -0.18116175061720435, -0.10389889682975356}},
	} {
		f := newHighPass(c.edge)
		in := 1.0
		for n, want := range c.want {
			if got := f.next(in); math.Abs(got-want) > 1e-14 {
				t.Errorf("edge %g, sample %d: %.17g, want %.17g", c.edge, n, got, want)
			}
			in = 0
		}
	}
}

func TestHighPassOfNoEdge(t *testing.T) {
	f := newHighPass(0)
	for _, v := range []float64{3, -1, 0.5} {
		if got := f.next(v); got != v {
			t.Errorf("%g became %g", v, got)
		}
	}
}
