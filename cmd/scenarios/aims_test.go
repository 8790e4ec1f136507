package main

import (
	"strings"
	"testing"
)

// runsOf makes the outcomes of a scenario, so many of which are named.
func runsOf(s *scenario, runs, right int) *tally {
	t := &tally{scenario: s}
	for n := range runs {
		t.outcomes = append(t.outcomes, &outcome{plan: &plan{row: s, seed: uint64(1000 + n)}, played: &played{}, named: n < right})
	}
	return t
}

func TestMissed(t *testing.T) {
	fault := come("detach", "detach", aForce)
	from := stays("gain", "gain", aDrivingPoint, reciprocal)
	both := two("both", fault.faults[0], fault.faults[0])
	sound := scenario{name: "healthy", setting: base, aim: healthy}
	with := func(t *tally, change func(o *outcome)) *tally {
		change(t.outcomes[1])
		return t
	}
	for _, c := range []struct {
		name    string
		tallies []*tally
		want    []string // how each line begins, or a part of it
	}{
		{"all", []*tally{runsOf(&fault, 50, 50), runsOf(&from, 50, 50), runsOf(&sound, 5, 5)}, nil},
		{"98 of a hundred", []*tally{runsOf(&fault, 100, 98)}, nil},
		{"97 of a hundred", []*tally{runsOf(&fault, 100, 97)}, []string{"97 of 100 faults rightly named in time (97.0 %), want 98 %; detach, Hann 50 %: seeds [1097 1098 1099]"}},
		{"one behind the others", []*tally{runsOf(&fault, 1000, 1000), runsOf(&fault, 8, 7)}, []string{"detach, Hann 50 %: 7 of 8 rightly named, want 90 %"}},
		{"causes apart from faults", []*tally{runsOf(&fault, 100, 100), runsOf(&from, 20, 19)}, []string{"19 of 20 faults present from the start"}},
		{"no aim for two at once", []*tally{runsOf(&both, 20, 0)}, nil},
		{"none run", []*tally{runsOf(&fault, 0, 0)}, nil},
		{"spoilt", []*tally{with(runsOf(&both, 2, 2), func(o *outcome) { o.spoilt = 3 })}, []string{"3 averaged blocks hold a fault, want none; both, Hann 50 %: seeds [1001]"}},
		{"before", []*tally{with(runsOf(&fault, 2, 2), func(o *outcome) { o.before = 1 })}, []string{"1 false events before an onset"}},
		{"false", []*tally{with(runsOf(&sound, 2, 2), func(o *outcome) { o.faults = 2 })}, []string{"2 false events of fault kinds"}},
		{"bands", []*tally{with(runsOf(&sound, 2, 2), func(o *outcome) { o.depends = dependence{invented: 1, wide: 2, missed: 3} })},
			[]string{"1 bands in which", "2 bands of dependent forces whose edges", "3 bands of dependent forces not named"}},
		{"bits", []*tally{with(runsOf(&fault, 2, 2), func(o *outcome) { o.played.differ = "other bits; " })}, []string{"1 runs that came out differently"}},
	} {
		got := missed(c.tallies)
		if len(got) != len(c.want) {
			t.Errorf("%s: %q, want %d", c.name, got, len(c.want))
			continue
		}
		for n := range got {
			if !strings.Contains(got[n], c.want[n]) {
				t.Errorf("%s: %q, want %q", c.name, got[n], c.want[n])
			}
		}
	}
}
