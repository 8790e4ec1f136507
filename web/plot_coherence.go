package web

// coherencePlot shows how far the forces explain the responses. With hundreds of responses the worst
// and the tenth percentile tell where in frequency the trouble is, and the readout names the worst.
func coherencePlot(responses int) plot {
	p := plot{
		ID:    "coherence",
		Title: "Multiple coherence",
		Help:  "Share of each response's power that all forces together explain: 1 is all of it. Dips at resonances or in narrow bands point to leakage or to noise.",
		Axis:  overFrequency,
		Panes: []pane{{Quantity: "coherence, 0 to 1", min: 0, max: 1, step: 0.2}},
		Curves: []curve{
			{From: "coherence.worst", Index: single, Name: "worst of all", Role: "worst", Dash: solid, Weight: bold},
		},
	}
	if responses > 10 { // else it is the worst
		p.Curves = append(p.Curves, curve{From: "coherence.tenth", Index: single, Name: "tenth percentile of all", Role: "tenth", Dash: dashed})
	}
	for i := range maxShown {
		p.Curves = append(p.Curves, curve{From: "coherence.shown", Index: i, Role: shade("shown", i), Dash: solid})
	}
	return p
}
