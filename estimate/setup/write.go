package setup

import (
	"fmt"
	"io"
	"math"
	"slices"
	"strings"
	"text/tabwriter"
)

// Caution is what a person is told together with findings that send somebody to the rig.
const Caution = "Before a cable, sensor or stinger is touched: drive off, amplifier gains down, and nothing moves any more. Local rules and qualified people decide."

// WriteFindings writes one line a finding, in the order given, with severity, stage and kind in
// columns, a line that counts them, and the caution when one of them asks for more than reading. It
// returns the first error of w.
func WriteFindings(w io.Writer, findings []Finding) error {
	columns := tabwriter.NewWriter(w, 0, 0, 2, ' ', 0)
	for _, f := range findings {
		fmt.Fprintf(columns, "%v\t%v\t%s\t%s\n", f.Severity, f.Stage, f.Kind, f.Text)
	}
	if err := columns.Flush(); err != nil {
		return err
	}
	closing := Summary(findings)
	if slices.ContainsFunc(findings, func(f Finding) bool { return f.Severity > Info }) {
		closing += "\n" + Caution
	}
	_, err := fmt.Fprintln(w, closing)
	return err
}

// Summary counts findings in one line: what to stop for, what to look at, what is unknown and what is
// in order.
func Summary(findings []Finding) string {
	var stop, look, open, fine int
	for _, f := range findings {
		switch {
		case f.Severity == Stop:
			stop++
		case f.Severity == Look:
			look++
		case math.IsNaN(float64(f.Number)):
			open++
		default:
			fine++
		}
	}
	var parts []string
	add := func(n int, what string) {
		if n > 0 {
			parts = append(parts, fmt.Sprintf("%d %s", n, what))
		}
	}
	add(stop, "to stop for")
	add(look, "to look at")
	add(open, "unknown")
	add(fine, "in order")
	if len(parts) == 0 {
		return "nothing was checked"
	}
	return strings.Join(parts, ", ")
}
