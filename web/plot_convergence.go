package web

import (
	"fmt"

	"shakerwatch/estimate"
)

// convergencePlot shows how the worst random error falls towards the target. Its curves are not of the
// estimates: results.go writes them.
func convergencePlot(target estimate.Target) plot {
	return plot{
		ID:    "convergence",
		Title: "Convergence",
		Help:  "Random error of the frequency response that is furthest from the target, against the blocks averaged. The projection assumes that nothing changes.",
		Axis:  overAverages,
		Panes: []pane{{Quantity: "random error of |H|, %, over blocks averaged", LogBase: 2}},
		Curves: []curve{
			{From: "convergence.error", Index: single, Name: "worst frequency response", Role: "main", Dash: solid, Unit: "%", Weight: bold, Keeps: highest},
			{From: "convergence.projection", Index: single, Name: "projection", Role: "main", Dash: dotted, Unit: "%", Keeps: highest},
			{From: "convergence.target", Index: single, Name: fmt.Sprintf("target %.3g %%", 100*target.RandomError), Role: "target", Dash: dashed, Unit: "%", Keeps: highest},
		},
	}
}
