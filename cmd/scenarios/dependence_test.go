package main

import (
	"math"
	"testing"

	"shakerwatch/estimate/watch"
	"shakerwatch/spectra"
)

// TestWindowPower compares with the transform of a Hann window relative to its middle,
// sin(πδ)/(πδ (1 - δ²)) (Harris 1978).
func TestWindowPower(t *testing.T) {
	const fine, reach = 4, 12
	power := windowPower(spectra.Hann.Values(4096), fine, reach)
	var sum float64
	for n, got := range power {
		sum += got
		d := float64(n-reach) / fine
		want := math.Sin(math.Pi*d) / (math.Pi * d) / (1 - d*d)
		switch d {
		case 0:
			want = 1
		case 1, -1:
			want = 0.5
		}
		if got /= power[reach]; math.Abs(got-want*want) > 1e-5 {
			t.Errorf("%g lines off: %g, want %g", d, got, want*want)
		}
	}
	if math.Abs(sum-1) > 1e-12 {
		t.Errorf("sum %g", sum)
	}
}

func TestCompare(t *testing.T) {
	truth := make([]float64, 60)
	for k := 10; k < 20; k++ {
		truth[k] = 0.5
	}
	for k := 30; k < 42; k++ {
		truth[k] = 0.9
	}
	band := func(edge watch.Edge, lo, hi float64) watch.Event {
		return watch.Event{Kind: watch.ForcesCorrelated, Edge: edge, BandsHz: [][2]float64{{lo, hi}}}
	}
	for _, c := range []struct {
		name   string
		events []watch.Event
		want   dependence
	}{
		{"nothing", nil, dependence{sure: 1, missed: 1}},
		{"found", []watch.Event{band(watch.Raised, 30, 41)}, dependence{bands: 1, sure: 1}},
		{"to within three lines", []watch.Event{band(watch.Raised, 33, 38)}, dependence{bands: 1, sure: 1}},
		{"a line too few", []watch.Event{band(watch.Raised, 34, 38)}, dependence{bands: 1, sure: 1, missed: 1}},
		{"three lines too wide", []watch.Event{band(watch.Raised, 27, 44)}, dependence{bands: 1, sure: 1}},
		{"four", []watch.Event{band(watch.Raised, 27, 45)}, dependence{bands: 1, sure: 1, wide: 1}},
		{"where there is nothing", []watch.Event{band(watch.Raised, 50, 53)}, dependence{bands: 1, sure: 1, missed: 1, invented: 1}},
		{"cleared", []watch.Event{band(watch.Raised, 30, 41), band(watch.Cleared, 30, 41)}, dependence{bands: 1, sure: 1, missed: 1}},
		{"in two events", []watch.Event{band(watch.Raised, 30, 35), band(watch.Raised, 36, 41)}, dependence{bands: 2, sure: 1}},
	} {
		p := storyPlan()
		p.truth = truth
		if got := p.compare(&played{events: c.events, ne: 100}); got != c.want {
			t.Errorf("%s: %+v, want %+v", c.name, got, c.want)
		}
	}
}

// TestSureCoherence: what is sure is found by the rule as it is written, two deviations low.
func TestSureCoherence(t *testing.T) {
	const q = 2
	sure := sureCoherence(grownShare*60, q)
	deviation := 1 / math.Sqrt(2*(60.-q+1))
	least := math.Tanh(math.Atanh(math.Sqrt(sure)) - 2*deviation - 3.3*deviation)
	if math.Abs(least*least-leastCoherence) > 1e-12 {
		t.Errorf("%g is sure, whose bound is %g: want %g", sure, least*least, leastCoherence)
	}
}
