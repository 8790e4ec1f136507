package web

// distortionPlot shows, for periodic excitation, how much of the chosen response is noise and how much
// nonlinear distortion.
func distortionPlot() plot {
	const unit = "dB"
	return plot{
		ID:    "distortion",
		Title: "Noise and distortion",
		Help:  "The chosen response and force, and what of them scatters. Noise differs from period to period of one random block; distortion differs only from block to block: the structure is not linear, or had not settled. Distortion below the level of chance is none that this measurement can see.",
		Axis:  overFrequency,
		Panes: []pane{
			{Quantity: "response, dB re 1 (m/s²)²/Hz", Least: leastDecibels, Sizes: &sizes{"response, (m/s²)²/Hz", "(m/s²)²/Hz", 10}},
			{Quantity: "force, dB re 1 N²/Hz", Least: leastDecibels, Sizes: &sizes{"force, N²/Hz", "N²/Hz", 10}},
		},
		Curves: []curve{
			{From: "distortion.response", Index: single, Step: spectrumStep, Role: "main", Dash: solid, Unit: unit, Keeps: extremes},
			{From: "distortion.noise", Index: single, Step: spectrumStep, Name: "noise of a period", Role: "tenth", Dash: dashed, Unit: unit, Keeps: highest},
			{From: "distortion.level", Index: single, Step: spectrumStep, Name: "distortion", Role: "worst", Dash: solid, Weight: bold, Unit: unit, Keeps: highest},
			{From: "distortion.chance", Index: single, Step: spectrumStep, Name: "chance", Role: "chance", Dash: dotted, Unit: unit, Keeps: highest},
			{From: "distortion.force", Index: single, Step: spectrumStep, Role: "force-1", Dash: solid, Unit: unit, Keeps: extremes, Pane: 1},
			{From: "distortion.force_noise", Index: single, Step: spectrumStep, Name: "noise of a period, force", Role: "tenth", Dash: dashed, Unit: unit, Keeps: highest, Pane: 1},
		},
		chosen: distortionChosen,
	}
}

func distortionChosen(c *curver, dst []byte, g grid, v view) []byte {
	p, q, d := c.e.Responses, c.e.Forces, c.scatter.distortion
	dst = c.curve(dst, "distortion.response", spectrumStep, g.extremes, inDecibels(at(c.scatter.gyy, p, v.response)))
	dst = c.curve(dst, "distortion.noise", spectrumStep, g.highest, inDecibels(at(d.NoiseResponse, p, v.response)))
	dst = c.curve(dst, "distortion.level", spectrumStep, g.highest, inDecibels(at(d.DistortionResponse, p, v.response)))
	dst = c.curve(dst, "distortion.chance", spectrumStep, g.highest, inDecibels(at(d.Chance, p, v.response)))
	dst = c.curve(dst, "distortion.force", spectrumStep, g.extremes, inDecibels(at(c.spectra, q, v.force)))
	return c.curve(dst, "distortion.force_noise", spectrumStep, g.highest, inDecibels(at(d.NoiseForce, q, v.force)))
}
