package web

import (
	"fmt"

	"shakerwatch/acquire/rig"
)

// forcesPlot shows what the shakers put in.
func forcesPlot(forces []rig.Channel) plot {
	const unit = "dB"
	p := plot{
		ID:     "forces",
		Title:  "Force spectra",
		Help:   "Density of each force, and the principal forces: what independent forces could do the same. A last principal force far below the others means that in truth fewer forces act.",
		Axis:   overFrequency,
		Panes:  []pane{{Quantity: "dB re 1 N²/Hz", Least: leastDecibels, Sizes: &sizes{"N²/Hz", "N²/Hz", 10}}},
		common: forcesCommon,
	}
	for i := range forces {
		p.Curves = append(p.Curves, curve{
			From: "forces.principal", Index: i, Step: spectrumStep, Name: fmt.Sprintf("principal %d", i+1), Group: "principal forces", Role: shade("principal", i), Dash: solid, Weight: fine, Unit: unit, Keeps: extremes,
		})
	}
	for i, f := range forces {
		p.Curves = append(p.Curves, curve{
			From: "forces.spectrum", Index: i, Step: spectrumStep, Name: f.Name, Role: shade("force", i), Dash: solid, Unit: unit, Keeps: extremes,
		})
	}
	return p
}

func forcesCommon(c *curver, dst []byte, g grid) []byte {
	q := c.e.Forces
	dst = c.list(dst, "forces.spectrum", spectrumStep, q, g.extremes, func(i int) values { return inDecibels(at(c.spectra, q, i)) })
	return c.list(dst, "forces.principal", spectrumStep, q, g.extremes, func(i int) values { return inDecibels(at(c.e.PrincipalForces, q, i)) })
}
