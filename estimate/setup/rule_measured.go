package setup

import (
	"fmt"

	"shakerwatch/estimate"
)

// notMeasured names the stages that are missing where a later one is compared with them.
func notMeasured(c *check) []Finding {
	var found []Finding
	missing := func(s, later Stage, what string) {
		if c.by[s] != nil || c.by[later] == nil {
			return
		}
		found = append(found, Finding{
			Stage: s, Severity: Info, Number: unknown,
			Text: fmt.Sprintf("nothing was measured with the %s, so %s unknown: measure that stage too", s.Name(), what),
		})
	}
	missing(Muted, Idle, "what the amplifiers add to the noise is")
	missing(Idle, Low, "signal-to-noise and forces without drive are")
	return found
}

// tooShort names the stages in which fewer blocks were averaged than the estimates need to be judged.
func tooShort(c *check) []Finding {
	need := estimate.SettlingAverages(len(c.rig.Forces))
	var found []Finding
	for _, s := range Stages() {
		if c.by[s] == nil || c.by[s].Snapshot == nil {
			continue
		}
		f := Finding{Stage: s, Severity: Look, Unit: "averages", Number: estimate.Number(c.by[s].Snapshot.Averages)}
		switch averages := c.by[s].Snapshot.Averages; {
		case averages == 0:
			f.Text = fmt.Sprintf("no block was averaged with the %s, so its densities are unknown: measure it again, "+
				"after mending what is lost or at its limit", s.Name())
		case averages < need:
			f.Text = fmt.Sprintf("%d averages with the %s, %d are needed to judge by: measure it again for longer", averages, s.Name(), need)
		default:
			continue
		}
		found = append(found, f)
	}
	return found
}
