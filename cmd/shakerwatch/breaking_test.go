package main

import (
	"strconv"
	"strings"
	"testing"

	"shakerwatch/web/pagetest"
)

// soonS is how long the band may take to turn behind the end of the block that shows a fault, in
// seconds of the source, which runs in real time.
const soonS = 2

// TestBreakingInABrowser breaks the demo's rig from the page: the verdict band turns soon after the
// block that shows it, names the force, and goes back once the rig is mended.
func TestBreakingInABrowser(t *testing.T) {
	t.Parallel()
	p := start(t)
	w := pagetest.Open(t, p.address)
	w.Until(`document.getElementById("word").textContent === "AVERAGING"`)
	drawn(w, 14)                                           // the watch is armed
	w.Choose("#try select[aria-label='what breaks']", "0") // stinger off
	w.Choose("#try select[aria-label='where']", "S2")
	w.Click("#try .strong")
	w.Until(`document.getElementById("word").textContent === "STOP AND LOOK"`)
	turnedS := clock(t, w)
	if text := pagetest.Value[string](w, `document.getElementById("reason").textContent`); !strings.Contains(text, "S2") {
		t.Errorf("the band says %q, nothing of S2", text)
	}
	raisedS := seconds(t, pagetest.Value[string](w, `[...document.querySelectorAll("#events li")].find((e) => e.textContent.includes("force lost")).querySelector(".quiet").textContent.replace(" s", "")`))
	if turnedS > raisedS+soonS {
		t.Errorf("the band turned at %.1f s of the source, the block that shows it ended at %.1f s", turnedS, raisedS)
	}
	t.Logf("block ended at %.1f s, band seen turned at %.1f s", raisedS, turnedS)
	w.Picture("broken-rig")
	w.Click("#try .mend")
	w.Until(`document.getElementById("word").textContent !== "STOP AND LOOK"`)
	w.Clean(p.address)
	p.interrupt()
}

// clock is the source time that the page shows.
func clock(t *testing.T, w *pagetest.Window) float64 {
	t.Helper()
	text := pagetest.Value[string](w, `document.getElementById("clock").textContent`)
	return seconds(t, strings.TrimSuffix(strings.TrimPrefix(text, "source time "), " s"))
}

func seconds(t *testing.T, text string) float64 {
	t.Helper()
	v, err := strconv.ParseFloat(text, 64)
	if err != nil {
		t.Fatal(err)
	}
	return v
}
