package web

// coherencePlot shows how far the forces explain the responses. With hundreds of responses the worst
// and the tenth percentile tell where in frequency the trouble is, and the readout names the worst.
func coherencePlot(responses int) plot {
	p := plot{
		ID:    "coherence",
		Title: "Multiple coherence",
		Help:  "Share of each response's power that all forces together explain: 1 is all of it. Dips at resonances or in narrow bands point to leakage or to noise. What stays in the field below the level of chance says nothing: 95 of 100 lines without any relation do. The partial coherence, shown when it is asked for in the legend, is that of the chosen frequency response, the other forces removed.",
		Axis:  overFrequency,
		Panes: []pane{{Quantity: "coherence, 0 to 1", Ends: &[2]int{0, 1}, Tick: 0.2}},
		Curves: []curve{
			{From: "coherence.worst", Index: single, Step: coherenceStep, Name: "worst of all", Role: "worst", Dash: solid, Weight: bold, Keeps: lowest},
		},
		common: coherenceCommon,
		chosen: coherenceChosen,
	}
	if responses > 10 { // else it is the worst
		p.Curves = append(p.Curves, curve{From: "coherence.tenth", Index: single, Step: coherenceStep, Name: "tenth percentile", Role: "tenth", Dash: dashed, Keeps: lowest})
	}
	for i := range maxShown {
		p.Curves = append(p.Curves, curve{From: "coherence.shown", Index: i, Step: coherenceStep, Role: shade("shown", i), Dash: solid, Keeps: lowest})
	}
	p.Curves = append(p.Curves,
		curve{From: "coherence.partial", Index: single, Step: coherenceStep, Role: "partial", Dash: dashed, Keeps: lowest, Hidden: true},
		curve{From: "coherence.chance", Index: single, Step: coherenceStep, Name: "chance", Role: "chance", Dash: dotted, Keeps: lowest, Floor: true},
	)
	return p
}

func coherenceCommon(c *curver, dst []byte, g grid) []byte {
	c.spread()
	dst = c.curve(dst, "coherence.worst", coherenceStep, g.lowest, at(c.worst, 1, 0))
	dst = append(appendInts(appendName(dst, "coherence.worst_of"), c.lines, c.worstOf), ',')
	dst = c.curve(dst, "coherence.tenth", coherenceStep, g.lowest, at(c.tenth, 1, 0))
	return c.there(dst, "coherence.chance", coherenceStep, func(int) float64 { return c.e.Chance.Multiple })
}

func coherenceChosen(c *curver, dst []byte, g grid, v view) []byte {
	dst = c.list(dst, "coherence.shown", coherenceStep, v.shownCount(), g.lowest, func(i int) values {
		return at(c.e.MultipleCoherence, c.e.Responses, v.shown[i])
	})
	partial := at(c.e.PartialCoherence, c.e.Responses*c.e.Forces, v.response*c.e.Forces+v.force)
	return c.curve(dst, "coherence.partial", coherenceStep, g.lowest, partial)
}
