package web

import "shakerwatch/acquire/rig"

// independencePlot shows whether the forces can be told apart.
func independencePlot(forces []rig.Channel) plot {
	p := plot{
		ID:    "independence",
		Title: "Independence of the forces",
		Help:  "Coherence of each force with all the others: 0 is independent. The condition number says what correlation costs: 1 is nothing; the raw one counts unequal levels too.",
		Axis:  overFrequency,
		Panes: []pane{
			{Quantity: "force coherence, 0 to 1", min: 0, max: 1, step: 0.5},
			{Quantity: "condition number", logBase: 10},
		},
	}
	if len(forces) == 1 {
		p.Needs = "With one force there is nothing that it could depend on."
	}
	for i, f := range forces {
		p.Curves = append(p.Curves, curve{
			From: "independence.force", Index: i, Name: f.Name, Role: shade("force", i), Dash: solid,
		})
	}
	p.Curves = append(p.Curves,
		curve{From: "independence.condition", Index: single, Name: "condition", Role: "worst", Dash: solid, pane: 1},
		curve{From: "independence.raw", Index: single, Name: "condition, raw levels", Role: "tenth", Dash: dashed, pane: 1},
	)
	return p
}
