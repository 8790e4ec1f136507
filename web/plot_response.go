package web

// responsePlot shows the chosen frequency response.
func responsePlot() plot {
	const unit, deviation = "dB", "± one standard deviation"
	return plot{
		ID:    "response",
		Title: "Frequency response",
		Help:  "Size and phase of the chosen frequency response. The band is one standard deviation of the random error to either side; bias, such as leakage, is not in it.",
		Axis:  overFrequency,
		Panes: []pane{
			{Quantity: "|H|, dB re 1 (m/s²)/N"},
			{Quantity: "phase, degrees", min: -180, max: 180, step: 90},
		},
		Curves: []curve{
			{From: "response.low", Index: single, Name: "one standard deviation less", Group: deviation, Role: "band", Dash: solid, Unit: unit, Quiet: true},
			{From: "response.high", Index: single, Above: "response.low", Name: "one standard deviation more", Group: deviation, Role: "band", Dash: solid, Unit: unit, Quiet: true},
			{From: "response.size", Index: single, Role: "main", Dash: solid, Unit: unit},
			{From: "response.phase", Index: single, Name: "phase", Role: "main", Dash: solid, Unit: "°", pane: 1},
		},
	}
}
