package web

import (
	"fmt"
	"io"
	"net"
	"net/http"
	"sync"
	"testing"

	"github.com/chromedp/cdproto/cdp"
	"github.com/chromedp/cdproto/heapprofiler"
	"github.com/chromedp/cdproto/memory"

	"shakerwatch/estimate/watch"
	"shakerwatch/web/pagetest"
)

// serveAt serves a hub at an address until stop.
func serveAt(t *testing.T, h *Hub, address string, change ...func(*Server)) (at string, stop func()) {
	t.Helper()
	l, err := net.Listen("tcp", address)
	if err != nil {
		t.Fatal(err)
	}
	s := NewServer(h, nil)
	for _, do := range change {
		do(s)
	}
	served := make(chan error, 1)
	go func() { served <- s.Serve(l) }()
	stop = sync.OnceFunc(func() {
		s.Close()
		<-served
	})
	t.Cleanup(stop)
	return l.Addr().String(), stop
}

// The program is ended and started again: the page says that its data are old, comes back by itself, and
// shows nothing of the run before.
func TestPageComesBackAfterARestart(t *testing.T) {
	t.Parallel()
	f := newFeed(t, 1, 2, 101)
	h := NewHub(Run{Rig: f.rig, Kind: "soundcard"})
	at, stop := serveAt(t, h, "127.0.0.1:0")
	fresh := f.keepFresh(t, h, -1)
	w := pagetest.Open(t, "http://"+at+"/")
	h.PublishEvent(watch.Event{Edge: watch.Raised, Kind: watch.Gap, Channels: []string{}, Text: "of the run before"})
	f.add(20)
	f.refresh(h)
	w.Until(drawn("coherence", 1) + ` && document.querySelectorAll("#events li").length === 1`)
	fresh()
	stop()
	w.Until(text("word") + ` === "OLD DATA" && !document.getElementById("old").hidden && document.getElementById("pause").disabled`)
	w.Until(`["plots", "sketch", "verdict"].every((id) => getComputedStyle(document.querySelector("#" + id + ":not(.verdict), #" + id + " .way")).opacity < 0.5)`) // and pale

	f.rig.Title = "The next run"
	h = NewHub(Run{Rig: f.rig, Kind: "soundcard"})
	serveAt(t, h, at)
	f.keepFresh(t, h, -1)
	w.Until(text("title") + ` === "The next run" && document.getElementById("old").hidden && document.querySelectorAll("#events li").length === 0`)
	w.Until(text("word") + ` === "WAITING" && !document.getElementById("pause").disabled`)
}

// A proxy carries connections until its cable is cut: then nothing comes through, and nobody is told.
type proxy struct {
	to string

	mu    sync.Mutex
	mends chan struct{} // closed when it is whole; replaced when it is cut
}

func newProxy(t *testing.T, to string) (p *proxy, address string) {
	l, err := net.Listen("tcp", "127.0.0.1:0")
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { l.Close() })
	p = &proxy{to: to, mends: make(chan struct{})}
	p.mend()
	go func() {
		for {
			near, err := l.Accept()
			if err != nil {
				return
			}
			far, err := net.Dial("tcp", to)
			if err != nil {
				near.Close()
				continue
			}
			t.Cleanup(func() {
				near.Close()
				far.Close()
			})
			go p.carry(near, far)
			go p.carry(far, near)
		}
	}()
	return p, l.Addr().String()
}

func (p *proxy) carry(to io.WriteCloser, from io.ReadCloser) {
	defer to.Close()
	buf := make([]byte, 64<<10)
	for {
		n, err := from.Read(buf)
		if err != nil {
			return
		}
		p.mu.Lock()
		mends := p.mends
		p.mu.Unlock()
		<-mends
		if _, err := to.Write(buf[:n]); err != nil {
			return
		}
	}
}

func (p *proxy) cut() {
	p.mu.Lock()
	p.mends = make(chan struct{})
	p.mu.Unlock()
}

// mend mends what may be whole.
func (p *proxy) mend() {
	p.mu.Lock()
	defer p.mu.Unlock()
	select {
	case <-p.mends:
	default:
		close(p.mends)
	}
}

// A cable is pulled and put back. Neither side is told; the page gives the connection up by itself, and comes back.
func TestPageNoticesASilentNetwork(t *testing.T) {
	t.Parallel()
	f := newFeed(t, 1, 2, 101)
	h := NewHub(Run{Rig: f.rig, Kind: "soundcard"})
	at, _ := serveAt(t, h, "127.0.0.1:0")
	p, near := newProxy(t, at)
	f.keepFresh(t, h, -1)
	w := pagetest.Open(t, "http://"+near+"/")
	t.Cleanup(p.mend)
	w.Until(text("link") + `.includes("receiving")`)
	p.cut()
	w.Until(text("word") + ` === "OLD DATA" && ` + text("old") + `.includes("The connection stands, but nothing comes.")`)
	w.Until(text("old") + `.includes("Trying to connect")`)
	p.mend()
	w.Until(text("link") + `.includes("receiving") && document.getElementById("old").hidden`)
}

