package web

import (
	"fmt"
	"math"
	"strings"
	"testing"

	"github.com/chromedp/cdproto/input"
	"github.com/chromedp/chromedp/kb"

	"shakerwatch/estimate"
	"shakerwatch/estimate/setup"
	"shakerwatch/web/pagetest"
)

// found are findings of a stage, invented; what is measured on a skid has such numbers.
func found(stage setup.Stage) []setup.Finding {
	unknown := estimate.Number(math.NaN())
	var list []setup.Finding
	add := func(severity setup.Severity, channels string, number estimate.Number, unit, text string, bands ...[2]float64) {
		f := setup.Finding{Stage: stage, Severity: severity, Channels: []string{}, Number: number, Unit: unit, BandsHz: bands, Text: text}
		if channels != "" {
			f.Channels = strings.Split(channels, ", ")
			f.Text = channels + ": " + text
		}
		list = append(list, f)
	}
	switch stage {
	case setup.Muted:
		add(setup.Stop, "A7z", 0, "V", "every sample is 0 V with the amplifiers muted: look at cable, connector, sensor supply and channel number")
		for i := range 13 {
			add(setup.Info, fmt.Sprintf("A%dz", i+1), 0.00213+estimate.Number(i)*1e-4, "m/s²", "noise 0.00213 m/s² rms from 10 Hz to 1000 Hz with the amplifiers muted, 82.1 dB below its limit")
		}
	case setup.Idle:
		add(setup.Look, "S2", 0.41, "N", "hum of 50 Hz mains, strongest 0.41 N rms at 150 Hz, 22.4 dB above the noise around it: ground amplifier and conditioner at one place", [2]float64{49.4, 50.6}, [2]float64{149.4, 150.6}, [2]float64{249.4, 250.6}, [2]float64{349.4, 350.6})
		add(setup.Info, "S1", unknown, "dB", "what the amplifiers add to the noise is unknown, as there was none: measure both stages again")
		add(setup.Info, "S2", 1.2, "dB", "noise changes by +1.2 dB when the amplifiers come on")
	case setup.Low:
		add(setup.Look, "A3z", 4.1, "dB", "headroom 4.1 dB, peak 6.24 of 10 V: lower its gain by 8 dB before the drive goes up")
		add(setup.Stop, "S1, A1z", -0.97, "", "power flows out of the structure over most of the band: turn the sensor or the sign of its sensitivity")
		add(setup.Info, "S1", 31, "dB", "headroom 31.0 dB, peak 0.28 of 10 V")
	}
	return list
}

// A walk is a setup check that a test drives in the place of the program.
type walk struct {
	h     *Hub
	state SetupState
}

// wait has the rig wait for a person at that stage.
func (w *walk) wait(stage setup.Stage) {
	w.state.Stage, w.state.Waiting, w.state.Part = stage, true, 0
	w.h.PublishSetup(w.state)
}

// measure shows so much of a stage as measured.
func (w *walk) measure(part float64) {
	w.state.Waiting, w.state.Part = false, part
	w.h.PublishSetup(w.state)
}

// judge adds a stage's findings.
func (w *walk) judge() {
	w.state.Done = append(w.state.Done, w.state.Stage)
	w.state.Findings = append(w.state.Findings, found(w.state.Stage)...)
}

// end ends the check.
func (w *walk) end() {
	w.state.Ended, w.state.Waiting, w.state.Summary = true, false, setup.Summary(w.state.Findings)
	w.h.PublishSetup(w.state)
	w.h.Ended("The noise measurement and the findings are in out.")
}

const (
	canMeasure    = `document.getElementById("measure").getAttribute("aria-disabled") === "false"`
	cannotMeasure = `document.getElementById("measure").getAttribute("aria-disabled") === "true"`
)

// says waits until an element has a text.
func says(w *pagetest.Window, id, text string) {
	w.Until(fmt.Sprintf(`document.getElementById(%q).textContent.includes(%q)`, id, text))
}

// stageStates are the words at the stages.
func stageStates(w *pagetest.Window) string {
	return pagetest.Value[string](w, `[...document.querySelectorAll("#stages .state")].map((e) => e.textContent).join(", ")`)
}

// everyScreen takes pictures of what the page shows.
func everyScreen(w *pagetest.Window, name string) {
	for _, size := range [][2]int64{{1920, 1080}, {1280, 720}} {
		for _, scheme := range []string{"dark", "light"} {
			w.Screen(size[0], size[1], scheme)
			w.Picture(fmt.Sprintf("%s-%d-%s", name, size[0], scheme))
		}
	}
}

