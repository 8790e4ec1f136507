package main

import (
	"cmp"
	"fmt"
	"slices"

	"shakerwatch/estimate/watch"
)

// A tally is a scenario with the outcomes of its runs.
type tally struct {
	scenario *scenario
	outcomes []*outcome // in the order of their seeds
}

func (t *tally) count(of func(o *outcome) int) (sum int) {
	for _, o := range t.outcomes {
		sum += of(o)
	}
	return sum
}

func (t *tally) number(of func(o *outcome) bool) int {
	return t.count(func(o *outcome) int {
		if of(o) {
			return 1
		}
		return 0
	})
}

func (t *tally) named() int  { return t.number(func(o *outcome) bool { return o.named }) }
func (t *tally) blocks() int { return t.count(func(o *outcome) int { return int(o.played.seen) }) }

// spread is the median and the largest of what is not negative.
func (t *tally) spread(of func(o *outcome) int64) string {
	var list []int64
	for _, o := range t.outcomes {
		if v := of(o); v >= 0 {
			list = append(list, v)
		}
	}
	if list == nil {
		return "-"
	}
	slices.Sort(list)
	return fmt.Sprintf("%d %d", list[(len(list)-1)/2], list[len(list)-1])
}

// seeds are those of the runs for which something holds.
func (t *tally) seeds(of func(o *outcome) bool) (list []uint64) {
	for _, o := range t.outcomes {
		if of(o) {
			list = append(list, o.plan.seed)
		}
	}
	return list
}

func (t *tally) depends() (sum dependence) {
	for _, o := range t.outcomes {
		sum.add(o.depends)
	}
	return sum
}

// apart lists the events of kinds that are no faults, and how many runs had them.
func (t *tally) apart() string {
	events, runs := make(map[watch.Kind]int), make(map[watch.Kind]int)
	for _, o := range t.outcomes {
		for kind, n := range o.apart {
			events[kind] += n
			runs[kind]++
		}
	}
	var kinds []watch.Kind
	for kind := range events {
		kinds = append(kinds, kind)
	}
	slices.SortFunc(kinds, func(a, b watch.Kind) int { return cmp.Compare(a, b) })
	text := ""
	for _, kind := range kinds {
		text += fmt.Sprintf(", %d %s in %d runs", events[kind], kind, runs[kind])
	}
	return text
}
