package web

import (
	"fmt"
	"testing"

	"github.com/chromedp/chromedp/kb"

	"shakerwatch/estimate"
	"shakerwatch/estimate/watch"
	"shakerwatch/web/pagetest"
)

// A desk is a hub, its feed and a page of it, for tests of what people do.
type desk struct {
	t       *testing.T
	f       *feed
	h       *Hub
	w       *pagetest.Window
	address string
	st      Status
}

func newDesk(t *testing.T, run Run, q, p int) *desk {
	t.Parallel() // most of the time is waiting
	f := newFeed(t, q, p, 401)
	run.Rig, run.Kind, run.Saves = f.rig, "demo", true
	d := &desk{t: t, f: f, h: NewHub(run)}
	d.address, _ = serve(t, d.h)
	f.keepFresh(t, d.h, -1)
	f.add(40)
	d.st, _ = f.refresh(d.h)
	d.w = pagetest.Open(t, d.address)
	d.w.Until(drawn("coherence", 1))
	return d
}

// publish publishes the status again, as change has changed it.
func (d *desk) publish(change func(*Status)) {
	change(&d.st)
	d.h.Refresh(d.st, nil)
}

// take is the next command that a page has asked for.
func (d *desk) take(want Command) {
	d.t.Helper()
	if got := <-d.h.Commands(); got != want {
		d.t.Fatalf("command %+v, want %+v", got, want)
	}
}

func text(id string) string { return fmt.Sprintf("document.getElementById(%q).textContent", id) }

func TestPageStopAndLook(t *testing.T) {
	d := newDesk(t, Run{}, 2, 14)
	for n := range 3 {
		d.h.PublishEvent(watch.Event{TimeS: float64(10 * n), Edge: watch.Cleared, Kind: watch.Gap, Channels: []string{}, Text: "No frames were lost from then on."})
	}
	d.h.PublishEvent(watch.Event{TimeS: 61.25, Block: 90, SinceBlock: 88, Edge: watch.Raised, Kind: "force-lost", Channels: []string{"S2"},
		BandsHz: [][2]float64{{100, 120}}, Text: "S2 fell by 31 dB from 60.1 s on while S1 runs. Turn the drive down, then look at its stinger."})
	d.h.PublishEvent(watch.Event{TimeS: 62, Block: 91, SinceBlock: 91, Edge: watch.Raised, Kind: "low-signal", Channels: []string{"A5z", "A9z"}, Text: "A5z and A9z are near their noise."})
	d.publish(func(st *Status) {
		st.Verdict = estimate.Verdict{State: "stop-and-look", Reasons: []string{"S2 is lost since 60.1 s: turn the drive down, look at its stinger", "A5z, A9z: near their noise"}}
	})
	d.w.Until(text("word") + ` === "STOP AND LOOK"`)
	d.w.Until(`document.querySelector("#sketch [data-state=fault]")?.getAttribute("aria-label") === "point 2: FAULT: force lost; S2, <img src=x onerror=alert(1)>"`)
	d.w.Until(`[...document.querySelectorAll("#levels [data-mark=fault] .name")].map((e) => e.textContent).join() === "S2"`)
	d.w.Until(text("say") + `.includes("low signal")`)
	for _, size := range [][2]int64{{1280, 720}, {1920, 1080}} {
		for _, scheme := range []string{"light", "dark"} {
			d.w.Screen(size[0], size[1], scheme)
			d.w.Picture(fmt.Sprintf("stop-%d-%s", size[0], scheme))
		}
	}
	d.w.Press("w")
	d.w.Until(`document.documentElement.dataset.wall === "true"`)
	d.w.Until(`[...document.querySelectorAll(".plot")].filter((e) => e.checkVisibility()).map((e) => e.id).join() === "plot-forces"`)
	d.w.Picture("wall-stop")
	d.w.Press(kb.Escape)
	d.w.Screen(1280, 1900, "light")
	d.w.Picture("stop-log")
	d.w.Clean(d.address)
}

func TestPagePause(t *testing.T) {
	d := newDesk(t, Run{Faults: testFaults}, 2, 14)
	d.w.Picture("demo")
	d.w.Press("p")
	d.take(Command{Kind: Pause})
	d.w.Until(text("told") + `.includes("Pause was asked for")`)
	d.w.Picture("pausing")
	d.publish(func(st *Status) { st.Paused = true })
	d.w.Until(text("word") + ` === "PAUSED" && ` + text("pause") + ` === "Resume averaging"`)
	d.w.Picture("paused")
	d.w.Screen(1920, 1080, "dark")
	d.w.Press("w")
	d.w.Picture("wall-paused")
	d.w.Click("#keys")
	d.w.Picture("wall-keys")
	d.w.Clean(d.address)
}

