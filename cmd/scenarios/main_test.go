package main

import (
	"bytes"
	"context"
	"strings"
	"testing"

	"go.uber.org/goleak"
)

func TestMain(m *testing.M) { goleak.VerifyTestMain(m) }

func TestCommand(t *testing.T) {
	ended, end := context.WithCancel(t.Context())
	end()
	for _, c := range []struct {
		name   string
		ctx    context.Context
		args   string
		status int
		stdout string // a part of it
		stderr string
	}{
		{"list", t.Context(), "-list -only detach -analysis 50", exitMet, "detach, then loose, Hann 50 %\n", ""},
		{"one run", t.Context(), "-only turn -analysis 1024 -from 1001 -runs 1 -again 0 -v", exitMet, "faults in turn, block 1024, seed 1001: ", "1 of 1 runs, "},
		{"no such scenario", t.Context(), "-only nothing", exitUnusable, "", "no such scenario"},
		{"no runs", t.Context(), "-runs 0", exitUnusable, "", "no runs"},
		{"an argument too many", t.Context(), "detach", exitUnusable, "", "-h"},
		{"no such flag", t.Context(), "-hard", exitUnusable, "", "-hard"},
		{"interrupted", ended, "-only turn -analysis 1024 -runs 1", exitUnusable, "", "canceled"},
	} {
		t.Run(c.name, func(t *testing.T) {
			var stdout, stderr bytes.Buffer
			status := run(c.ctx, strings.Fields(c.args), &stdout, &stderr)
			if status != c.status || !strings.Contains(stdout.String(), c.stdout) || !strings.Contains(stderr.String(), c.stderr) {
				t.Errorf("status %d, want %d\n%s\n%s", status, c.status, stdout.String(), stderr.String())
			}
		})
	}
}

func TestConclude(t *testing.T) {
	fault, sound := come("detach", "detach", aForce), scenario{name: "healthy", setting: base, aim: healthy}
	for _, c := range []struct {
		name   string
		right  int
		status int
		part   []string
	}{
		{"met", 10, exitMet, []string{"all aims are met", "detach  Hann 50 %  10    10        10     3        2 2    0       0       0      -"}},
		{"missed", 8, exitMissed, []string{"not met: detach, Hann 50 %: 8 of 10", "seeds [1008 1009]"}},
	} {
		faults, well := runsOf(&fault, 10, c.right), runsOf(&sound, 2, 2)
		for _, o := range faults.outcomes {
			o.detected, o.delay, o.resumed = true, 2, -1
		}
		for _, o := range well.outcomes {
			o.played.seen = 100
		}
		var stdout, stderr bytes.Buffer
		if status := conclude(&stdout, &stderr, []*tally{faults, well}); status != c.status {
			t.Errorf("%s: status %d", c.name, status)
		}
		for _, part := range append(c.part, "2 runs, 200 blocks: 0 false events of fault kinds (0.0 in 10,000 blocks)") {
			if !strings.Contains(stdout.String(), part) {
				t.Errorf("%s: no %q in\n%s", c.name, part, stdout.String())
			}
		}
	}
}
