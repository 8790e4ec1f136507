package main

import (
	"bytes"
	"fmt"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"shakerwatch/web/pagetest"
)

// coherence is the curve of the worst multiple coherence as the page's plot has it.
func coherence(w *pagetest.Window) []float64 {
	const data = `echarts.getInstanceByDom(document.querySelector("#plot-coherence .canvas")).getOption().series[0].data.map((point) => point[1] ?? -1)`
	return pagetest.Value[[]float64](w, data)
}

// drawn waits until the coherence plot has been drawn from at least so many refreshes.
func drawn(w *pagetest.Window, refreshes int) {
	w.Until(fmt.Sprintf(`+(document.querySelector("#plot-coherence")?.dataset.number ?? 0) >= %d`, refreshes))
}

// TestReplayInABrowser watches a minute's recording at its own pace in a browser. The plots change
// while it runs, nothing goes wrong in the page, no other host is asked for anything, and the
// results are the bytes of a replay at full pace without a dashboard.
func TestReplayInABrowser(t *testing.T) {
	t.Parallel()
	dir := longRun(t)
	rigFile, recording := filepath.Join(dir, "rig.toml"), filepath.Join(dir, "run.wav")
	quick := filepath.Join(dir, "quick")
	if status, _, stderr := shakerwatch(t, "replay", rigFile, recording, "--headless", "--pace", "0", "--out", quick); status != exitDone {
		t.Fatalf("exit status %d: %s", status, stderr)
	}

	watched := filepath.Join(dir, "watched")
	p := start(t, "replay", rigFile, recording, "--pace", "1", "--out", watched)
	w := pagetest.Open(t, p.address)
	drawn(w, 5)
	before := coherence(w)
	drawn(w, 25)
	after := coherence(w)
	same := 0
	for i := range min(len(before), len(after)) {
		if before[i] == after[i] {
			same++
		}
	}
	if len(after) < 100 || same > len(after)/10 {
		t.Errorf("%d of %d points of the coherence stayed the same over twenty refreshes", same, len(after))
	}
	p.line("Results are in")
	w.Until(`document.getElementById("ended").textContent.includes("Results are in")`)
	w.Until(`document.getElementById("known").textContent.startsWith("enough")`)
	w.Clean(p.address)
	p.interrupt()

	for _, name := range []string{"estimates.npz", "summary.json", "events.jsonl"} {
		if !bytes.Equal(readFile(t, watched, name), readFile(t, quick, name)) {
			t.Errorf("%s has other bytes than without a dashboard", name)
		}
	}
}

// TestDemoInABrowser watches the demo until its target is met, then finishes it from the page. It
// makes the picture of README.md.
func TestDemoInABrowser(t *testing.T) {
	t.Parallel()
	out := filepath.Join(t.TempDir(), "results")
	p := start(t, "--out", out)
	w := pagetest.Open(t, p.address)
	w.Until(`document.querySelectorAll("#levels li").length === 16`)
	w.Until(`document.getElementById("word").textContent === "SETTLING"`)
	drawn(w, 20)
	w.Until(`document.getElementById("word").textContent === "AVERAGING"`)
	if before := coherence(w); slices.Max(before) < 0.9 {
		t.Errorf("the highest coherence of the demo is %v", slices.Max(before))
	}
	w.Screen(1280, 1180, "light")
	drawn(w, 30)
	w.Picture("dashboard")
	w.Screen(1280, 720, "light")
	w.Click("#finish")
	w.Click("#ask button[value=finish]")
	p.line("Results are in")
	w.Until(`document.getElementById("ended").textContent.includes("Results are in")`)
	w.Clean(p.address)
	if readJSON(t, filepath.Join(out, "summary.json"))["blocks_averaged"].(float64) < 25 {
		t.Error("the results hold fewer blocks than were shown")
	}
	p.interrupt()
}

// TestTwoProgramsOnOnePort: the second says so and ends with status 2.
func TestTwoProgramsOnOnePort(t *testing.T) {
	t.Parallel()
	p := start(t)
	rigFile, recording := caseFiles("two_forces_hann")
	out := filepath.Join(t.TempDir(), "results")
	status, _, stderr := shakerwatch(t, "replay", rigFile, recording, "--listen", strings.Trim(strings.TrimPrefix(p.address, "http://"), "/"), "--out", out)
	if status != exitUnusable || !bytes.Contains([]byte(stderr), []byte("choose another port")) {
		t.Errorf("exit status %d, %q", status, stderr)
	}
	p.interrupt()
}

// TestSetupCheckInABrowser goes through the setup check of the simulated rig from the page.
func TestSetupCheckInABrowser(t *testing.T) {
	t.Parallel()
	out := filepath.Join(t.TempDir(), "check")
	p := start(t, "live", "../../acquire/demo/skid.toml", "--setup", "--blocks", "4", "--out", out)
	w := pagetest.Open(t, p.address)
	for _, stage := range []string{"muted", "zero drive", "on low"} {
		w.Until(fmt.Sprintf(`document.getElementById("setup").textContent.includes(%q) && !document.getElementById("measure").disabled && document.getElementById("measure").checkVisibility()`, stage))
		p.line("Press Enter when it is so")
		// The button works a second after a new instruction is there, so that nobody agrees unread.
		w.Until(`new Promise((done) => setTimeout(() => done(true), 1500))`)
		w.Click("#measure")
	}
	p.line("The noise measurement and the findings are in")
	w.Until(`document.getElementById("ended").textContent.includes("noise measurement")`)
	w.Clean(p.address)
	readFile(t, out, "noise.npz")
	p.interrupt()
}
