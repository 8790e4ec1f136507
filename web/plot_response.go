package web

import (
	"fmt"
	"math"
	"math/cmplx"

	"shakerwatch/estimate"
)

// responsePlot shows the chosen frequency response with the region in which it lies with a probability of
// level.
func responsePlot(level float64) plot {
	const unit = "dB"
	region := fmt.Sprintf("%.3g %% confidence", 100*level)
	return plot{
		ID:    "response",
		Title: "Frequency response",
		Help:  fmt.Sprintf("Size and phase of the chosen frequency response. The band holds the truth with a probability of %.3g %% as far as the random error goes; bias, such as leakage, is not in it.", 100*level),
		Axis:  overFrequency,
		Panes: []pane{
			{Quantity: "|H|, dB re 1 (m/s²)/N", Least: leastDecibels, Sizes: &sizes{"|H|, (m/s²)/N", "(m/s²)/N", 20}},
			{Quantity: "phase, degrees", Ends: &[2]int{-180, 180}, Tick: 90},
		},
		Curves: []curve{
			{From: "response.low", Index: single, Step: endStep, Name: "lower end of the region", Group: region, Role: "band", Dash: solid, Unit: unit, Quiet: true, Keeps: extremes},
			{From: "response.high", Index: single, Step: endStep, Above: "response.low", Name: "upper end of the region", Group: region, Role: "band", Dash: solid, Unit: unit, Quiet: true, Keeps: extremes},
			{From: "response.phase_low", Index: single, Step: endDegreesStep, Name: "lower end of the region, phase", Group: region, Role: "band", Dash: solid, Unit: "°", Quiet: true, Keeps: extremes, Pane: 1},
			{From: "response.phase_high", Index: single, Step: endDegreesStep, Above: "response.phase_low", Name: "upper end of the region, phase", Group: region, Role: "band", Dash: solid, Unit: "°", Quiet: true, Keeps: extremes, Pane: 1},
			{From: "response.size", Index: single, Step: decibelStep, Role: "main", Dash: solid, Unit: unit, Keeps: extremes},
			{From: "response.phase", Index: single, Step: degreeStep, Name: "phase", Role: "main", Dash: solid, Unit: "°", Keeps: extremes, Pane: 1},
		},
		chosen: responseChosen,
	}
}

// lowestShare is where the band's lower edge ends when the region reaches down to nothing:
// 20 dB below, where nobody takes the size for known.
const lowestShare = 0.1

// responseChosen writes size, phase and band of one frequency response. Where lines are thinned, all
// are those of the lines whose size is smallest or largest, so that they belong together.
func responseChosen(c *curver, dst []byte, g grid, v view) []byte {
	stride := c.e.Responses * c.e.Forces
	n := v.response*c.e.Forces + v.force
	h := func(line int) complex128 { return c.e.H[line*stride+n] }
	size := func(line int) float64 { return cmplx.Abs(h(line)) }
	radius := at(c.e.ConfidenceRadius, stride, n)

	dst = c.curve(dst, "response.size", decibelStep, g.extremes, func(line int) float64 { return decibels(size(line)) })
	dst = c.there(dst, "response.phase", degreeStep, func(line int) float64 { return degrees(h(line)) })
	dst = c.there(dst, "response.low", endStep, func(line int) float64 {
		low, _ := estimate.MagnitudeBandDB(h(line), radius(line))
		if low < decibels(size(line)*lowestShare) {
			low = decibels(size(line) * lowestShare)
		}
		return low
	})
	dst = c.there(dst, "response.high", endStep, func(line int) float64 {
		_, high := estimate.MagnitudeBandDB(h(line), radius(line))
		return high
	})
	dst = c.there(dst, "response.phase_low", endDegreesStep, func(line int) float64 {
		low, _ := phaseBand(h(line), radius(line))
		return low
	})
	return c.there(dst, "response.phase_high", endDegreesStep, func(line int) float64 {
		_, high := phaseBand(h(line), radius(line))
		return high
	})
}

// phaseBand is the range of the phase as it can be drawn from -180 to 180 degrees: a region across the
// half turn is cut there, and one that holds zero is the whole turn.
func phaseBand(h complex128, radius float64) (low, high float64) {
	low, high = estimate.PhaseBandDegrees(h, radius)
	if high-low >= 360 {
		return -180, 180
	}
	return max(low, -180), min(high, 180)
}

// degrees is the phase of h, from -180 to 180, NaN where h is 0.
func degrees(h complex128) float64 {
	if h == 0 {
		return math.NaN()
	}
	return cmplx.Phase(h) * 180 / math.Pi
}
