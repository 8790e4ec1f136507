package main

import (
	"fmt"
	"io"
	"text/tabwriter"

	"shakerwatch/estimate/watch"
)

// report prints the table.
func report(w io.Writer, tallies []*tally) error {
	fmt.Fprintln(w, "Faults. Delays and resumption in hops, median and worst; * is a fault that no aim was set for.")
	t := tabwriter.NewWriter(w, 0, 0, 2, ' ', 0)
	fmt.Fprintln(t, "fault\tanalysis\truns\tdetected\tnamed\tin time\tdelay\tspoilt\tbefore\tother\tresumes")
	for _, y := range tallies {
		if len(y.outcomes) > 0 && y.scenario.aim != healthy {
			fmt.Fprintln(t, y.row())
		}
	}
	if err := t.Flush(); err != nil {
		return err
	}
	fmt.Fprintln(w, "\nHealthy runs.")
	for _, y := range tallies {
		if len(y.outcomes) > 0 && y.scenario.aim == healthy {
			fmt.Fprintln(w, y.healthyRow())
		}
	}
	return nil
}

// row is the line of a fault.
func (t *tally) row() string {
	s := t.scenario
	name := s.name
	if s.aim == reported {
		name += " *"
	}
	within, spoilt, resumes := fmt.Sprint(t.limit()), fmt.Sprint(t.count(func(o *outcome) int { return o.spoilt })), t.spread(func(o *outcome) int64 { return o.resumed })
	if s.start {
		within, resumes = "any", "-"
	}
	if s.start || s.averaged {
		spoilt = "-"
	}
	return fmt.Sprintf("%s\t%s\t%d\t%d\t%d\t%s\t%s\t%s\t%d\t%d\t%s", name, s.setting.name, len(t.outcomes),
		t.number(func(o *outcome) bool { return o.detected }), t.named(), within, t.spread(func(o *outcome) int64 { return o.delay }),
		spoilt, t.count(func(o *outcome) int { return o.before }), t.count(func(o *outcome) int { return o.other }), resumes)
}

// limit is the scenario's, or the smallest of those in turn.
func (t *tally) limit() int64 { return t.scenario.of(0).limit() }

func (t *tally) healthyRow() string {
	blocks := t.blocks()
	wrong := t.count(func(o *outcome) int { return o.faults })
	text := fmt.Sprintf("%-16s  %d runs, %d blocks: %d false events of fault kinds (%.1f in 10,000 blocks)%s", t.scenario.setting.name,
		len(t.outcomes), blocks, wrong, 1e4*float64(wrong)/float64(max(1, blocks)), t.apart())
	if d := t.depends(); d.bands > 0 || d.sure > 0 {
		text += fmt.Sprintf(
			"\n%18sforces-correlated: %d bands, %d where the true coherence is below %.1f, %d whose edges are off by more than %d lines; %d of %d sure ones not named",
			"", d.bands, d.invented, leastCoherence, d.wide, edgeLines, d.missed, d.sure)
	}
	return text
}

// tell prints one run with its events.
func (o *outcome) tell(w io.Writer) {
	fmt.Fprintln(w, o.plan)
	p := o.plan
	if p.faults != nil {
		for n := range p.faults {
			f := &p.faults[n]
			first, _ := p.window(f)
			fmt.Fprintf(w, "    %s from frame %d to %d; blocks %d to %d hold it\n", f.Kind, f.from, f.to, first, p.grid.behind(f.to)-1)
		}
		fmt.Fprintf(w, "    detected %v, named %v, delay %d, spoilt %d, before %d, other %d, resumes after %d\n",
			o.detected, o.named, o.delay, o.spoilt, o.before, o.other, o.resumed)
	} else {
		fmt.Fprintf(w, "    %d false events of fault kinds%s; forces %+v\n", o.faults, (&tally{outcomes: []*outcome{o}}).apart(), o.depends)
	}
	fmt.Fprintf(w, "    %d blocks averaged of %d\n", len(o.played.starts), o.played.seen)
	if o.played.differ != "" {
		fmt.Fprintf(w, "    came out differently: %s\n", o.played.differ)
	}
	for i := range o.played.events {
		e := &o.played.events[i]
		cause := ""
		if e.Cause != "" {
			cause = " (" + string(e.Cause) + ")"
		}
		edge := "+"
		if e.Edge == watch.Cleared {
			edge = "-"
		}
		fmt.Fprintf(w, "    %4d %s %s%s %v since %d: %s\n", p.hop(e), edge, e.Kind, cause, e.Channels, e.SinceBlock, e.Text)
	}
}