func TestPageLeadsThroughTheSetupCheck(t *testing.T) {
	t.Parallel()
	f := newFeed(t, 2, 14, 401)
	h := NewHub(Run{Rig: f.rig, Kind: "soundcard", Saves: true})
	address, _ := serve(t, h)
	f.keepFresh(t, h, -1)
	w, check := pagetest.Open(t, address), &walk{h: h}
	w.Until(`document.querySelectorAll("#levels li").length === 16`)
	if pagetest.Value[int](w, `document.getElementById("setup").offsetHeight`) != 0 {
		t.Error("the panel stands there without a setup check")
	}

	wantStates := []string{"▶ now, ○ next, ○ next", "✓ done, ▶ now, ○ next", "✓ done, ✓ done, ▶ now"}
	for i, stage := range setup.Stages() {
		check.wait(stage)
		do, beware := instruction(stage)
		says(w, "setup-do", do)
		says(w, "setup-beware", beware)
		if got := stageStates(w); got != wantStates[i] {
			t.Errorf("the stages are %s, want %s", got, wantStates[i])
		}
		w.Until(canMeasure)
		fits := pagetest.Value[bool](w, `["task", "levels"].every((id) => document.getElementById(id).getBoundingClientRect().bottom <= innerHeight)`)
		if !fits {
			t.Errorf("%v: at 1280 by 720 instruction, button and levels do not fit without scrolling", stage)
		}
		everyScreen(w, "setup-"+stage.String())
		w.Click("#measure")
		<-h.Proceed()
		says(w, "measure", "Starting…")
		check.measure(0.375)
		says(w, "setup-part", "38 %")
		w.Until(cannotMeasure)
		w.Picture("setup-measuring-" + stage.String())
		w.Click("#measure") // does nothing while measuring
		check.judge()
	}
	check.end()
	says(w, "ended", "Setup check ended. The noise measurement and the findings are in out.")
	says(w, "setup-do", "2 to stop for, 2 to look at, 1 unknown, 15 in order.")
	says(w, "setup-word", "STOP")
	w.Until(`document.querySelectorAll("#finding-rows tr").length === 20`)
	if got := stageStates(w); got != "✓ done, ✓ done, ✓ done" {
		t.Errorf("at the end the stages are %s", got)
	}
	if n := h.proceeds(); n != 0 {
		t.Errorf("%d clicks too many were taken", n)
	}
	marks := pagetest.Value[string](w, `[...document.querySelectorAll("#finding-rows .badge")].slice(0, 6).map((e) => e.textContent + " " + e.querySelector("use").getAttribute("href")).join()`)
	const want = "STOP #shape-stop-and-look,STOP #shape-stop-and-look,LOOK #shape-look,LOOK #shape-look,UNKNOWN #shape-unknown,IN ORDER #shape-enough"
	if marks != want {
		t.Errorf("marks are %s, want %s", marks, want)
	}
	row := pagetest.Value[string](w, `[...document.querySelectorAll("#finding-rows tr")[2].children].map((e) => e.textContent).join(" | ")`)
	if want := "LOOK | 2 · amplifiers on at zero drive | S2 | 0.41\u00a0N | hum of 50 Hz mains, strongest 0.41 N rms at 150 Hz, 22.4 dB above the noise around it: " +
		"ground amplifier and conditioner at one place (at 49.4 to 50.6, 149.4 to 150.6, 249.4 to 250.6 Hz and in 1 band more)"; row != want {
		t.Errorf("a row is %s, want %s", row, want)
	}
	everyScreen(w, "setup-end")
	hidden := pagetest.Value[bool](w, `["verdict", "choices", "plots", "setup-act"].every((id) => document.getElementById(id).offsetHeight === 0)`)
	shown := pagetest.Value[bool](w, `["levels", "setup", "findings"].every((id) => document.getElementById(id).offsetHeight > 0) && document.querySelector(".safety").offsetHeight > 0`)
	if !hidden || !shown {
		t.Errorf("of what does not belong to a setup check all is hidden: %v; what does is shown: %v", hidden, shown)
	}
	w.Clean(address)
}

// By keys alone; and a key that is held down, or pressed twice, does not answer the next instruction.
func TestSetupCheckByKeys(t *testing.T) {
	t.Parallel()
	f := newFeed(t, 1, 2, 101)
	h := NewHub(Run{Rig: f.rig, Kind: "soundcard", Saves: true})
	address, _ := serve(t, h)
	f.keepFresh(t, h, -1)
	w, check := pagetest.Open(t, address), &walk{h: h}
	check.wait(setup.Muted)
	w.Until(canMeasure)
	for range 5 {
		w.Press(kb.Tab)
		if pagetest.Value[string](w, `document.activeElement.id`) == "measure" {
			break
		}
	}
	for _, stage := range setup.Stages() {
		if at := pagetest.Value[string](w, `document.activeElement.id`); at != "measure" {
			t.Fatalf("%v: the focus is at %q", stage, at)
		}
		w.Until(canMeasure)
		held := input.DispatchKeyEventParams{Type: input.DispatchKeyEventTypeKeyDown, Key: "Enter", Code: "Enter", WindowsVirtualKeyCode: 13, Text: "\r", AutoRepeat: new(true)}
		pagetest.Command(w, input.DispatchKeyEvent, held)
		if pagetest.Value[bool](w, cannotMeasure) {
			t.Fatalf("%v: a key that is held down since before started the measurement", stage)
		}
		w.Press(kb.Enter)
		<-h.Proceed()
		check.measure(0.5)
		says(w, "setup-part", "50 %")
		check.judge()
		if stage == setup.Low {
			break
		}
		// The second of a double press comes the moment that the next stage stands there. Were it taken, the
		// button would be spent.
		pagetest.Value[bool](w, `new MutationObserver((_, self) => { self.disconnect(); document.getElementById("measure").click(); }).observe(document.getElementById("stages"), { subtree: true, attributeFilter: ["data-state"] }) === undefined`)
		check.wait(stage + 1)
		w.Until(fmt.Sprintf(`document.querySelector("#stages li:nth-child(%d)").dataset.state === "now"`, int(stage)+2))
	}
	check.end()
	says(w, "setup-word", "STOP")
	w.Clean(address)
}

