package web

import (
	"encoding/json"

	"shakerwatch/acquire/rig"
	"shakerwatch/estimate"
)

// A plot is what a page needs to know of one plot before numbers come: its words, the chart's option
// and which curve each series of the option shows. It is read-only once made.
type plot struct {
	ID     string          `json:"id"`
	Title  string          `json:"title"`
	Help   string          `json:"help"`  // how to read it
	Needs  string          `json:"needs"` // why this rig cannot have it; else empty
	Axis   axis            `json:"axis"`
	Panes  []pane          `json:"panes"` // from top to bottom
	Curves []curve         `json:"curves"`
	Option json.RawMessage `json:"option"` // of ECharts, without data and colours; null when ECharts does not draw it

	common func(c *curver, dst []byte, g grid) []byte         // writes what all views on that grid share; nil without
	chosen func(c *curver, dst []byte, g grid, v view) []byte // writes what is the view's own; nil without
}

// An axis is what a plot's curves are plotted over.
type axis string

const (
	overFrequency axis = "frequency" // Hz
	overAverages  axis = "averages"
)

// A pane is one of the fields, one above the other, that share a plot's horizontal axis.
type pane struct {
	Quantity string  `json:"quantity"` // of the vertical axis, with its unit
	LogBase  float64 `json:"log_base"` // 0: the scale is linear
	Ends     *[2]int `json:"ends"`     // of the axis; null: as the data ask
	Tick     float64 `json:"tick"`     // from tick to tick; 0: as fits
	Least    float64 `json:"least"`    // the axis never spans less than that
	Sizes    *sizes  `json:"sizes"`    // how a pane in dB can show sizes instead; null: it cannot
}

// Sizes are what a pane in dB shows in place of dB.
type sizes struct {
	Quantity string  `json:"quantity"`
	Unit     string  `json:"unit"`
	Decade   float64 `json:"decade"` // dB for a factor of ten
}

// A curve is one series of a plot.
type curve struct {
	From   string  `json:"from"`  // name in the messages with numbers, see curver.go
	Index  int     `json:"index"` // in what stands there when that is a list of curves; else -1
	Step   float64 `json:"step"`  // what 1 stands for in the messages; 0: numbers are as they are
	Above  string  `json:"above"` // name of the curve above which this one fills a band; else empty
	Name   string  `json:"name"`  // empty: comes with the numbers
	Group  string  `json:"group"` // curves of a group share one place in the legend, by this name; else empty
	Role   string  `json:"role"`  // decides the colour
	Dash   dash    `json:"dash"`
	Unit   string  `json:"unit"`   // for readouts
	Weight stroke  `json:"weight"` // empty is normal
	Quiet  bool    `json:"quiet"`  // no line: an edge of a band
	Hidden bool    `json:"hidden"` // until it is asked for
	Floor  bool    `json:"floor"`  // what lies below the curve says nothing
	Keeps  extreme `json:"keeps"`  // of the lines of a point
	Pane   int     `json:"pane"`
}

// An extreme is what a curve keeps of several lines that one point stands for.
type extreme string

const (
	lowest   extreme = "lowest"
	highest  extreme = "highest"
	extremes extreme = "extremes" // both, in turns
)

// A dash tells curves apart where colours do not.
type dash string

const (
	solid  dash = "solid"
	dashed dash = "dashed"
	dotted dash = "dotted"
)

// A stroke is how heavy a curve's line is.
type stroke string

const (
	bold stroke = "bold"
	fine stroke = "fine"
)

// single is the index of a curve that is not one of a list.
const single = -1

// Steps of curves: finer than a pixel of the tallest plot, and than any reader asks.
const (
	coherenceStep = 1e-4
	decibelStep   = 0.01
	degreeStep    = 0.1
	// Nobody reads off the ends of a region what matters at its middle.
	endStep        = 0.05 // dB
	endDegreesStep = 1
	// Of spectra nobody reads more: their scatter is 4.3 dB over the root of the averages.
	spectrumStep = 0.05
	// Forces' coherence is read for how far it is from 0, not for how near to 1.
	forceCoherenceStep = 0.005
	// A scale of powers of ten, where few digits are enough.
	byDigits = 0
)

// leastDecibels keeps an axis from blowing up differences that mean nothing.
const leastDecibels = 10

// plots are all plots of a page, in its order: what comes first is looked at most.
func plots(r *rig.Rig, target estimate.Target, level float64) []plot {
	list := []plot{
		coherencePlot(len(r.Responses)),
		independencePlot(r.Forces),
		responsePlot(level),
		mapPlot(len(r.Responses)),
		forcesPlot(r.Forces),
		reciprocityPlot(len(estimate.ReciprocityPairs(estimate.DrivingPoints(r)))),
		convergencePlot(target),
	}
	if r.Analysis.Excitation == "periodic" {
		list = append(list, distortionPlot())
	}
	for i := range list {
		if len(list[i].Panes) > 0 {
			list[i].Option = list[i].option(r.Grid, target)
		}
	}
	return list
}

// partsOf are the names of the parts of messages that go with plots, and of the one that does not.
func partsOf(list []plot) []string {
	var names []string
	for _, p := range list {
		names = append(names, p.ID)
	}
	return append(names, ranking)
}
