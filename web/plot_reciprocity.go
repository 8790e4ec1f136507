package web

import "math/cmplx"

// reciprocityPlot shows the two frequency responses that should be one.
func reciprocityPlot(pairs int) plot {
	const unit = "dB"
	p := plot{
		ID:    "reciprocity",
		Title: "Reciprocity",
		Help:  "Two driving points, each one's response to the other's force: a linear structure makes them equal. A constant difference is a gain, a growing one a delay.",
		Axis:  overFrequency,
		Panes: []pane{
			{Quantity: "|H|, dB re 1 (m/s²)/N", Least: leastDecibels, Sizes: &sizes{"|H|, (m/s²)/N", "(m/s²)/N", 20}},
			{Quantity: "error, % of the mean size", LogBase: 10},
		},
		Curves: []curve{
			{From: "reciprocity.ab", Index: single, Step: decibelStep, Role: "force-0", Dash: solid, Unit: unit, Keeps: extremes},
			{From: "reciprocity.ba", Index: single, Step: decibelStep, Role: "force-1", Dash: dashed, Unit: unit, Keeps: extremes},
			{From: "reciprocity.error", Index: single, Step: byDigits, Name: "error", Role: "worst", Dash: solid, Unit: "%", Keeps: highest, Pane: 1},
		},
		chosen: reciprocityChosen,
	}
	if pairs == 0 {
		p.Needs = "This takes two forces that each have a driving-point response: a response at the same point along the same axis."
	}
	return p
}

func reciprocityChosen(c *curver, dst []byte, g grid, v view) []byte {
	pairs := len(c.e.ReciprocityPairs)
	if pairs == 0 {
		return dst
	}
	dst = c.curve(dst, "reciprocity.ab", decibelStep, g.extremes, func(line int) float64 {
		ab, _ := c.e.Sides(line, v.pair)
		return decibels(cmplx.Abs(ab))
	})
	dst = c.curve(dst, "reciprocity.ba", decibelStep, g.extremes, func(line int) float64 {
		_, ba := c.e.Sides(line, v.pair)
		return decibels(cmplx.Abs(ba))
	})
	err := at(c.e.ReciprocityError, pairs, v.pair)
	return c.curve(dst, "reciprocity.error", byDigits, g.highest, func(line int) float64 { return 100 * err(line) })
}
