package web

import (
	"fmt"
	"net"
	"sync"
	"testing"
	"time"

	"github.com/chromedp/cdproto/input"
	"github.com/chromedp/chromedp/kb"

	"shakerwatch/estimate/watch"
	"shakerwatch/web/pagetest"
)

// serve serves a hub at an address of its own until stop, or the end of the test.
func serve(t *testing.T, h *Hub) (address string, stop func()) {
	t.Helper()
	l, err := net.Listen("tcp", "127.0.0.1:0")
	if err != nil {
		t.Fatal(err)
	}
	s := NewServer(h, nil)
	served := make(chan error, 1)
	go func() { served <- s.Serve(l) }()
	stop = sync.OnceFunc(func() {
		if err := s.Close(); err != nil {
			t.Errorf("close: %v", err)
		}
		if err := <-served; err != nil {
			t.Errorf("serve: %v", err)
		}
	})
	t.Cleanup(stop)
	return URL(l.Addr()), stop
}

// keepFresh publishes levels ten times a second, channel loud at its limit, until stop.
func (f *feed) keepFresh(t *testing.T, h *Hub, loud int) (stop func()) {
	done := make(chan struct{})
	var wg sync.WaitGroup
	wg.Go(func() {
		ticks := time.NewTicker(100 * time.Millisecond)
		defer ticks.Stop()
		for n := 0; ; n++ {
			h.PublishLevels(f.levels(float64(n)/10, loud))
			select {
			case <-ticks.C:
			case <-done:
				return
			}
		}
	})
	stop = sync.OnceFunc(func() {
		close(done)
		wg.Wait()
	})
	t.Cleanup(stop)
	return stop
}

// series is the data of one series of a plot, as its chart has it.
func series(w *pagetest.Window, plot string, index int) [][2]*float64 {
	return pagetest.Value[[][2]*float64](w, fmt.Sprintf(`echarts.getInstanceByDom(document.querySelector("#plot-%s .canvas")).getOption().series[%d].data`, plot, index))
}

const (
	responsePicker  = "#choices .group:nth-child(1) .picker"
	coherencePicker = "#choices .group:nth-child(2) .picker"
)

// choose takes the first of the responses that a list finds by some letters.
func choose(w *pagetest.Window, picker, letters string) {
	w.Click(picker + " button")
	for _, key := range letters {
		w.Press(string(key))
	}
	pressEnter(w)
}

// pressEnter is the key as a keyboard has it: when the page takes it, no character follows.
func pressEnter(w *pagetest.Window) {
	for _, kind := range []input.DispatchKeyEventType{input.DispatchKeyEventTypeRawKeyDown, input.DispatchKeyEventTypeKeyUp} {
		pagetest.Command(w, input.DispatchKeyEvent, input.DispatchKeyEventParams{Type: kind, Key: "Enter", Code: "Enter", WindowsVirtualKeyCode: 13})
	}
}

func drawn(plot string, number int) string {
	return fmt.Sprintf(`document.querySelector("#plot-%s")?.dataset.number === "%d"`, plot, number)
}

func TestPageShowsARun(t *testing.T) {
	f := newFeed(t, 2, 14, 1601)
	h := NewHub(Run{Rig: f.rig, Kind: "demo", Saves: true})
	address, _ := serve(t, h)
	f.keepFresh(t, h, 3)
	w := pagetest.Open(t, address)

	w.Until(`document.querySelectorAll("#levels li").length === 16`)
	w.Until(`document.querySelector("#levels [data-level=limit] .left").textContent.includes("AT LIMIT")`)
	w.Picture("waiting")

	f.add(12)
	f.refresh(h)
	w.Until(drawn("coherence", 1) + ` && ` + option("coherence", `series[0].data.length`) + ` < 600`) // as many points as the plot shows
	first := series(w, "coherence", 0)
	f.add(30)
	f.refresh(h)
	w.Until(drawn("coherence", 2))
	second := series(w, "coherence", 0)
	if len(first) < leastPoints/2 || len(second) != len(first) {
		t.Fatalf("coherence has %d, then %d points", len(first), len(second))
	}
	same := 0
	for i := range first {
		if *first[i][1] == *second[i][1] {
			same++
		}
	}
	if same > len(first)/10 {
		t.Errorf("%d of %d points of the coherence stayed the same after 30 more blocks", same, len(first))
	}
	if word := pagetest.Value[string](w, `document.getElementById("word").textContent`); word != "AVERAGING" {
		t.Errorf("the verdict is %q", word)
	}
	visible := pagetest.Value[bool](w, `["verdict", "levels", "plot-coherence"].every((id) => document.getElementById(id).getBoundingClientRect().bottom <= innerHeight)`)
	if !visible {
		t.Error("at 1280 by 720 verdict, levels and coherence do not fit without scrolling")
	}
	for _, size := range [][2]int64{{1280, 720}, {1920, 1080}} {
		for _, scheme := range []string{"light", "dark"} {
			w.Screen(size[0], size[1], scheme)
			w.Picture(fmt.Sprintf("page-%d-%s", size[0], scheme))
		}
	}
	w.Screen(1280, 2000, "light")
	for _, plot := range []string{"coherence", "independence", "response", "forces", "reciprocity", "convergence", "map"} {
		w.Until(drawn(plot, 2))
	}
	w.Picture("whole")
	w.Clean(address)
}

