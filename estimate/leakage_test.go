package estimate

import (
	"math"
	"strings"
	"testing"

	"shakerwatch/spectra"
)

// leakageOf lists resonances of the given numbers of lines, at 100, 200, ... Hz, lines 0.5 Hz apart.
func leakageOf(lines ...float64) (Leakage, bool) {
	r := NewResonances(spectra.Shape{Lines: 10, Forces: 1, Responses: 1}, spectra.Hann, true)
	r.spacingHz = 0.5
	for n, l := range lines {
		r.List = append(r.List, Resonance{float64(100 * (n + 1)), Number(l / 2), Number(l)})
	}
	return r.Leakage()
}

func TestLeakage(t *testing.T) {
	for _, test := range []struct {
		name      string
		lines     []float64
		count     int
		narrowest float64
		spacing   float64
		text      string
	}{
		{"none found", nil, 0, 0, 0, ""},
		{"wide enough", []float64{4, 8, 30}, 0, 0, 0, ""},
		{"unknown", []float64{math.NaN()}, 0, 0, 0, ""},
		{"just too narrow", []float64{9, 3.999}, 1, 200, 0.4999,
			"the resonance at 200 Hz is only 4 lines wide, so |H| at its peak is low by about 6.9 %: averaging does not mend that, a line spacing of 0.5 Hz would"},
		{"the narrowest of three", []float64{3.9, 2, 3}, 3, 200, 0.25, "and 2 others are less so"},
		{"narrower than a line", []float64{0.4, 3}, 2, 100, 0.125, "is narrower than the line spacing"},
	} {
		t.Run(test.name, func(t *testing.T) {
			l, found := leakageOf(test.lines...)
			low := 0.0
			if found {
				low = 1 - real(smeared(spectra.Hann, 0, 2*float64(l.Narrowest.BandwidthHz))) // the kernel summed up
			}
			if found != (test.count > 0) || l.Count != test.count || l.Narrowest.FrequencyHz != test.narrowest ||
				math.Abs(l.SpacingHz-test.spacing) > 1e-3 || math.Abs(l.Low-low) > 1e-3 {
				t.Errorf("%v %+v", found, l)
			}
			if found && !strings.Contains(l.String(), test.text) {
				t.Error(l.String())
			}
		})
	}
}

// TestPeakIsLowAsSaid: the true |H| at the peak is 1, and H1 of 400 averages must come out low by Low.
func TestPeakIsLowAsSaid(t *testing.T) {
	m := oneMode(spectra.Hann, 1, 1, 2)
	m.direct, m.modes[0].line = 0, 100
	var mean complex128
	for seed := range uint64(4) {
		run := m.start(seed)
		run.run(400)
		mean += estimatesOf(run.snapshot(), nil).H[100] / 4
	}
	want := newKernel(spectra.Hann, true).low(2)
	// Coherence at the peak is about 0.8: 1.7 % random error of |H| after 400 averages, 0.9 % of the mean of four.
	if got := 1 - math.Hypot(real(mean), imag(mean)); math.Abs(got-want) > 0.03 {
		t.Errorf("the peak is low by %.3f, want %.3f", got, want)
	}
}
