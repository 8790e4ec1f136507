package web

import (
	"slices"
	"strings"
	"testing"
)

// What is not in view does not travel, and what is in view travels whole.
func TestRefreshHasThePartsThatAreShown(t *testing.T) {
	f := newFeed(t, 2, 12, 101)
	h := NewHub(Run{Rig: f.rig, Kind: "demo"})
	f.add(10)
	f.refresh(h)
	all := h.refreshFor(t, h.first)
	for _, part := range h.shape.parts {
		v := h.first
		var err error
		if v.parts, err = h.shape.choose([]string{part}); err != nil {
			t.Fatal(err)
		}
		m := h.refreshFor(t, v)
		if !slices.Equal(m.View.Parts, []string{part}) {
			t.Errorf("%s was asked for, %v came", part, m.View.Parts)
		}
		for name := range all.Curves {
			_, sent := m.Curves[name]
			if wanted := strings.HasPrefix(name, part+"."); wanted != sent {
				t.Errorf("of a page that shows %s: %s sent: %v", part, name, sent)
			}
			if sent && string(m.Curves[name]) != string(all.Curves[name]) {
				t.Errorf("%s differs when other parts are not sent", name)
			}
		}
		if len(m.Curves) == 0 {
			t.Errorf("%s has no curves", part)
		}
	}
	v := h.first
	v.parts = 0
	if m := h.refreshFor(t, v); len(m.Curves) != 0 || m.Status.Averaged != 10 {
		t.Errorf("a page that shows no plot got %d curves and %d averages", len(m.Curves), m.Status.Averaged)
	}
}

// A message must not grow with the rig: a page on a slow link looks at any.
func TestRefreshIsSmall(t *testing.T) {
	const most = 100_000
	for _, size := range []struct{ q, p, lines int }{{2, 14, 1601}, {8, 504, 801}, {16, 64, 3201}} {
		f := newFeed(t, size.q, size.p, size.lines)
		h := NewHub(Run{Rig: f.rig, Kind: "demo"})
		f.add(size.q + 3)
		st, e := f.refresh(h)
		for n := range 2 * historySize { // a long convergence
			e.Averages = size.q + 3 + n
			h.Refresh(st, e)
		}
		v := h.first
		v.shown = shown(0, 1, 2)
		for _, log := range []bool{false, true} {
			v.log = log
			if text, _ := h.results.message(v); len(text) > most {
				t.Errorf("%d forces, %d responses, %d lines: %d bytes, want at most %d", size.q, size.p, size.lines, len(text), most)
			}
		}
	}
}

// On a scale of ratios the view begins above 0 Hz, and low lines have points of their own.
func TestRefreshByRatio(t *testing.T) {
	f := newFeed(t, 1, 2, 2401)
	h := NewHub(Run{Rig: f.rig, Kind: "demo"})
	f.add(10)
	_, e := f.refresh(h)
	v := h.first
	v.log, v.points = true, 200
	m := h.refreshFor(t, v)
	if m.View.First != 1 || m.View.Last != 2400 || !m.View.Log || m.View.Runs[0][1] != 1 || m.points() > 200 {
		t.Errorf("lines %d to %d, points %v", m.View.First, m.View.Last, m.View.Runs)
	}
	if got, want := *m.curve(t, "independence.condition")[0], e.ForceCondition[1]; got != want {
		t.Errorf("the first point shows %g, line 1 has %g", got, want)
	}
	v.first, v.last = 0, 0 // nothing but 0 Hz has no such scale
	if m := h.refreshFor(t, v); m.View.Log || m.points() != 1 {
		t.Errorf("%+v", m.View)
	}
}
