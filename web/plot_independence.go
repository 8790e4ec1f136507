package web

import "shakerwatch/acquire/rig"

// independencePlot shows whether the forces can be told apart.
func independencePlot(forces []rig.Channel) plot {
	p := plot{
		ID:    "independence",
		Title: "Independence of the forces",
		Help:  "Coherence of each force with all the others: 0 is independent; in the field below the level of chance nothing can be said. The condition number says what correlation costs: 1 is nothing; the raw one counts unequal levels too.",
		Axis:  overFrequency,
		Panes: []pane{
			{Quantity: "force coherence, 0 to 1", Ends: &[2]int{0, 1}, Tick: 0.5},
			{Quantity: "condition number", LogBase: 10},
		},
		common: independenceCommon,
	}
	if len(forces) == 1 {
		p.Needs = "With one force there is nothing that it could depend on."
	}
	for i, f := range forces {
		p.Curves = append(p.Curves, curve{
			From: "independence.force", Index: i, Step: forceCoherenceStep, Name: f.Name, Role: shade("force", i), Dash: solid, Keeps: highest,
		})
	}
	p.Curves = append(p.Curves,
		curve{From: "independence.chance", Index: single, Step: coherenceStep, Name: "chance", Role: "chance", Dash: dotted, Keeps: highest, Floor: true},
		curve{From: "independence.condition", Index: single, Step: byDigits, Name: "condition", Role: "worst", Dash: solid, Keeps: highest, Pane: 1},
		curve{From: "independence.raw", Index: single, Step: byDigits, Name: "raw condition", Role: "tenth", Dash: dashed, Keeps: highest, Pane: 1},
	)
	return p
}

func independenceCommon(c *curver, dst []byte, g grid) []byte {
	e := c.e
	dst = c.curve(dst, "independence.condition", byDigits, g.highest, at(e.ForceCondition, 1, 0))
	dst = c.there(dst, "independence.chance", coherenceStep, func(int) float64 { return e.Chance.Force })
	dst = c.curve(dst, "independence.raw", byDigits, g.highest, at(e.ForceConditionRaw, 1, 0))
	return c.list(dst, "independence.force", forceCoherenceStep, e.Forces, g.highest, func(i int) values { return at(e.ForceCoherence, e.Forces, i) })
}