// A page that lost the program, or shows old data, starts nothing.
func TestSetupCheckSaysThatDataAreOld(t *testing.T) {
	t.Parallel()
	f := newFeed(t, 1, 2, 101)
	h := NewHub(Run{Rig: f.rig, Kind: "soundcard", Saves: true})
	address, stop := serve(t, h)
	fresh := f.keepFresh(t, h, -1)
	w, check := pagetest.Open(t, address), &walk{h: h}
	check.wait(setup.Low)
	w.Until(canMeasure)
	fresh()
	w.Until(`!document.getElementById("old").hidden && document.title.startsWith("OLD DATA")`)
	w.Until(cannotMeasure)
	w.Picture("setup-old")
	w.Click("#measure")
	stop()
	if n := h.proceeds(); n != 0 {
		t.Errorf("%d clicks were taken from a page with old data", n)
	}
}

// Without a bad finding, what was not measured still keeps it from being in order.
func TestSetupCheckIsNotInOrderWithoutAllStages(t *testing.T) {
	t.Parallel()
	f := newFeed(t, 1, 2, 101)
	h := NewHub(Run{Rig: f.rig, Kind: "demo", Saves: true})
	address, _ := serve(t, h)
	f.keepFresh(t, h, -1)
	w, check := pagetest.Open(t, address), &walk{h: h}
	check.state.Findings = found(setup.Low)[2:]
	for _, want := range []string{"UNKNOWN", "UNKNOWN", "IN ORDER"} {
		check.wait(setup.Stage(len(check.state.Done)))
		says(w, "setup-word", "YOUR TURN")
		check.state.Done = append(check.state.Done, check.state.Stage)
		check.state.Ended, check.state.Summary = true, "1 in order"
		h.PublishSetup(check.state)
		says(w, "setup-word", want)
		check.state.Ended = false
	}
	w.Clean(address)
}

func TestSetupCheckCanEndEarly(t *testing.T) {
	t.Parallel()
	f := newFeed(t, 1, 2, 101)
	h := NewHub(Run{Rig: f.rig, Kind: hostile, Saves: true})
	address, _ := serve(t, h)
	f.keepFresh(t, h, -1)
	w, check := pagetest.Open(t, address), &walk{h: h}
	check.wait(setup.Muted)
	says(w, "finish", "End the check…")
	check.judge()
	check.state.Findings = append(check.state.Findings, setup.Finding{Severity: setup.Look, Channels: []string{hostile}, Number: 1, Unit: hostile, Text: hostile + ": " + hostile})
	check.wait(setup.Idle)
	w.Until(`document.querySelector("#finding-rows tr:nth-child(2) .what")?.textContent.includes("<img src=x")`)
	w.Click("#finish")
	says(w, "ask", "End the setup check?")
	w.Picture("setup-ask")
	w.Click("#ask button[value=finish]")
	<-h.Finish()
	says(w, "finish", "Ending…")
	w.Until(cannotMeasure)
	check.end()
	says(w, "setup-more", "Not measured: amplifiers on at zero drive; shakers on low.")
	w.Picture("setup-early")
	if n := pagetest.Value[int](w, `document.querySelectorAll("img, [onerror]").length`); n != 0 {
		t.Errorf("%d elements were made of a name", n)
	}
	w.Clean(address)
}

// 512 channels with ten findings each.
func TestSetupCheckOfManyChannels(t *testing.T) {
	t.Parallel()
	f := newFeed(t, 8, 504, 101)
	h := NewHub(Run{Rig: f.rig, Kind: "pipe", Saves: true})
	address, _ := serve(t, h)
	f.keepFresh(t, h, 9)
	w, check := pagetest.Open(t, address), &walk{h: h}
	for n := range 5120 {
		check.state.Findings = append(check.state.Findings, setup.Finding{
			Stage: setup.Muted, Severity: setup.Severity(n % 3), Channels: []string{fmt.Sprintf("A%dz", n)}, Number: 0.002, Unit: "m/s²",
			Text: "noise 0.002 m/s² rms from 10 Hz to 1000 Hz with the amplifiers muted, 82.1 dB below its limit",
		})
	}
	check.wait(setup.Idle)
	w.Until(`document.querySelectorAll("#finding-rows tr").length > 100`)
	w.Until(canMeasure)
	w.Picture("setup-many")
	w.Clean(address)
}
