package main

import (
	"bytes"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// Blocks that were found once are averaged again, to the last bit, when they are listed.
func TestFoundBlocksListed(t *testing.T) {
	for _, name := range []string{"burst_trigger_noise", "burst_period", "periodic_two"} {
		t.Run(name, func(t *testing.T) {
			t.Parallel()
			dir := filepath.Join(testdata, "found", name)
			args := []string{"replay", filepath.Join(dir, "rig.toml"), filepath.Join(dir, "run.wav"), "--headless", "--out"}
			first, again := filepath.Join(t.TempDir(), "first"), filepath.Join(t.TempDir(), "again")
			if status, _, stderr := shakerwatch(t, append(args, first)...); status != exitDone {
				t.Fatalf("exit status %d: %s", status, stderr)
			}
			summary := filepath.Join(first, "summary.json")
			if status, _, stderr := shakerwatch(t, append(args, again, "--only", summary)...); status != exitDone {
				t.Fatalf("exit status %d: %s", status, stderr)
			}
			for _, file := range []string{"estimates.npz", "summary.json"} {
				a, b := mustRead(t, filepath.Join(first, file)), mustRead(t, filepath.Join(again, file))
				if file == "summary.json" { // what was not listed was neither seen nor set aside
					a, b = verdictOf(a), verdictOf(b)
				}
				if !bytes.Equal(a, b) {
					t.Errorf("%s differs", file)
				}
			}
		})
	}
}

func mustRead(t *testing.T, path string) []byte {
	t.Helper()
	text, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	return text
}

// verdictOf is a summary from its list of blocks on.
func verdictOf(summary []byte) []byte {
	return summary[bytes.Index(summary, []byte(`"block_starts"`)):]
}

// Forces that do not do what the rig file declares are refused, and nothing is left.
func TestUndeclaredExcitationIsRefused(t *testing.T) {
	for _, c := range []struct {
		name, rig, recording string // folders of testdata/found
		says                 string
	}{
		{"bursts are not periodic", "periodic_two", "burst_period", "do not repeat every"},
		{"a period is no burst", "burst_period", "periodic_two", "no bursts"},
	} {
		t.Run(c.name, func(t *testing.T) {
			t.Parallel()
			out := filepath.Join(t.TempDir(), "results")
			status, _, stderr := shakerwatch(t, "replay", filepath.Join(testdata, "found", c.rig, "rig.toml"),
				filepath.Join(testdata, "found", c.recording, "run.wav"), "--headless", "--out", out)
			if status != exitUnusable || !strings.Contains(stderr, c.says) || strings.Count(stderr, "\n") != 1 {
				t.Errorf("exit status %d, %q: want one line with %q", status, stderr, c.says)
			}
			if _, err := os.Stat(out); err == nil {
				t.Error("a folder is left")
			}
		})
	}
}