// Every place where a name from the rig file or an event can come up.
func TestPageHostileNames(t *testing.T) {
	f := newFeed(t, 2, 4, 401)
	f.rig.Title = hostile
	f.rig.Forces[0].Name = hostile + "1"
	f.rig.Responses[0].Name = hostile + "2"
	h := NewHub(Run{Rig: f.rig, Kind: hostile, Saves: true})
	address, _ := serve(t, h)
	f.keepFresh(t, h, 1)
	w := pagetest.Open(t, address)
	h.PublishEvent(watch.Event{TimeS: 1, Edge: watch.Raised, Kind: hostile, Channels: []string{hostile}, BandsHz: [][2]float64{{100, 120}}, Text: hostile})
	f.add(12)
	f.refresh(h)
	w.Until(drawn("coherence", 1))
	choose(w, coherencePicker, "<img")
	w.Until(`document.querySelector(".chip")?.textContent.includes("<img src=x")`)
	w.Until(`document.querySelector("#events .what")?.textContent.includes("<img src=x")`)
	w.Mouse(input.DispatchMouseEventTypeMouseMoved, "coherence", 0.5, 0.5)
	w.Until(`document.querySelector("#plot-coherence .readout")?.textContent.includes("<img src=x")`)
	h.Ended(hostile)
	w.Until(`document.getElementById("ended").textContent.includes("<img src=x")`)
	w.Picture("hostile")
	if n := pagetest.Value[int](w, `document.querySelectorAll("img, [onerror]").length`); n != 0 {
		t.Errorf("%d elements were made of a name", n)
	}
	w.Clean(address)
}

func TestPageReadsValuesInAllPlots(t *testing.T) {
	f := newFeed(t, 2, 5, 801)
	h := NewHub(Run{Rig: f.rig, Kind: "soundcard", Saves: true})
	address, _ := serve(t, h)
	f.keepFresh(t, h, -1)
	w := pagetest.Open(t, address)
	w.Screen(1280, 1400, "light")
	f.add(40)
	f.refresh(h)
	w.Until(drawn("response", 1))
	w.Mouse(input.DispatchMouseEventTypeMouseMoved, "response", 0.5, 0.3)
	w.Until(`document.querySelector("#plot-response .readout")?.textContent.includes("90 % confidence")`)
	w.Until(`document.querySelectorAll(".canvas.marked").length === 5`)
	w.Picture("readout")

	w.Focus("#plot-coherence .canvas")
	w.Press(kb.ArrowRight)
	w.Press(kb.ArrowRight)
	w.Until(`document.querySelector("#plot-coherence .readout b")?.textContent === "2.5 to 3.125 Hz"`)
	w.Clean(address)
}

func TestPageBand(t *testing.T) {
	f := newFeed(t, 2, 5, 1601)
	h := NewHub(Run{Rig: f.rig, Kind: "soundcard", Saves: true})
	address, _ := serve(t, h)
	f.keepFresh(t, h, -1)
	w := pagetest.Open(t, address)
	f.add(12)
	f.refresh(h)
	w.Until(drawn("coherence", 1))
	w.Mouse(input.DispatchMouseEventTypeMousePressed, "coherence", 0.4, 0.5)
	w.Mouse(input.DispatchMouseEventTypeMouseMoved, "coherence", 0.6, 0.5)
	w.Picture("drag")
	w.Mouse(input.DispatchMouseEventTypeMouseReleased, "coherence", 0.6, 0.5)
	w.Until(`echarts.getInstanceByDom(document.querySelector("#plot-coherence .canvas")).getOption().xAxis[0].min > 200`)
	data := series(w, "coherence", 0)
	step := *data[1][0] - *data[0][0]
	if first, last := *data[0][0], *data[len(data)-1][0]; first < 300 || last > 700 || last < first+100 || step != 0.625 {
		t.Errorf("after dragging the band is %g to %g Hz in steps of %g Hz, want some 370 to 580 Hz, every line", first, last, step)
	}
	w.Click("#choices button.whole")
	w.Until(`echarts.getInstanceByDom(document.querySelector("#plot-coherence .canvas")).getOption().xAxis[0].min === 0`)
	w.Clean(address)
}

