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
	Option json.RawMessage `json:"option"` // of ECharts, without data and colours
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
	logBase  float64 // 0: the scale is linear
	min, max any     // nil: as the data ask
	step     float64 // from tick to tick; 0: as fits
}

// A curve is one series of a plot.
type curve struct {
	From   string `json:"from"`  // name in the messages with numbers, see curver.go
	Index  int    `json:"index"` // in what stands there when that is a list of curves; else -1
	Above  string `json:"above"` // name of the curve above which this one fills a band; else empty
	Name   string `json:"name"`  // empty: comes with the numbers
	Group  string `json:"group"` // curves of a group share one place in the legend, by this name; else empty
	Role   string `json:"role"`  // decides the colour
	Dash   dash   `json:"dash"`
	Unit   string `json:"unit"`   // for readouts
	Weight stroke `json:"weight"` // empty is normal
	Quiet  bool   `json:"quiet"`  // no line: an edge of a band
	pane   int
}

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

// plots are all plots of a page, in its order.
func plots(r *rig.Rig, target estimate.Target) []plot {
	list := []plot{
		coherencePlot(len(r.Responses)),
		independencePlot(r.Forces),
		responsePlot(),
		forcesPlot(r.Forces),
		reciprocityPlot(len(estimate.ReciprocityPairs(estimate.DrivingPoints(r)))),
		convergencePlot(target),
	}
	for i := range list {
		list[i].Option = list[i].option(r.Grid, target)
	}
	return list
}
