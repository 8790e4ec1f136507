package web

import "shakerwatch/estimate"

// A scatter keeps a copy of what the newest refresh tells of noise and distortion.
type scatter struct {
	gyy        []float64 // (L,p) (m/s²)²/Hz
	distortion *estimate.Distortion
}

func newScatter(s shape) *scatter {
	d := estimate.NewDistortion(s.spectra())
	return &scatter{gyy: make([]float64, s.lines*s.responses), distortion: d}
}

// keep copies what st has. It panics when that has another shape.
func (s *scatter) keep(st Status) {
	if s == nil || st.Distortion == nil {
		return
	}
	if len(st.Gyy) != len(s.gyy) || st.Distortion.Shape != s.distortion.Shape {
		panic("web: the distortion has another shape than the estimates")
	}
	copy(s.gyy, st.Gyy)
	copy(s.distortion.NoiseForce, st.Distortion.NoiseForce)
	copy(s.distortion.NoiseResponse, st.Distortion.NoiseResponse)
	copy(s.distortion.DistortionResponse, st.Distortion.DistortionResponse)
	copy(s.distortion.Chance, st.Distortion.Chance)
}