func TestPageStaysAfterTheEnd(t *testing.T) {
	f := newFeed(t, 2, 5, 401)
	h := NewHub(Run{Rig: f.rig, Kind: "recording", Saves: true})
	address, stop := serve(t, h)
	fresh := f.keepFresh(t, h, -1)
	w := pagetest.Open(t, address)
	f.add(40)
	f.refresh(h)
	w.Until(drawn("coherence", 1))

	w.Click("#finish")
	w.Until(`document.getElementById("ask").open`)
	w.Picture("finish")
	w.Press(kb.Enter) // what has the focus is to stay
	w.Until(`!document.getElementById("ask").open`)
	choose(w, responsePicker, "A3z") // by the answer all that was asked before has come
	w.Until(`document.querySelector("#plot-response .curves").textContent.includes("A3z/S1")`)
	select {
	case <-h.Finish():
		t.Fatal("finished without being told to")
	default:
	}
	w.Click("#finish")
	w.Click("#ask button[value=finish]")
	<-h.Finish()
	w.Until(`document.getElementById("finish").textContent === "Finishing…"`)
	fresh()
	h.Ended("Results were written to out.")
	w.Until(`document.getElementById("ended").textContent === "Run ended. Results were written to out."`)

	before := series(w, "response", 4)
	choose(w, responsePicker, "A4z")
	w.Until(`document.querySelector("#plot-response .curves").textContent.includes("A4z/S1")`)
	after := series(w, "response", 4)
	if *before[100][1] == *after[100][1] {
		t.Error("another frequency response was chosen after the end, and the same is shown")
	}
	w.Picture("ended")
	w.Clean(address)
	stop()
	w.Until(`document.getElementById("link").textContent.includes("program closed")`)
	if pagetest.Value[bool](w, `!document.getElementById("old").hidden`) {
		t.Error("after the end nothing new is expected, but the data are said to be old")
	}
}

func TestPageSaysThatDataAreOld(t *testing.T) {
	f := newFeed(t, 2, 5, 401)
	h := NewHub(Run{Rig: f.rig, Kind: "soundcard", Saves: true})
	address, stop := serve(t, h)
	fresh := f.keepFresh(t, h, -1)
	w := pagetest.Open(t, address)
	f.add(40)
	f.refresh(h)
	w.Until(drawn("coherence", 1))
	if pagetest.Value[bool](w, `!document.getElementById("old").hidden`) {
		t.Error("fresh data are said to be old")
	}
	fresh() // nothing more comes, though the connection stands
	w.Until(`!document.getElementById("old").hidden && document.getElementById("word").textContent === "OLD DATA"`)
	stop()
	w.Until(`document.getElementById("old").textContent.includes("Next try") && document.title.startsWith("OLD DATA")`)
	w.Picture("old")
}

func TestPageManyResponses(t *testing.T) {
	f := newFeed(t, 8, 504, 101)
	h := NewHub(Run{Rig: f.rig, Kind: "pipe", Saves: true})
	address, _ := serve(t, h)
	f.keepFresh(t, h, 9)
	w := pagetest.Open(t, address)
	f.add(30)
	f.refresh(h)
	w.Until(drawn("coherence", 1))
	w.Until(`document.querySelectorAll("#strip span").length === 512 && document.querySelectorAll("#levels li").length === 16`)
	w.Until(`document.querySelector("#levels li .name").textContent.startsWith("<img")`) // the one at its limit leads
	w.Picture("many")
	w.Clean(address)
}

func TestPageSaysThatNothingWillBeSaved(t *testing.T) {
	f := newFeed(t, 1, 2, 101)
	h := NewHub(Run{Rig: f.rig, Kind: "soundcard", Saves: false})
	address, _ := serve(t, h)
	f.keepFresh(t, h, -1)
	w := pagetest.Open(t, address)
	w.Until(`document.getElementById("finish").textContent === "Finish, nothing saved…" && !document.getElementById("finish").disabled`)
	w.Click("#finish")
	w.Until(`document.getElementById("ask").open && document.getElementById("ask-title").textContent.includes("NOT be saved")`)
	w.Clean(address)
}
