package rig

import (
	"cmp"
	"fmt"
	"io"
	"math"
	"slices"
	"strconv"
	"strings"
	"text/tabwriter"
)

// WriteTable writes to w what r resolves to, for people: the analysis, the channels as they are
// patched, the driving points, and a warning for what may spoil the test though it is allowed.
// The error is that of w.
func (r *Rig) WriteTable(w io.Writer) error {
	var b strings.Builder
	if r.Title != "" {
		fmt.Fprintf(&b, "%s\n\n", r.Title)
	}
	r.writeGrid(&b)
	r.writeChannels(&b)
	r.writeDrivingPoints(&b)
	r.writeWarnings(&b)
	b.WriteString("\nThis is what the file says, not what is plugged in: check every cable and the signs before the gains are turned up.\n")
	_, err := io.WriteString(w, b.String())
	return err
}

// newColumns aligns columns that are separated by tabs, two blanks apart.
func newColumns(b *strings.Builder) *tabwriter.Writer {
	return tabwriter.NewWriter(b, 0, 0, 2, ' ', 0)
}

func (r *Rig) writeGrid(b *strings.Builder) {
	a, g := r.Analysis, r.Grid
	t := newColumns(b)
	row := func(name, format string, args ...any) {
		fmt.Fprintf(t, "%s\t%s\n", name, fmt.Sprintf(format, args...))
	}
	row("source", "%s, %d channels, %s frames/s", r.Source.Kind, r.Source.Channels, exact(r.Source.RateHz))
	row("decimation", "%d", g.Decimation)
	row("rate after decimation", "%s Hz", short(g.RateHz))
	row("block", "%d samples", g.Block)
	row("block duration", "%s s", short(float64(g.Block)/g.RateHz))
	if g.Hop > 0 {
		row("hop", "%d samples, %s s, overlap %s", g.Hop, short(float64(g.Hop)/g.RateHz), exact(a.Overlap))
	}
	row("line spacing", "%s Hz", short(g.SpacingHz))
	row("lines", "%d, from 0 Hz to %s Hz", g.Lines, short(float64(g.Lines-1)*g.SpacingHz))
	row("judged", "%s Hz to %s Hz", exact(a.MinFrequencyHz), exact(a.MaxFrequencyHz))
	row("window", "%s", a.Window)
	row("excitation", "%s", r.excitation())
	row("averaging", "%s", r.averaging())
	row("estimator", "%s", a.Estimator)
	row("good enough", "random error %s on %s of the lines no more than %s dB below each maximum",
		exact(r.Target.RandomError), exact(r.Target.Share), exact(r.Target.DepthDB))
	row("on a fault", "%s", r.OnFault)
	t.Flush()
}

func (r *Rig) excitation() string {
	b, p := r.Burst, r.Periodic
	switch {
	case r.Analysis.Excitation == "periodic":
		return fmt.Sprintf("periodic, %d frames a period, %d periods settle, %d are kept", p.Period, p.SettlePeriods, p.KeepPeriods)
	case r.Analysis.Excitation != "burst":
		return r.Analysis.Excitation
	case b.TriggerForce == "":
		return fmt.Sprintf("burst, every %s s", exact(b.PeriodS))
	default:
		return fmt.Sprintf("burst, from %s s before %s exceeds %s of its peak so far",
			exact(b.PreTriggerS), b.TriggerForce, exact(b.TriggerLevel))
	}
}

func (r *Rig) averaging() string {
	if r.Analysis.Averaging == "exponential" {
		return fmt.Sprintf("exponential, remembers %d blocks", r.Analysis.Memory)
	}
	return r.Analysis.Averaging
}

// writeChannels lists the channels by input, as they are patched.
func (r *Rig) writeChannels(b *strings.Builder) {
	type patch struct {
		kind string
		Channel
	}
	var patches []patch
	for _, c := range r.Forces {
		patches = append(patches, patch{"force", c})
	}
	for _, c := range r.Responses {
		patches = append(patches, patch{"response", c})
	}
	slices.SortFunc(patches, func(a, b patch) int { return cmp.Compare(a.Index, b.Index) })

	b.WriteString("\n")
	t := newColumns(b)
	fmt.Fprintln(t, "input\tkind\tname\tpoint\taxis\tsensitivity\tfull scale\tin its unit\tlimit")
	for _, c := range patches {
		fmt.Fprintf(t, "%d\t%s\t%s\t%s\t%s\t%s V/%s\t%s V\t%s %s\t%s V\n", c.Index+1, c.kind, c.Name, c.Point, c.Axis,
			exact(c.Sensitivity), perUnit(c.Unit), exact(c.FullScaleV),
			short(math.Abs(c.FullScaleV/c.Sensitivity)), c.Unit, exact(c.LimitV))
	}
	t.Flush()
}

// perUnit puts a unit of two parts in brackets behind a stroke.
func perUnit(unit string) string {
	if strings.Contains(unit, "/") {
		return "(" + unit + ")"
	}
	return unit
}

func (r *Rig) writeDrivingPoints(b *strings.Builder) {
	pairs := r.DrivingPairs()
	if len(pairs) == 0 {
		return
	}
	b.WriteString("\n")
	t := newColumns(b)
	fmt.Fprintln(t, "driving point\tforce\tresponse\taxes")
	for _, p := range pairs {
		f, o := r.Forces[p.Force], r.Responses[p.Response]
		direction := "same direction"
		if r.DrivingSign(p.Force) < 0 {
			direction = "opposite directions"
		}
		fmt.Fprintf(t, "%s %s\t%s\t%s\t%s and %s, %s\n", f.Point, f.Letter(), f.Name, o.Name, f.Axis, o.Axis, direction)
	}
	t.Flush()
}

func (r *Rig) writeWarnings(b *strings.Builder) {
	var warnings []string
	for _, name := range r.unused {
		warnings = append(warnings, fmt.Sprintf("[%s] is not used: excitation is %q", name, r.Analysis.Excitation))
	}
	for i, o := range r.DrivingPoints() {
		if f := r.Forces[i]; o < 0 {
			warnings = append(warnings, fmt.Sprintf(
				"force %s has no driving-point response: mount one at point %s along %s, or its polarity and reciprocity go unchecked",
				f.Name, f.Point, f.Letter()))
		}
	}
	for _, point := range r.unplaced() {
		warnings = append(warnings, fmt.Sprintf("point %s has no [[point]]: the page's sketch leaves its channels out", point))
	}
	for _, c := range r.Channels() {
		if c.LimitV > c.FullScaleV {
			warnings = append(warnings, fmt.Sprintf(
				"%s has its limit above full scale: only floating-point samples can reach it, so clipping of a sound card would go unseen",
				c.Name))
		}
	}
	if len(warnings) > 0 {
		b.WriteString("\n")
	}
	for _, w := range warnings {
		fmt.Fprintf(b, "warning: %s\n", w)
	}
}

// short writes v with six digits, which is enough to compare by eye.
func short(v float64) string { return strconv.FormatFloat(v, 'g', 6, 64) }
