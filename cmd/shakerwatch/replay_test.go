package main

import (
	"bytes"
	"context"
	"encoding/json"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"
	"time"
)

// replayTo replays a reference case headless into a folder of its own and returns it.
func replayTo(t *testing.T, name string, args ...string) string {
	t.Helper()
	out := filepath.Join(t.TempDir(), "results")
	rigFile, recording := caseFiles(name)
	args = append([]string{"--out", out, "--headless", "replay", rigFile, recording}, args...)
	if status, _, stderr := shakerwatch(t, args...); status != exitDone {
		t.Fatalf("exit status %d: %s", status, stderr)
	}
	return out
}

func readFile(t *testing.T, dir, name string) []byte {
	t.Helper()
	text, err := os.ReadFile(filepath.Join(dir, name))
	if err != nil {
		t.Fatal(err)
	}
	return text
}

func TestSameFilesAtEveryPace(t *testing.T) {
	want := replayTo(t, "gaps_and_overranges")
	for _, pace := range []string{"2", "50"} {
		got := replayTo(t, "gaps_and_overranges", "--pace", pace)
		for _, name := range []string{"estimates.npz", "summary.json", "events.jsonl"} {
			if !bytes.Equal(readFile(t, got, name), readFile(t, want, name)) {
				t.Errorf("at pace %s %s has other bytes", pace, name)
			}
		}
	}
	var kinds []string
	for line := range bytes.Lines(readFile(t, want, "events.jsonl")) {
		var e struct{ Kind, Edge string }
		if err := json.Unmarshal(line, &e); err != nil {
			t.Fatal(err)
		}
		kinds = append(kinds, e.Kind+" "+e.Edge)
	}
	for _, kind := range []string{"gap raised", "gap cleared", "overrange raised", "overrange cleared"} {
		if !strings.Contains(strings.Join(kinds, ","), kind) {
			t.Errorf("no event %q in %q", kind, kinds)
		}
	}
}

func TestOnlyItsOwnSummary(t *testing.T) {
	first := replayTo(t, "gaps_and_overranges")
	again := replayTo(t, "gaps_and_overranges", "--only", filepath.Join(first, "summary.json"))
	if !bytes.Equal(readFile(t, again, "estimates.npz"), readFile(t, first, "estimates.npz")) {
		t.Error("the blocks of a run, averaged once more, give other bytes")
	}
	if got := readFile(t, again, "events.jsonl"); len(got) != 0 {
		t.Errorf("events with the watch off: %s", got)
	}
}

func TestEndAfterBlocks(t *testing.T) {
	out := replayTo(t, "two_forces_hann", "--blocks", "5")
	summary := readJSON(t, filepath.Join(out, "summary.json"))
	if summary["blocks_averaged"] != 5.0 || summary["blocks_seen"] != 5.0 {
		t.Errorf("averaged %v of %v", summary["blocks_averaged"], summary["blocks_seen"])
	}
}

func TestResultsAreNotOverwrittenUnasked(t *testing.T) {
	out := replayTo(t, "one_force")
	before := readFile(t, out, "summary.json")
	rigFile, recording := caseFiles("two_forces_hann")
	args := []string{"replay", rigFile, recording, "--headless", "--out", out}
	status, _, stderr := shakerwatch(t, args...)
	if status != exitUnusable || !strings.Contains(stderr, "--replace") {
		t.Errorf("exit status %d, %q", status, stderr)
	}
	if !bytes.Equal(readFile(t, out, "summary.json"), before) {
		t.Error("a refused run touched the results")
	}
	if status, _, stderr := shakerwatch(t, append(args, "--replace")...); status != exitDone {
		t.Fatalf("with --replace: exit status %d, %q", status, stderr)
	}
	if bytes.Equal(readFile(t, out, "summary.json"), before) {
		t.Error("--replace replaced nothing")
	}
}

func TestCtrlCWritesResults(t *testing.T) {
	rigFile, recording := caseFiles("two_forces_hann")
	out := filepath.Join(t.TempDir(), "results")
	ctx, cancel := context.WithTimeout(t.Context(), 1500*time.Millisecond)
	defer cancel()
	status, stdout, stderr := shakerwatchUntil(ctx, "replay", rigFile, recording, "--headless", "--pace", "1", "--out", out)
	if status != exitDone || !strings.Contains(stdout, "verdict: ") {
		t.Fatalf("exit status %d, %q %q", status, stdout, stderr)
	}
	readFile(t, out, "estimates.npz")
	if len(readJSON(t, filepath.Join(out, "summary.json"))) == 0 {
		t.Error("the summary is empty")
	}
}

func TestTruncatedRecording(t *testing.T) {
	rigFile, recording := caseFiles("two_forces_hann")
	info, err := os.Stat(recording)
	if err != nil {
		t.Fatal(err)
	}
	dir := t.TempDir()
	cut := shortRecording(t, recording, filepath.Join(dir, "cut.wav"), int(info.Size()*2/3)-5)
	status, _, stderr := shakerwatch(t, "replay", rigFile, cut, "--headless", "--out", filepath.Join(dir, "results"))
	if status != exitDone || !strings.Contains(stderr, "warning: ") || !strings.Contains(stderr, "cut.wav") {
		t.Errorf("exit status %d, %q: want a warning that names the file", status, stderr)
	}
}

func TestDemo(t *testing.T) {
	out := filepath.Join(t.TempDir(), "results")
	status, stdout, stderr := shakerwatch(t, "--headless", "--blocks", "3", "--out", out)
	if status != exitDone || !strings.Contains(stdout, "verdict: settling") {
		t.Fatalf("exit status %d, %q %q", status, stdout, stderr)
	}
	if n := strings.Count(stderr, " %: "); n < 2 || n > 10 {
		t.Errorf("%d lines of progress, want one every ten percent:\n%s", n, stderr)
	}
	summary := readJSON(t, filepath.Join(out, "summary.json"))
	if source := summary["source"].(map[string]any); source["kind"] != "demo" || summary["blocks_averaged"] != 3.0 {
		t.Errorf("summary %v", summary)
	}
}

func TestHelp(t *testing.T) {
	for _, arg := range []string{"--help", "-h"} {
		status, stdout, stderr := shakerwatch(t, arg)
		if status != exitDone || stderr != "" {
			t.Errorf("%s: exit status %d, %q", arg, status, stderr)
		}
		for _, want := range []string{"replay RIG.toml RECORDING", "--out", "no protective system"} {
			if !strings.Contains(stdout, want) {
				t.Errorf("%s says nothing about %q", arg, want)
			}
		}
	}
}

// longRun makes the recording of a minute with eight channels and its reference results.
func longRun(t *testing.T) string {
	t.Helper()
	dir := t.TempDir()
	out, err := exec.Command("/usr/bin/python3", filepath.Join(testdata, "long_run.py"), dir).CombinedOutput()
	if err != nil {
		t.Fatalf("long_run.py: %v\n%s(it needs Debian's python3-scipy)", err, out)
	}
	return dir
}

func TestAMinuteEqualsSciPy(t *testing.T) {
	dir := longRun(t)
	out := filepath.Join(dir, "results")
	status, _, stderr := shakerwatch(t, "replay", filepath.Join(dir, "rig.toml"), filepath.Join(dir, "run.wav"),
		"--headless", "--pace", "0", "--out", out)
	if status != exitDone {
		t.Fatalf("exit status %d: %s", status, stderr)
	}
	compareArrays(t, filepath.Join(out, "estimates.npz"), filepath.Join(dir, "expected.npz"))
	compareSummary(t, filepath.Join(out, "summary.json"), filepath.Join(dir, "expected.json"))
}
