package main

import (
	"bytes"
	"strings"
	"testing"
)

func TestParse(t *testing.T) {
	for _, c := range []struct {
		name, args string
		want       string // in the error; empty is none
	}{
		{"nothing", "", ""},
		{"one size", "--forces 4 --responses 60 --block 4096", ""},
		{"part of a size", "--forces 4", "--forces and --responses"},
		{"odd block", "--forces 4 --responses 60 --block 4095", "even"},
		{"no rounds", "--rounds 0", "above 0"},
		{"argument", "fast", "leave it out"},
		{"unknown", "--fast", "fast"},
	} {
		t.Run(c.name, func(t *testing.T) {
			_, err := parse(strings.Fields(c.args))
			if c.want == "" && err != nil || c.want != "" && (err == nil || !strings.Contains(err.Error(), c.want)) {
				t.Errorf("error %v, want %q", err, c.want)
			}
		})
	}
}

// TestRun has the whole command measure a small size.
func TestRun(t *testing.T) {
	var out bytes.Buffer
	args := "--forces 2 --responses 6 --block 64 --rounds 2 --turn 2ms --cores 1"
	if err := run(t.Context(), strings.Fields(args), &out); err != nil {
		t.Fatal(err)
	}
	for _, want := range []string{
		"NumPy: 1.", "C: fftw-3", "other programs took", "counted once", "2 forces and 6 responses, blocks of 64, 26 lines",
		"M/s", "times real time", "MiB", "shakerwatch over NumPy", "shakerwatch over C", "agree to 1e-09: pass",
	} {
		if !strings.Contains(out.String(), want) {
			t.Errorf("no %q in\n%s", want, out.String())
		}
	}
	if strings.Contains(out.String(), "aim") {
		t.Errorf("an aim is judged at a size that has none:\n%s", out.String())
	}
}
