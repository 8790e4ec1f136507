package monitor

import (
	"shakerwatch/estimate"
	"shakerwatch/spectra"
)

// A judge turns views into verdicts, with everything that they go by.
type judge struct {
	config     Config
	target     estimate.Target
	progress   estimate.Progress
	drift      *estimate.Drift
	resonances *estimate.Resonances
	distortion *estimate.Distortion // nil but with periodic excitation
}

func newJudge(c Config) *judge {
	shape, a := estimate.ShapeOf(c.Rig), c.Rig.Analysis
	j := &judge{
		config:     c,
		target:     estimate.NewTarget(c.Rig),
		drift:      estimate.NewDrift(shape),
		resonances: estimate.NewResonances(shape, spectra.Window(a.Window), a.Excitation == "random"),
	}
	if a.Excitation == "periodic" {
		j.distortion = estimate.NewDistortion(shape)
	}
	return j
}

// newEstimates makes estimates as the run wants them.
func newEstimates(c Config) *estimate.Estimates {
	m := estimate.MethodOf(c.Rig)
	m.Level, m.Simultaneous = c.Confidence, c.Simultaneous
	if m.Estimator == estimate.HV && c.Noise != nil {
		m.NoiseForce, m.NoiseResponse = c.Noise.Force, c.Noise.Response
	}
	return estimate.New(estimate.ShapeOf(c.Rig), m)
}

// verdict fills e with the estimates of v, and j with what else is found in them, and judges them.
func (j *judge) verdict(v *view, e *estimate.Estimates) estimate.Verdict {
	e.Update(v.snapshot)
	j.progress.Update(e, j.target)
	j.drift.Update(v.snapshot, e, j.target)
	j.resonances.Update(e, j.target)
	if j.distortion != nil {
		j.distortion.Update(v.snapshot, e)
	}
	found := &estimate.Findings{Standing: v.standing, Fault: v.fault, Drift: j.drift, Resonances: j.resonances}
	return estimate.Judge(e, &j.progress, j.target, found, func(n int) string { return frfName(j.config.Rig, n) })
}
