package setup

import (
	"strings"
	"testing"

	"shakerwatch/acquire/demo"
	"shakerwatch/estimate"
	"shakerwatch/spectra"
)

// TestLowSignal: densities 20 dB above the noise are well; those of one response 9 dB above it in
// one octave are not.
func TestLowSignal(t *testing.T) {
	r := demo.Rig()
	shape := estimate.ShapeOf(r)
	n := &Noise{Force: make([]float64, shape.Lines*shape.Forces), Response: make([]float64, shape.Lines*shape.Responses)}
	s := spectra.NewSnapshot(shape, spectra.Averaging{})
	s.SpacingHz, s.Averages, s.EffectiveAverages = r.Grid.SpacingHz, 30, 28
	for k := range shape.Lines {
		for i := range shape.Forces {
			n.Force[k*shape.Forces+i] = 1e-6
			s.Gxx[(k*shape.Forces+i)*shape.Forces+i] = 1e-4
		}
		for o := range shape.Responses {
			n.Response[k*shape.Responses+o] = 1e-8
			s.Gyy[k*shape.Responses+o] = 1e-6
		}
	}
	if got := n.LowSignal(r, s); got != "" {
		t.Errorf("20 dB above the noise: %q", got)
	}
	for k := range shape.Lines {
		if f := float64(k) * r.Grid.SpacingHz; f > 170 && f < 360 { // the octave around 250 Hz
			s.Gyy[k*shape.Responses+3] = 7.9e-8
			s.Gxx[k*shape.Forces*shape.Forces] = 7.9e-6
		}
	}
	got := n.LowSignal(r, s)
	want := "less than 10 dB above the noise: " + r.Forces[0].Name + " (178.1 to 354.4 Hz), " + r.Responses[3].Name + " (178.1 to 354.4 Hz)"
	if got != want {
		t.Errorf("%q, want %q", got, want)
	}
	for i := range s.Gyy {
		s.Gyy[i] = 0
	}
	if got := n.LowSignal(r, s); strings.Count(got, "(") != 1 || !strings.HasPrefix(got, "less than 10 dB above the noise: S1") {
		t.Errorf("silent responses, whose ratio is unknown: %q", got)
	}
	s.Averages = 7
	if got := n.LowSignal(r, s); got != "" {
		t.Errorf("after 7 averages: %q", got)
	}
}
