package web

import (
	"encoding/json"
	"fmt"

	"github.com/go-echarts/go-echarts/v2/charts"
	"github.com/go-echarts/go-echarts/v2/opts"

	"shakerwatch/acquire/rig"
	"shakerwatch/estimate"
)

// option is the plot's option for ECharts as JSON. The page adds data, names, colours, and what goes by
// the size of its type.
func (p *plot) option(g rig.Grid, target estimate.Target) json.RawMessage {
	line := charts.NewLine()
	line.XAxisList, line.YAxisList = nil, nil
	for i, pn := range p.Panes {
		line.ExtendXAxis(p.xAxis(i, g))
		line.ExtendYAxis(pn.yAxis(i))
	}
	for _, c := range p.Curves {
		line.AddSeries(c.Name, nil, c.style)
	}
	if p.Axis == overFrequency {
		p.shadeUnjudged(line, (float64(target.First)-0.5)*g.SpacingHz)
	}
	line.SetGlobalOptions(
		charts.WithAnimation(false),
		charts.WithLegendOpts(opts.Legend{Show: opts.Bool(false)}), // the page has its own
		charts.WithTooltipOpts(opts.Tooltip{Show: opts.Bool(true), Trigger: "axis"}),
		charts.WithGridOpts(make([]opts.Grid, len(p.Panes))...),
		charts.WithAxisPointerOpts(&opts.AxisPointer{Link: []opts.AxisPointerLink{{XAxisIndex: indices(len(p.Panes))}}}),
	)
	return p.complete(line.JSON())
}

func (p *plot) xAxis(i int, g rig.Grid) opts.XAxis {
	lowest := i == len(p.Panes)-1
	label := opts.AxisLabel{Show: opts.Bool(lowest), HideOverlap: opts.Bool(true), AlignMaxLabel: "right"}
	x := opts.XAxis{GridIndex: i, AxisLabel: &label}
	switch p.Axis {
	case overFrequency:
		if lowest {
			x.Name = "Hz"
		}
		x.Type, x.Min, x.Max = "value", 0, float64(g.Lines-1)*g.SpacingHz
	case overAverages:
		// Doublings are equally far apart: then the error's law is a straight line.
		x.Type = "log"
	}
	return x
}

func (pn pane) yAxis(i int) opts.YAxis {
	y := opts.YAxis{
		GridIndex: i, Type: "value", Name: pn.Quantity, NameLocation: "end",
		Scale: opts.Bool(true), SplitNumber: 4, MinInterval: pn.Tick, MaxInterval: pn.Tick,
	}
	if pn.Ends != nil {
		y.Min, y.Max = pn.Ends[0], pn.Ends[1]
	}
	if pn.LogBase > 0 {
		y.Type = "log"
	}
	return y
}

// Line widths in CSS pixels: fine enough for 1000 points, and plain to see from some way off.
const (
	fineWidth   = 1
	normalWidth = 1.5
	boldWidth   = 2.5
)

func (c curve) style(s *charts.SingleSeries) {
	s.XAxisIndex, s.YAxisIndex = c.Pane, c.Pane
	s.ShowSymbol, s.ConnectNulls = opts.Bool(false), opts.Bool(false)
	s.LineStyle = &opts.LineStyle{Width: normalWidth, Type: string(c.Dash)}
	switch c.Weight {
	case bold:
		s.LineStyle.Width = boldWidth
	case fine:
		s.LineStyle.Width = fineWidth
	}
	if c.Quiet {
		s.LineStyle.Opacity = opts.Float(0)
		s.Stack = fmt.Sprintf("band %d", c.Pane) // else the bands of all panes are one pile
	}
}

// shadeUnjudged shades, in each pane, the lines below topHz, which are computed and never judged.
func (p *plot) shadeUnjudged(line *charts.Line, topHz float64) {
	shaded := map[int]bool{}
	for i, c := range p.Curves {
		if !shaded[c.Pane] {
			shaded[c.Pane] = true
			line.MultiSeries[i].MarkAreas = &opts.MarkAreas{Data: []any{
				[]any{map[string]any{"xAxis": 0}, map[string]any{"xAxis": topHz}},
			}}
		}
	}
}

func indices(n int) []int {
	list := make([]int, n)
	for i := range list {
		list[i] = i
	}
	return list
}

// complete adds what go-echarts has no words for and returns the option as JSON.
func (p *plot) complete(option map[string]any) json.RawMessage {
	tree := struct {
		XAxis  []map[string]any `json:"xAxis"`
		YAxis  []map[string]any `json:"yAxis"`
		Series []map[string]any `json:"series"`
	}{}
	p.convert(&tree, option)
	for i, pn := range p.Panes {
		if pn.LogBase > 0 {
			tree.YAxis[i]["logBase"] = pn.LogBase
		}
		if p.Axis == overAverages {
			tree.XAxis[i]["logBase"] = 2
		}
	}
	for i, c := range p.Curves {
		if c.Quiet {
			tree.Series[i]["stackStrategy"] = "all" // else values of unlike sign are not stacked
		}
	}
	option["xAxis"], option["yAxis"], option["series"] = tree.XAxis, tree.YAxis, tree.Series
	text, err := json.Marshal(option)
	if err != nil {
		panic(fmt.Sprintf("web: option of plot %s: %v", p.ID, err))
	}
	return text
}

// convert turns parts of option into what json makes of them.
func (p *plot) convert(dst any, option map[string]any) {
	text, err := json.Marshal(option)
	if err == nil {
		err = json.Unmarshal(text, dst)
	}
	if err != nil {
		panic(fmt.Sprintf("web: option of plot %s: %v", p.ID, err))
	}
}
