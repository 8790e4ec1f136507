package estimate

import (
	"shakerwatch/acquire/rig"
	"shakerwatch/spectra"
)

// The estimators of frequency responses that a rig file can name. MultipleCoherence,
// PartialCoherence and the variance of H are by H1 whatever the estimator.
const (
	H1 = "h1" // Gyx Gxx^-1: right where the forces are free of noise
	H2 = "h2" // Gyy Gxy^-1: right where the responses are; as many responses as forces
	HV = "hv" // total least squares: right where the noise of forces and responses is balanced
)

// DefaultLevel is the probability with which a confidence region holds the truth when a Method names
// none. Common practice, no source.
const DefaultLevel = 0.90

// A Method is what Estimates need to know besides the snapshot.
type Method struct {
	Points    []DrivingPoint // (q) one a force
	Estimator string         // H1, H2 or HV; empty is H1

	// NoiseForce (L,q), N²/Hz, and NoiseResponse (L,p), (m/s²)²/Hz, are densities of the measured noise,
	// by which HV is whitened; either both or none, and none leaves it unscaled, in N and m/s². Only
	// their ratios matter. Where a density is not above zero, infinite or NaN, H is NaN: of its line when
	// it is a force's, of its response there when it is a response's. A curve with lines of two kinds
	// in it, or a channel taken for free of noise because it read zero, would look real.
	NoiseForce, NoiseResponse []float64

	Level        float64 // 0 < Level < 1, probability of a confidence region; 0 is DefaultLevel
	Simultaneous bool    // it is to hold for all forces of a response at once

	// Averaging is how the snapshots were averaged. H2 needs all its Pairs of responses.
	Averaging spectra.Averaging
}

// MethodOf is what a rig file says of the method, without measured noise.
func MethodOf(r *rig.Rig) Method {
	return Method{
		Points:    DrivingPoints(r),
		Estimator: r.Analysis.Estimator,
		Averaging: AveragingOf(r),
	}
}

// checked is m with the defaults filled in. It panics when m does not go with shape.
func (m Method) checked(shape spectra.Shape) Method {
	l, p, q := shape.Lines, shape.Responses, shape.Forces
	if len(m.Points) != q {
		panic("estimate: one driving point a force, please")
	}
	if m.Estimator == "" {
		m.Estimator = H1
	}
	switch {
	case m.Estimator != H1 && m.Estimator != H2 && m.Estimator != HV:
		panic("estimate: no estimator is called " + m.Estimator)
	case m.Estimator == H2 && p != q:
		panic("estimate: h2 needs as many responses as forces")
	}
	if m.whitens() && (len(m.NoiseForce) != l*q || len(m.NoiseResponse) != l*p) {
		panic("estimate: noise densities have another shape")
	}
	if m.Level == 0 {
		m.Level = DefaultLevel
	}
	if !(m.Level > 0 && m.Level < 1) {
		panic("estimate: confidence level outside 0 to 1")
	}
	return m
}

// whitens tells whether noise was measured.
func (m Method) whitens() bool { return m.NoiseForce != nil || m.NoiseResponse != nil }