func TestPageNoteAndStartOver(t *testing.T) {
	d := newDesk(t, Run{}, 1, 2)
	d.w.Press("s")
	d.w.Until(`document.getElementById("over").open`)
	d.w.Picture("start-over")
	d.w.Press(kb.Enter) // what has the focus is to keep it
	d.w.Until(`!document.getElementById("over").open`)
	d.w.Click("#start-over")
	d.w.Press(kb.Escape)
	d.w.Until(`!document.getElementById("over").open`)

	d.w.Press("n")
	d.w.Until(`document.activeElement.id === "note-text"`)
	pagetest.Value[string](d.w, `document.getElementById("note-text").value = ""`) // a browser that is driven types the key as well
	d.w.Type("#note-text", "hatch \u202e open, <b>not</b> closed")
	d.w.Picture("note")
	d.w.Press(kb.Enter)
	d.take(Command{Kind: Note, Text: "hatch   open, <b>not</b> closed"}) // and no start before it
	d.h.PublishEvent(watch.Event{TimeS: 12, Edge: watch.Raised, Kind: "note", Channels: []string{}, Text: "hatch open, <b>not</b> closed"})
	d.w.Until(`document.querySelector("#events li .what")?.textContent === "hatch open, <b>not</b> closed"`)
	if pagetest.Value[bool](d.w, `!document.getElementById("news-seen").hidden`) {
		t.Error("a note is to be acknowledged")
	}

	d.w.Click("#start-over")
	d.w.Click("#over button[value=over]")
	d.take(Command{Kind: StartOver})
	d.w.Clean(d.address)
}

// A second page sees what the first one does.
func TestPageAcknowledge(t *testing.T) {
	d := newDesk(t, Run{}, 2, 3)
	for n := range 3 {
		d.h.PublishEvent(watch.Event{TimeS: float64(n), SinceBlock: int64(n), Edge: watch.Raised, Kind: "overrange", Channels: []string{"S1"}, BandsHz: [][2]float64{{100, 120}}, Text: fmt.Sprintf("number %d", n+1)})
	}
	other := pagetest.Open(t, d.address)
	for _, w := range []*pagetest.Window{d.w, other} {
		w.Until(text("event-count") + ` === "3 · 3 not acknowledged" && ` + text("news-text") + `.includes("number 3")`)
	}
	d.w.Press("a")
	for _, w := range []*pagetest.Window{d.w, other} {
		w.Until(text("event-count") + ` === "3 · 2 not acknowledged" && ` + text("news-text") + `.includes("number 2")`)
	}
	other.Focus("#events li:nth-child(3) .seen")
	other.Press(kb.Enter)
	d.w.Until(text("event-count") + ` === "3 · 1 not acknowledged"`)
	d.w.Click("#news-band")
	d.w.Until(`echarts.getInstanceByDom(document.querySelector("#plot-coherence .canvas")).getOption().xAxis[0].max < 130`)
	other.Click("#news-seen")
	d.w.Until(text("event-count") + ` === "3" && document.getElementById("news").dataset.edge === "past"`)
	d.w.Clean(d.address)
	other.Clean(d.address)
}

func TestPageBreaksTheSimulatedRig(t *testing.T) {
	d := newDesk(t, Run{Faults: testFaults}, 2, 3)
	d.w.Choose("#try select:nth-of-type(2)", "S2")
	d.w.Click("#try .strong")
	d.take(Command{Kind: Break, Fault: "detach", Target: "S2"})
	d.w.Until(`document.querySelector("#try .mend")?.textContent === "Mend stinger off at S2" && document.querySelector("#try .strong").disabled`)
	d.w.Picture("broken")
	d.w.Click("#try .mend")
	d.take(Command{Kind: Mend, Fault: "detach", Target: "S2"})
	d.w.Until(`document.querySelector("#try .mend") === null && !document.querySelector("#try .strong").disabled`)
	d.w.Choose("#try select", "1")
	d.w.Until(`document.querySelector("#try select:nth-of-type(2)").hidden`)
	d.w.Click("#try .strong")
	d.take(Command{Kind: Break, Fault: "lost"})
	d.w.Clean(d.address)
}

func TestPageSaysWhatIsNotDone(t *testing.T) {
	d := newDesk(t, Run{}, 1, 2)
	for range commandsWaiting {
		d.h.askCommand(Command{Kind: StartOver})
	}
	d.w.Click("#pause")
	d.w.Until(text("told") + ` === "NOT DONE: The program is busy with what was asked before. Try again in a moment."`)
	d.w.Until(text("pause") + ` === "Pause averaging" && !document.getElementById("pause").disabled`)
	d.w.Picture("refused")
	d.w.Clean(d.address)
}

