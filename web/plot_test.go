package web

import (
	"encoding/json"
	"strings"
	"testing"

	"shakerwatch/estimate"
)

// An option as far as the tests ask.
type readOption struct {
	Animation *bool
	Legend    struct{ Show *bool }
	XAxis     []struct {
		Type      string
		Min, Max  *float64
		GridIndex int
	}
	YAxis []struct {
		Type    string
		Name    string
		LogBase float64
	}
	Grid   []any
	Series []struct {
		Type                   string
		XAxisIndex, YAxisIndex int
		ConnectNulls           *bool
		Stack, StackStrategy   string
		MarkArea               *struct {
			Data [][]struct{ XAxis float64 }
		}
	}
}

func TestPlotOptions(t *testing.T) {
	for _, q := range []int{1, 2, 8} {
		r := madeRig(t, q, 12, 801)
		target := estimate.NewTarget(r)
		for _, p := range plots(r, target, 0.9) {
			if p.ID == "map" {
				continue // the page draws it without ECharts
			}
			t.Run(p.ID, func(t *testing.T) {
				var o readOption
				if err := json.Unmarshal(p.Option, &o); err != nil {
					t.Fatal(err)
				}
				checkOption(t, p, o)
				for _, c := range p.Curves {
					if c.Pane >= len(p.Panes) || c.Role == "" || c.From == "" || c.Keeps == "" {
						t.Errorf("curve %+v", c)
					}
					if sizes := p.Panes[c.Pane].Sizes; (c.Unit == "dB") != (sizes != nil) {
						t.Errorf("curve %+v stands in a pane with sizes %+v", c, sizes)
					}
				}
				if p.Axis != overFrequency {
					return
				}
				shaded := 0
				for _, s := range o.Series {
					if s.MarkArea != nil {
						shaded++
						if hz := s.MarkArea.Data[0][1].XAxis; hz != 9.6875 { // half a line of 0.625 Hz below 10 Hz
							t.Errorf("shaded up to %g Hz", hz)
						}
					}
				}
				if shaded != len(p.Panes) {
					t.Errorf("%d of %d panes say what is not judged", shaded, len(p.Panes))
				}
			})
		}
	}
}

func checkOption(t *testing.T, p plot, o readOption) {
	t.Helper()
	if o.Animation == nil || *o.Animation {
		t.Error("the plot is animated")
	}
	if o.Legend.Show == nil || *o.Legend.Show {
		t.Error("the plot has a legend besides the page's")
	}
	if len(o.XAxis) != len(p.Panes) || len(o.YAxis) != len(p.Panes) || len(o.Grid) != len(p.Panes) || len(o.Series) != len(p.Curves) {
		t.Fatalf("%d and %d axes, %d grids, %d series for %d panes and %d curves", len(o.XAxis), len(o.YAxis), len(o.Grid), len(o.Series), len(p.Panes), len(p.Curves))
	}
	for i, pn := range p.Panes {
		if o.YAxis[i].Name == "" || o.YAxis[i].Name != pn.Quantity || o.XAxis[i].GridIndex != i || o.YAxis[i].LogBase != pn.LogBase {
			t.Errorf("pane %d: %+v, %+v", i, o.XAxis[i], o.YAxis[i])
		}
		if p.Axis == overFrequency && (*o.XAxis[i].Min != 0 || *o.XAxis[i].Max != 500) {
			t.Errorf("pane %d reaches from %g to %g Hz", i, *o.XAxis[i].Min, *o.XAxis[i].Max)
		}
	}
	for i, c := range p.Curves {
		s := o.Series[i]
		if s.Type != "line" || s.XAxisIndex != c.Pane || s.YAxisIndex != c.Pane || s.ConnectNulls == nil || *s.ConnectNulls {
			t.Errorf("series %d: %+v", i, s)
		}
		if c.Quiet != (s.StackStrategy == "all") {
			t.Errorf("series %d: stacked by %q", i, s.StackStrategy)
		}
		for j, other := range p.Curves[:i] {
			if s.Stack != "" && o.Series[j].Stack == s.Stack && other.Pane != c.Pane {
				t.Errorf("series %d of pane %d is piled onto series %d of pane %d", i, c.Pane, j, other.Pane)
			}
		}
	}
}

func TestPlotsNeedWhatTheRigLacks(t *testing.T) {
	r := madeRig(t, 1, 3, 101)
	for _, p := range plots(r, estimate.NewTarget(r), 0.9) {
		lacking := p.ID == "independence" || p.ID == "reciprocity"
		if lacking != (p.Needs != "") {
			t.Errorf("%s with one force needs %q", p.ID, p.Needs)
		}
	}
}

// The chart library of the options has a public host as its default for scripts.
func TestNoPlotNamesAHost(t *testing.T) {
	r := madeRig(t, 3, 12, 101)
	text, err := json.Marshal(describe(Run{Rig: r, Kind: "demo", Saves: true, Level: 0.9}, "run", estimate.ReciprocityPairs(estimate.DrivingPoints(r))))
	if err != nil {
		t.Fatal(err)
	}
	if at := strings.Index(string(text), "//"); at >= 0 {
		t.Errorf("a host is named: %.80s", text[at:])
	}
}
