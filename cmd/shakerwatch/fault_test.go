package main

import (
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// TestFaultIsToldAndKeptOut breaks the demo's rig: the event names the force, and no averaged block
// reaches into the time of the fault.
func TestFaultIsToldAndKeptOut(t *testing.T) {
	out := filepath.Join(t.TempDir(), "results")
	status, stdout, stderr := shakerwatch(t, "--headless", "--blocks", "34", "--fault", "detach@12s-20s:S2", "--out", out)
	if status != exitDone {
		t.Fatalf("exit status %d: %s", status, stderr)
	}
	if !strings.Contains(stdout, "force-lost raised: S2") || !strings.Contains(stdout, "force-lost cleared: S2") {
		t.Errorf("nothing on the force in\n%s", stdout)
	}
	if !strings.Contains(stdout, "set aside: ") {
		t.Errorf("nothing on why blocks were set aside in\n%s", stdout)
	}
	summary := readJSON(t, filepath.Join(out, "summary.json"))
	const rateHz, block = 2560, 4096 // of the demo
	averaged := 0
	for _, start := range numbers(t, summary["block_starts"]) {
		averaged++
		if start+block > 12*rateHz && start < 20*rateHz {
			t.Errorf("the block at %g s holds the fault and is averaged", start/rateHz)
		}
	}
	if averaged != 34 || summary["set_aside"].(map[string]any)["force-lost"] == nil {
		t.Errorf("%d blocks averaged, set aside: %v", averaged, summary["set_aside"])
	}
}

func TestFaultsAreListed(t *testing.T) {
	status, stdout, _ := shakerwatch(t, "--fault", "list")
	if status != exitDone || !strings.Contains(stdout, "detach") || !strings.Contains(stdout, "knock") {
		t.Errorf("exit status %d:\n%s", status, stdout)
	}
}

func TestUnusableFault(t *testing.T) {
	for _, fault := range []string{"detach", "detach@1s:S9", "nothing@1s:S1"} {
		out := filepath.Join(t.TempDir(), "results")
		status, _, stderr := shakerwatch(t, "--headless", "--fault", fault, "--out", out)
		if status != exitUnusable || !strings.HasPrefix(stderr, "--fault: ") || strings.Count(stderr, "\n") != 1 {
			t.Errorf("%s: exit status %d, %q: want one line", fault, status, stderr)
		}
		if _, err := os.Stat(out); err == nil {
			t.Errorf("%s: a folder is left", fault)
		}
	}
}