// A source that delivers nothing is not a broken connection, and connecting again does not make its data fresh.
func TestPageKnowsASilentSource(t *testing.T) {
	t.Parallel()
	f := newFeed(t, 1, 2, 101)
	h := NewHub(Run{Rig: f.rig, Kind: "pipe"})
	at, stop := serveAt(t, h, "127.0.0.1:0")
	h.PublishLevels(f.levels(1, -1))
	f.add(20)
	f.refresh(h)
	w := pagetest.Open(t, "http://"+at+"/")
	w.Until(text("word") + ` === "OLD DATA" && ` + text("old") + `.includes("The connection stands, but nothing comes.")`)
	pagetest.Value[bool](w, `(window.words = [], new MutationObserver(() => window.words.push(document.getElementById("word").textContent)).observe(document.getElementById("word"), { childList: true }), true)`)
	stop()
	serveAt(t, h, at) // the same run, as after a network was gone
	w.Until(text("old") + `.includes("Next try") || ` + text("old") + `.includes("Trying to connect")`)
	w.Until(text("old") + `.includes("The connection stands, but nothing comes.")`)
	if words := pagetest.Value[[]string](w, `window.words`); len(words) > 0 {
		t.Errorf("old data were said to be %q in between", words)
	}
}

// A computer that slept finds its clock far ahead, and a connection that may be dead. The page makes another at
// once, and gets what it missed.
func TestPageWakesUp(t *testing.T) {
	t.Parallel()
	f := newFeed(t, 1, 2, 101)
	h := NewHub(Run{Rig: f.rig, Kind: "soundcard"})
	at, _ := serveAt(t, h, "127.0.0.1:0")
	fresh := f.keepFresh(t, h, -1)
	w := pagetest.Open(t, "http://"+at+"/")
	w.Until(text("link") + `.includes("receiving")`)
	pagetest.Value[bool](w, `(() => { const Real = WebSocket; window.made = 0; window.WebSocket = class extends Real { constructor(...a) { super(...a); window.made++; } }; return true; })()`)
	fresh()
	w.Until(`(() => { const now = Date.now; if (!window.slept) { window.slept = true; Date.now = () => now() + 3600e3; } return ` + text("old") + `.includes("min ago") || ` + text("old") + `.includes("1 h"); })()`)
	h.PublishEvent(watch.Event{Edge: watch.Raised, Kind: watch.Gap, Channels: []string{}, Text: "while it slept"})
	f.keepFresh(t, h, -1)
	w.Until(`window.made === 1 && document.getElementById("old").hidden && ` + text("news-text") + `.includes("while it slept")`)
}

// An hour of events, levels and refreshes leaves no more elements and listeners in the page than the first minutes.
func TestPageDoesNotGrow(t *testing.T) {
	d := newDesk(t, Run{}, 2, 14)
	counts := func() memory.GetDOMCountersResult {
		t.Helper()
		pagetest.Command(d.w, heapprofiler.CollectGarbage, cdp.Empty{})
		return pagetest.Ask(d.w, memory.GetDOMCounters, cdp.Empty{})
	}
	number := 0
	busy := func(events int) {
		for range events {
			number++
			d.h.PublishEvent(watch.Event{TimeS: float64(number), SinceBlock: int64(number), Edge: watch.Raised, Kind: "overrange", Channels: []string{"S1"}, BandsHz: [][2]float64{{1, 2}}, Text: fmt.Sprint("number ", number)})
			if number%10 == 0 {
				d.h.PublishEvent(watch.Event{Edge: watch.Cleared, Kind: "overrange", SinceBlock: int64(number), Channels: []string{"S1"}})
				d.h.Refresh(d.st, nil)
				d.h.askResetPeaks(-1)
				d.h.askAcknowledge(int64(number), true)
			}
		}
		d.w.Until(fmt.Sprintf(`document.querySelector("#events li:nth-child(2) .what")?.textContent.startsWith("number %d")`, number))
	}
	busy(600)
	before := counts()
	busy(3000)
	after := counts()
	if shown := pagetest.Value[int](d.w, `document.querySelectorAll("#events li").length`); shown != 200 {
		t.Errorf("%d events are shown", shown)
	}
	const slack = 1.05 // what the browser itself comes and goes with
	if float64(after.Nodes) > slack*float64(before.Nodes) || float64(after.JsEventListeners) > slack*float64(before.JsEventListeners) {
		t.Errorf("%d nodes and %d listeners grew to %d and %d", before.Nodes, before.JsEventListeners, after.Nodes, after.JsEventListeners)
	}
	d.w.Clean(d.address)
}

// A page that may only look offers nothing else, and its keys do nothing.
func TestPageThatMayOnlyLook(t *testing.T) {
	t.Parallel()
	f := newFeed(t, 1, 2, 101)
	h := NewHub(Run{Rig: f.rig, Kind: "demo", Faults: testFaults})
	at, _ := serveAt(t, h, "127.0.0.1:0", func(s *Server) { s.mayControl = func(*http.Request) bool { return false } })
	address := "http://" + at + "/"
	f.keepFresh(t, h, -1)
	h.PublishEvent(watch.Event{Edge: watch.Raised, Kind: watch.Gap, Channels: []string{}, Text: "a gap"})
	w := pagetest.Open(t, address)
	w.Until(text("news-text") + `.includes("a gap")`)
	for _, id := range []string{"pause", "start-over", "note", "finish", "news-seen", "seen-all", "reset", "try"} {
		if !pagetest.Value[bool](w, fmt.Sprintf(`document.getElementById(%q).hidden`, id)) {
			t.Errorf("%s is shown", id)
		}
	}
	for _, key := range "psnfar" {
		w.Press(string(key))
	}
	w.Press("?")
	w.Until(`document.getElementById("key-box").open && document.querySelectorAll("dialog[open]").length === 1`)
	if len(h.Commands()) > 0 || h.finishing {
		t.Error("a key had the run do something")
	}
	w.Clean(address)
}
