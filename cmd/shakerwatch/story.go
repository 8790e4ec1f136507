package main

import (
	"fmt"
	"maps"
	"slices"

	"shakerwatch/cmd/internal/monitor"
	"shakerwatch/estimate/watch"
)

// alsoTell prints each event besides handing it on.
func alsoTell(next func(watch.Event), a *app, p *progress) func(watch.Event) {
	return func(e watch.Event) {
		p.clear()
		fmt.Fprintf(a.stdout, "%10.3f s  %s %s: %s\n", e.TimeS, e.Kind, e.Edge, e.Text)
		if next != nil {
			next(e)
		}
	}
}

// tell prints the verdict and what was set aside.
func (a *app) tell(r *monitor.Result, saved string) {
	fmt.Fprintf(a.stdout, "verdict: %s\n", r.Verdict.State)
	for _, reason := range r.Verdict.Reasons {
		fmt.Fprintf(a.stdout, "  %s\n", reason)
	}
	fmt.Fprintf(a.stdout, "blocks: %d averaged (worth %.1f independent averages), %d set aside of %d seen\n",
		r.Averaged, r.Snapshot.EffectiveAverages, r.SetAside, r.Seen)
	for _, why := range slices.Sorted(maps.Keys(r.Aside)) {
		fmt.Fprintf(a.stdout, "  set aside: %d %s\n", r.Aside[why], why)
	}
	if needed := float64(r.Progress.AveragesNeeded); needed == needed {
		fmt.Fprintf(a.stdout, "averages needed: %.0f\n", needed)
	}
	for _, c := range []struct {
		n    int64
		what string
	}{
		{r.Gaps, "stretches of lost frames"},
		{r.Overranges, "blocks with a channel at its limit"},
		{r.Overloads, "blocks that this computer was too slow for"},
	} {
		if c.n > 0 {
			fmt.Fprintf(a.stdout, "%s: %d\n", c.what, c.n)
		}
	}
	fmt.Fprintln(a.stdout, saved)
}
