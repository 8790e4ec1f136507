package main

import (
	"fmt"
)

// What has to hold on seeds that nobody tuned on.
const (
	leastNamed = 0.98 // of the runs that count for it
	leastEach  = 0.90 // of those of one scenario, so that no fault hides behind the others
)

// missed says which aims are not met, and by which runs.
func missed(tallies []*tally) (list []string) {
	list = append(list, missedNames(tallies, named, "faults rightly named in time")...)
	list = append(list, missedNames(tallies, reciprocal, "faults present from the start given their right cause")...)
	for _, c := range []struct {
		what string
		of   func(o *outcome) int
	}{
		{"averaged blocks hold a fault", func(o *outcome) int { return o.spoilt }},
		{"false events before an onset", func(o *outcome) int { return o.before }},
		{"false events of fault kinds in healthy runs", func(o *outcome) int { return o.faults }},
		{"bands in which the forces do not depend on each other", func(o *outcome) int { return o.depends.invented }},
		{"bands of dependent forces whose edges are off", func(o *outcome) int { return o.depends.wide }},
		{"bands of dependent forces not named", func(o *outcome) int { return o.depends.missed }},
		{"runs that came out differently the second time", func(o *outcome) int { return min(1, len(o.played.differ)) }},
	} {
		sum, where := 0, ""
		for _, t := range tallies {
			if n := t.count(c.of); n > 0 {
				sum += n
				where += fmt.Sprintf("; %s: seeds %v", t.scenario, t.seeds(func(o *outcome) bool { return c.of(o) > 0 }))
			}
		}
		if sum > 0 {
			list = append(list, fmt.Sprintf("%d %s, want none%s", sum, c.what, where))
		}
	}
	return list
}

// missedNames judges the scenarios that count for an aim about names, together and each.
func missedNames(tallies []*tally, a aim, what string) (list []string) {
	runs, right, where := 0, 0, ""
	for _, t := range tallies {
		n := len(t.outcomes)
		if t.scenario.aim != a || n == 0 {
			continue
		}
		runs, right = runs+n, right+t.named()
		if t.named() < n {
			where += fmt.Sprintf("; %s: seeds %v", t.scenario, t.seeds(func(o *outcome) bool { return !o.named }))
		}
		if float64(t.named()) < leastEach*float64(n) {
			list = append(list, fmt.Sprintf("%s: %d of %d rightly named, want %.0f %% of each scenario", t.scenario, t.named(), n, 100*leastEach))
		}
	}
	if float64(right) < leastNamed*float64(runs) {
		list = append(list, fmt.Sprintf("%d of %d %s (%.1f %%), want %.0f %%%s", right, runs, what, 100*float64(right)/float64(runs), 100*leastNamed, where))
	}
	return list
}
