package web

import (
	"math"
	"testing"

	"shakerwatch/estimate"
)

func TestDistortionTravels(t *testing.T) {
	f := newFeed(t, 2, 3, 101)
	f.rig.Analysis.Excitation = "periodic" // as far as the hub knows
	h := NewHub(Run{Rig: f.rig, Kind: "demo"})
	f.add(10)
	st, e := f.refresh(h)
	d := estimate.NewDistortion(e.Shape)
	for n := range d.NoiseResponse {
		d.NoiseResponse[n], d.DistortionResponse[n], d.Chance[n] = 1+float64(n), math.NaN(), 0.01
	}
	for n := range d.NoiseForce {
		d.NoiseForce[n] = 1 / (1 + float64(n))
	}
	st.Distortion, st.Gyy = d, f.snapshot.Gyy
	h.Refresh(st, nil)
	h.Refresh(st, e)
	clear(d.NoiseResponse) // the hub has copied it

	v := h.first
	v.response, v.force = 2, 1
	m := h.refreshFor(t, v)
	for name, want := range map[string]float64{
		"distortion.response":    10 * math.Log10(f.snapshot.Gyy[50*3+2]),
		"distortion.noise":       10 * math.Log10(1+50*3+2),
		"distortion.chance":      -20,
		"distortion.force_noise": -10 * math.Log10(1+50*2+1),
	} {
		if got := m.curve(t, name); got[50] == nil || math.Abs(*got[50]-want) > 0.51*spectrumStep {
			t.Errorf("%s at line 50: %v, want %g", name, got[50], want)
		}
	}
	if got := m.curve(t, "distortion.level"); got[50] != nil {
		t.Errorf("unknown distortion travels as %g", *got[50])
	}
	if m.View.Names["distortion.force"][0] != "S2" {
		t.Errorf("names %v", m.View.Names)
	}
}

func TestDistortionOfAnotherShapeIsRefused(t *testing.T) {
	f := newFeed(t, 1, 2, 101)
	f.rig.Analysis.Excitation = "periodic"
	h := NewHub(Run{Rig: f.rig, Kind: "demo"})
	defer func() {
		if recover() == nil {
			t.Error("taken")
		}
	}()
	st, e := f.refresh(h)
	st.Distortion = estimate.NewDistortion(e.Shape)
	h.Refresh(st, e) // without Gyy
}
