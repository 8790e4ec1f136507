package web

import (
	"math"
	"testing"

	"shakerwatch/estimate"
)

func TestHistory(t *testing.T) {
	nan := math.NaN()
	type step struct {
		averages int
		err      float64
	}
	tests := []struct {
		name  string
		steps []step
		want  []historyPoint
	}{
		{"unknown errors are not kept", []step{{0, nan}, {3, nan}, {4, 0.5}}, []historyPoint{{4, 0.5}}},
		{"the same number of averages is one point", []step{{4, 0.5}, {4, 0.4}}, []historyPoint{{4, 0.4}}},
		{"fewer averages: started over", []step{{4, 0.5}, {9, 0.3}, {2, 0.9}}, []historyPoint{{2, 0.9}}},
		{"started over from nothing", []step{{4, 0.5}, {0, nan}}, nil},
	}
	for _, test := range tests {
		t.Run(test.name, func(t *testing.T) {
			var h history
			for _, s := range test.steps {
				h.add(s.averages, s.err)
			}
			if len(h.points) != len(test.want) {
				t.Fatalf("%v, want %v", h.points, test.want)
			}
			for i, p := range h.points {
				if p != test.want[i] {
					t.Errorf("%v, want %v", h.points, test.want)
				}
			}
		})
	}
}

func TestHistoryDoesNotGrow(t *testing.T) {
	var h history
	const n, peak = 20_000, 777 // one error sticks out, early on
	for i := 1; i <= n; i++ {
		err := 1 / math.Sqrt(float64(i))
		if i == peak {
			err = 5
		}
		h.add(i, err)
	}
	if len(h.points) > historySize || len(h.points) < historySize/2 {
		t.Errorf("%d points, want %d to %d", len(h.points), historySize/2, historySize)
	}
	if last := h.points[len(h.points)-1]; last.averages != n {
		t.Errorf("the newest point is at %g averages, want %d", last.averages, n)
	}
	found := false
	for i, p := range h.points {
		found = found || p == historyPoint{peak, 5}
		if i > 0 && p.averages <= h.points[i-1].averages {
			t.Fatalf("points are out of order at %d", i)
		}
	}
	if !found {
		t.Error("the error that sticks out was thinned away")
	}
}

func TestProjection(t *testing.T) {
	h := history{points: []historyPoint{{20, 0.1}}}
	const effective, q = 18.0, 2
	// By the same law as the prediction: n_e - q grows fourfold where the error halves.
	needed := (q + 4*(effective-q)) * 20 / effective
	points := h.projection(nil, effective, q, estimate.Number(needed))
	first, last := points[0], points[len(points)-1]
	if first != (historyPoint{20, 0.1}) || math.Abs(last.averages-needed) > 1e-9 || math.Abs(last.err-0.05) > 1e-12 {
		t.Errorf("from %v to %v, want from {20 0.1} to {%g 0.05}", first, last, needed)
	}
	for name, needed := range map[string]float64{"unknown": math.NaN(), "reached": 20, "out of reach": math.Inf(1)} {
		if got := h.projection(nil, effective, q, estimate.Number(needed)); len(got) > 0 {
			t.Errorf("%s: %v, want no projection", name, got)
		}
	}
	if got := (&history{}).projection(nil, effective, q, 100); len(got) > 0 {
		t.Errorf("without a point: %v, want no projection", got)
	}
}
