package web

import (
	"math"
	"testing"
)

func TestAppendSteps(t *testing.T) {
	nan := math.NaN()
	tests := []struct {
		name   string
		step   float64
		values []float64
		want   string
	}{
		{"hundredths", 0.01, []float64{-23.456, 0, 7}, "[-2346,0,700]"},
		{"unknown", 0.5, []float64{1, nan, math.Inf(-1)}, "[2,null,null]"},
		{"the same everywhere", 0.1, []float64{0.52, 0.48, 0.5}, "5"},
		{"unknown everywhere", 0.1, []float64{nan, nan}, "null"},
		{"one point", 0.1, []float64{0.5}, "[5]"},
		{"no point", 0.1, nil, "[]"},
		{"by digits", 0, []float64{1.23456, 98765, 1e12, nan, 0}, "[1.23,9.88e+04,1e+12,null,0]"},
		{"beyond what a page can count", 1e-4, []float64{1e300, 1}, "[null,10000]"},
	}
	for _, test := range tests {
		t.Run(test.name, func(t *testing.T) {
			got := string(appendSteps(nil, len(test.values), test.step, func(i int) float64 { return test.values[i] }))
			if got != test.want {
				t.Errorf("%s, want %s", got, test.want)
			}
		})
	}
}

// The list of the worst: a response is as bad as its worst frequency response, and one of which anything
// is unknown is unknown.
func TestRanking(t *testing.T) {
	f := newFeed(t, 2, 3, 101)
	h := NewHub(Run{Rig: f.rig, Kind: "demo"})
	f.add(10)
	st, e := f.refresh(h)
	progress := *st.Progress
	progress.Errors = []float64{0.05, 0.1234, 0.02, math.NaN(), 0.3, 0.2}
	st.Progress = &progress
	h.Refresh(st, nil)
	h.Refresh(st, e)
	if got := string(h.refreshFor(t, h.first).Curves["ranking.error"]); got != "[12.3,null,30]" {
		t.Errorf("errors of the responses %s", got)
	}
}
