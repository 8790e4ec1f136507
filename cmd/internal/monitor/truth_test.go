package monitor

import (
	"math"
	"math/cmplx"
	"slices"
	"testing"

	"shakerwatch/acquire/demo"
)

// TestDemoAgainstTheTruth runs the simulated rig and compares H with its analytic frequency
// responses: with averages growing, the deviation falls as the formula says.
//
// |H1 - H|² over its predicted complex variance follows F(2, 2(n_e - q)) (Goodman,
// AFFDL-TR-65-56, 1965), whose median is v (2^(1/v) - 1) with v = n_e - q. Medians over the lines
// do not see the few at narrow resonances, where leakage adds to the deviation.
func TestDemoAgainstTheTruth(t *testing.T) {
	r := demo.Rig()
	truth, err := demo.NewTruth(r)
	if err != nil {
		t.Fatal(err)
	}
	deviation := map[int64]float64{}
	for _, blocks := range []int64{10, 40, 160} {
		source, err := demo.New(r, 7)
		if err != nil {
			t.Fatal(err)
		}
		got := mustRun(t, Config{Rig: r, Source: source, Blocks: blocks})
		e := got.Estimates
		var normalised, relative []float64
		for k := 16; k < e.Lines; k++ { // from 10 Hz on
			for n := range e.Responses * e.Forces {
				at := k*e.Responses*e.Forces + n
				h := truth.H(e.FrequencyHz[k], n/e.Forces, n%e.Forces)
				d := cmplx.Abs(e.H[at] - h)
				sd := e.RandomError[at] * cmplx.Abs(e.H[at]) // of |H|; the complex variance is twice its square
				normalised = append(normalised, d*d/(2*sd*sd))
				relative = append(relative, d/cmplx.Abs(h))
			}
		}
		v := e.EffectiveAverages - float64(e.Forces)
		want := v * (math.Pow(2, 1/v) - 1)
		// Some 44,000 values of which about 22,000 are independent: 4 % is more than four deviations
		// of the median. By 160 averages what is no random error, bias by leakage and by noise on the forces,
		// begins to show.
		if m := median(normalised); math.Abs(m-want) > 0.1*want {
			t.Errorf("%d blocks: median of |H1 - H|² over its variance is %.3f, want %.3f", blocks, m, want)
		}
		deviation[blocks] = median(relative) * math.Sqrt(v)
		t.Logf("%d blocks: median deviation %.2f %%, normalised %.3f of %.3f", blocks, 100*median(relative), median(normalised), want)
	}
	for _, blocks := range []int64{40, 160} {
		if ratio := deviation[blocks] / deviation[10]; ratio < 0.9 || ratio > 1.1 {
			t.Errorf("from 10 to %d blocks the deviation times sqrt(n_e - q) changed by %.3f", blocks, ratio)
		}
	}
}

func median(values []float64) float64 {
	slices.Sort(values)
	return values[len(values)/2]
}