func TestPageHeldPeaks(t *testing.T) {
	d := newDesk(t, Run{}, 2, 3)
	loud := Levels{TimeS: 1e6, RMS: make([]float64, 5), Peak: []float64{1, 0.1, 0.1, 0.1, 0.1}, Block: 0.5}
	d.h.PublishLevels(loud)
	left := `document.querySelector("#levels li:first-child .left").textContent`
	d.w.Until(left + ` === "▲ was at limit"`) // two seconds later it is no longer now
	d.w.Click("#hold")
	d.w.Until(left + `.endsWith(" dB")`)
	d.w.Press("h")
	d.w.Until(left + ` === "▲ was at limit"`)
	d.w.Click("#levels li:first-child .left")
	d.w.Until(left + `.endsWith(" dB")`)
	d.h.PublishLevels(loud)
	d.w.Until(left + ` === "▲ was at limit"`)
	d.w.Press("r")
	d.w.Until(left + `.endsWith(" dB")`)
	d.w.Clean(d.address)
}

func TestPageSketch(t *testing.T) {
	d := newDesk(t, Run{}, 2, 14)
	d.w.Until(`document.querySelectorAll("#plane .place").length === 14 && document.querySelectorAll("#plane .pushed").length === 2`)
	d.w.Until(`document.querySelector("#planes [aria-pressed=true]").textContent === "xy"`) // 3 m by 0.8 m by 0.6 m
	d.w.Click("#plane .place:nth-last-child(9)")
	d.w.Until(text("point") + `.startsWith("Point 6: well") && document.querySelector("#plot-response .curves").textContent.includes("A6z/S1")`)
	d.w.Press(kb.ArrowRight)
	d.w.Press(kb.Enter)
	d.w.Until(text("point") + `.startsWith("Point 7") && document.querySelector("#plot-response .curves").textContent.includes("A7z/S1")`)
	d.w.Picture("sketch")
	before := pagetest.Value[string](d.w, `document.querySelector("#plane .place:last-child circle").getAttribute("cy")`)
	d.w.Press("v")
	d.w.Until(`document.querySelector("#planes [aria-pressed=true]").textContent === "xz"`)
	if after := pagetest.Value[string](d.w, `document.querySelector("#plane .place:last-child circle").getAttribute("cy")`); after == before {
		t.Error("from another side the point stands where it stood")
	}
	d.w.Clean(d.address)
}

func TestPageFindsAChannelAmongMany(t *testing.T) {
	d := newDesk(t, Run{}, 4, 60)
	shown := func(names string) {
		t.Helper()
		d.w.Until(`[...document.querySelectorAll("#levels li:not([hidden]) .name")].map((e) => e.textContent).join() === "` + names + `"`)
	}
	d.h.PublishEvent(watch.Event{Edge: watch.Raised, Kind: "dead-channel", Channels: []string{"A57z"}, Text: "A57z is constant."})
	d.h.PublishEvent(watch.Event{Edge: watch.Raised, Kind: "low-signal", Channels: []string{"A33z"}, Text: "A33z is near its noise."})
	d.w.Until(`[...document.querySelectorAll("#levels .name")].slice(0, 2).map((e) => e.textContent).join() === "A57z,A33z"`) // worst first
	d.w.Picture("worst-first")
	d.w.Press("/")
	d.w.Until(`document.activeElement.id === "search"`)
	d.w.Choose("#order", "name")
	for _, search := range []struct{ words, want string }{
		{"4 +Z a4", "A4z,A40z,A41z,A42z,A43z,A44z,A45z,A46z,A47z,A48z,A49z"},
		{"s", "<img src=x onerror=alert(1)>,S1,S2,S3,S4"},
		{"nowhere", ""},
	} {
		pagetest.Value[string](d.w, `document.getElementById("search").value = ""`)
		d.w.Type("#search", search.words)
		shown(search.want)
	}
	d.w.Until(text("matches") + ` === "no such channel"`)
	d.w.Clean(d.address)
}

// Single letters are keys only where nobody writes, and can be turned off.
func TestPageKeysCanBeTurnedOff(t *testing.T) {
	d := newDesk(t, Run{}, 1, 2)
	d.w.Focus("#choices input[type=number]")
	d.w.Press("s")
	d.w.Focus("#log")
	d.w.Press("?")
	d.w.Until(`document.getElementById("key-box").open && !document.getElementById("over").open`)
	rows := pagetest.Value[int](d.w, `document.querySelectorAll("#key-list dt").length`)
	for _, key := range pagetest.Value[[]string](d.w, `[...document.querySelectorAll("[data-key]")].map((e) => e.dataset.key)`) {
		if !pagetest.Value[bool](d.w, fmt.Sprintf(`[...document.querySelectorAll("#key-list dt")].some((e) => e.textContent === %q)`, key)) {
			t.Errorf("key %s of a button is not among the %d keys shown", key, rows)
		}
	}
	d.w.Press("s") // in a question, letters do nothing
	d.w.Click("#letters")
	d.w.Press(kb.Escape)
	d.w.Press("s")
	d.w.Press("?")
	d.w.Until(`document.getElementById("key-box").open && !document.getElementById("over").open`)
	d.w.Click("#letters")
	d.w.Press(kb.Escape)
	d.w.Press("s")
	d.w.Until(`document.getElementById("over").open`)
	d.w.Clean(d.address)
}
