package setup

import (
	"fmt"
	"math"

	"shakerwatch/estimate"
)

const (
	// polaritySuspect is the mean sign of the power flow below which it goes out of the structure over
	// most of the band. On simulated rigs a healthy driving point had +1.0 and a reversed one -1.0.
	polaritySuspect = -0.6

	// polarityMixed is what a healthy driving point does not go below, by the same figures.
	polarityMixed = -polaritySuspect

	// significantDeviations is how many standard deviations Im H has to be from 0 on a line that
	// counts: a sign that is wrong by chance on 1 line in 700.
	significantDeviations = 3

	// minSignificant is how few lines can be told from chance: all ten of one sign.
	minSignificant = 10
)

// powerFlows reports for each force whether power flows into the structure at its driving point:
// Im(s_a H_aa) >= 0 for accelerance at every frequency, since Re(mobility) >= 0 (terms of ISO
// 7626-1).
func powerFlows(c *check) []Finding {
	if !c.measured(Low) {
		return nil
	}
	points := drivingPoints(c)
	e := estimate.New(estimate.ShapeOf(c.rig), estimate.Method{Points: points})
	e.Update(c.snapshot(Low))
	var found []Finding
	for i, point := range points {
		switch q := len(c.rig.Forces); {
		case !c.usable(i, Low):
		case point.Response < 0:
			found = append(found, Finding{
				Stage: Low, Number: unknown, channels: []int{i},
				Text: "power flow unknown, as no response is measured at its driving point: add one to check polarity and reciprocity",
			})
		case c.usable(q+point.Response, Low):
			found = append(found, c.polarity(e, i, point))
		}
	}
	return found
}

func drivingPoints(c *check) []estimate.DrivingPoint {
	points := make([]estimate.DrivingPoint, len(c.rig.Forces))
	for i, response := range c.rig.DrivingPoints() {
		points[i] = estimate.DrivingPoint{Response: response, Sign: c.rig.DrivingSign(i)}
	}
	return points
}

func (c *check) polarity(e *estimate.Estimates, force int, point estimate.DrivingPoint) Finding {
	f := Finding{Stage: Low, channels: []int{force, e.Forces + point.Response}}
	mean, lines := c.powerFlow(e, force, point)
	f.Number = estimate.Number(mean)
	f.Text = fmt.Sprintf("mean sign of the power flow %+.2f over %d lines", mean, lines)
	switch {
	case lines < minSignificant:
		f.Severity, f.Number = Look, unknown
		f.Text = fmt.Sprintf("sign of the power flow unknown, as it is beyond chance on %d lines only: measure for longer or drive a little more", lines)
	case mean < polaritySuspect:
		f.Severity, f.Kind = Stop, PolaritySuspect
		f.Text += ", out of the structure: look which way cell and sensor face, at the sign of their sensitivities, and at both axes in the rig file; a skew in time between them looks alike"
	case mean < polarityMixed:
		f.Severity = Look
		f.Text += ", neither in nor out: look whether cell and sensor are at the same place and in line, and on the channels that the rig file names"
	}
	return f
}

// powerFlow is the mean sign of Im(s_a H_aa) over the lines on which it is significant, and how many
// those are. Half of the complex variance of H lies along Im, so its deviation is |H| times the
// relative error of |H|.
func (c *check) powerFlow(e *estimate.Estimates, force int, point estimate.DrivingPoint) (mean float64, lines int) {
	sum := 0.0
	for k := c.first; k <= c.last; k++ {
		at := (k*e.Responses+point.Response)*e.Forces + force
		h := e.H[at]
		flow := point.Sign * imag(h)
		deviation := math.Hypot(real(h), imag(h)) * e.RandomError[at]
		if math.Abs(flow) > significantDeviations*deviation {
			sum += math.Copysign(1, flow)
			lines++
		}
	}
	return sum / float64(lines), lines
}
