package web

// reciprocityPlot shows the two frequency responses that should be one.
func reciprocityPlot(pairs int) plot {
	const unit = "dB"
	p := plot{
		ID:    "reciprocity",
		Title: "Reciprocity",
		Help:  "Two driving points, each one's response to the other's force: a linear structure makes them equal. A constant difference is a gain, a growing one a delay.",
		Axis:  overFrequency,
		Panes: []pane{
			{Quantity: "|H|, dB re 1 (m/s²)/N"},
			{Quantity: "error, % of the mean size", logBase: 10},
		},
		Curves: []curve{
			{From: "reciprocity.ab", Index: single, Role: "force-0", Dash: solid, Unit: unit},
			{From: "reciprocity.ba", Index: single, Role: "force-1", Dash: dashed, Unit: unit},
			{From: "reciprocity.error", Index: single, Name: "error", Role: "worst", Dash: solid, Unit: "%", pane: 1},
		},
	}
	if pairs == 0 {
		p.Needs = "This takes two forces that each have a driving-point response: a response at the same point along the same axis."
	}
	return p
}
