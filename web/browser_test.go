package web

import (
	"encoding/json"
	"fmt"
	"log/slog"
	"net"
	"strings"
	"sync"
	"testing"
	"testing/synctest"
	"time"

	"github.com/gorilla/websocket"

	"shakerwatch/estimate/watch"
)

// A pipeListener is a listener whose connections lie in memory, and so in the time of synctest.
type pipeListener struct {
	conns  chan net.Conn
	closed chan struct{}
	once   sync.Once
}

func newPipeListener() *pipeListener {
	return &pipeListener{conns: make(chan net.Conn), closed: make(chan struct{})}
}

func (l *pipeListener) Accept() (net.Conn, error) {
	select {
	case c := <-l.conns:
		return c, nil
	case <-l.closed:
		return nil, net.ErrClosed
	}
}

func (l *pipeListener) Close() error {
	l.once.Do(func() { close(l.closed) })
	return nil
}

func (l *pipeListener) Addr() net.Addr { return &net.TCPAddr{IP: net.IPv4(127, 0, 0, 1)} }

// A client is a page's side of a connection.
type client struct {
	t    *testing.T
	conn *websocket.Conn
}

func (l *pipeListener) dial(t *testing.T) *client {
	t.Helper()
	dialer := websocket.Dialer{NetDial: func(string, string) (net.Conn, error) {
		near, far := net.Pipe()
		l.conns <- far
		return near, nil
	}}
	conn, _, err := dialer.Dial("ws://localhost/live", nil)
	if err != nil {
		t.Fatal(err)
	}
	return &client{t, conn}
}

func (c *client) ask(request string) {
	c.t.Helper()
	if err := c.conn.WriteMessage(websocket.TextMessage, []byte(request)); err != nil {
		c.t.Fatal(err)
	}
}

// next is the next message of that type; others are passed over.
func (c *client) next(kind string) []byte {
	c.t.Helper()
	c.conn.SetReadDeadline(time.Now().Add(time.Minute)) // of the bubble: no time at all
	defer c.conn.SetReadDeadline(time.Time{})
	for {
		_, text, err := c.conn.ReadMessage()
		if err != nil {
			c.t.Fatalf("waiting for %s: %v", kind, err)
		}
		var m struct{ Type string }
		if err := json.Unmarshal(text, &m); err != nil {
			c.t.Fatalf("%v in %.100s", err, text)
		}
		if m.Type == kind {
			return text
		}
	}
}

func (c *client) refresh() readRefresh {
	c.t.Helper()
	return read[readRefresh](c.t, c.next("refresh"))
}

// browsers is how many there are once all that can go on has.
func (h *Hub) browsers() int {
	synctest.Wait()
	h.mu.Lock()
	defer h.mu.Unlock()
	return len(h.wakes)
}

// inBubble runs a test against a server whose time is synctest's: it stands still while anything can
// go on, and the test fails when a goroutine is left over at the end.
func inBubble(t *testing.T, test func(t *testing.T, f *feed, h *Hub, l *pipeListener)) {
	f := newFeed(t, 2, 5, 401)
	f.add(12)
	synctest.Test(t, func(t *testing.T) {
		h := NewHub(Run{Rig: f.rig, Kind: "demo", Saves: true})
		s, l := NewServer(h, nil), newPipeListener()
		served := make(chan error)
		go func() { served <- s.Serve(l) }()
		synctest.Wait()
		test(t, f, h, l)
		start := time.Now()
		if err := s.Close(); err != nil {
			t.Error(err)
		}
		if took := time.Since(start); took > 2*closeWait {
			t.Errorf("closing took %v", took)
		}
		if err := <-served; err != nil {
			t.Error(err)
		}
	})
}

func TestABrowserIsToldEverything(t *testing.T) {
	inBubble(t, func(t *testing.T, f *feed, h *Hub, l *pipeListener) {
		c := l.dial(t)
		defer c.conn.Close()
		c.next("describe")
		h.PublishLevels(f.levels(1, -1))
		c.next("levels")
		f.refresh(h)
		if m := c.refresh(); m.Number != 1 || m.View.Response != 0 {
			t.Errorf("refresh %+v", m)
		}
		h.PublishEvent(watch.Event{Text: "one"})
		c.ask(`{"type":"events","after":0}`)
		if m := readEvents(t, c.next("events")); len(m.Events) != 1 {
			t.Errorf("events %+v", m)
		}
		c.ask(`{"type":"finish"}`)
		<-h.Finish()
		if m := string(c.next("run")); m != `{"type":"run","finishing":true,"ended":null}` {
			t.Error(m)
		}
		c.ask(`{"type":"finish"}`) // once more changes nothing
		h.Ended("done")
		if m := string(c.next("run")); m != `{"type":"run","finishing":true,"ended":"done"}` {
			t.Error(m)
		}
	})
}

func TestAChoiceIsAnsweredAtOnceAlsoAfterTheEnd(t *testing.T) {
	inBubble(t, func(t *testing.T, f *feed, h *Hub, l *pipeListener) {
		f.refresh(h)
		h.Ended("done")
		a, b := l.dial(t), l.dial(t)
		defer a.conn.Close()
		defer b.conn.Close()
		a.refresh()
		b.refresh()
		start := time.Now()
		a.ask(`{"type":"select","response":4,"force":1,"coherence":[2]}`)
		if m := a.refresh(); m.View.Response != 4 || m.View.Force != 1 || m.Number != 1 || m.View.Names["response.size"][0] != "A5z/S2" {
			t.Errorf("%+v", m.View)
		}
		if took := time.Since(start); took > 0 {
			t.Errorf("the answer took %v", took)
		}
		// The other page's choice stays its own.
		f.refresh(h)
		if m := b.refresh(); m.Number != 2 || m.View.Response != 0 {
			t.Errorf("%+v", m.View)
		}
		if m := a.refresh(); m.Number != 2 || m.View.Response != 4 {
			t.Errorf("%+v", m.View)
		}
	})
}

func TestASlowBrowserGetsTheNewest(t *testing.T) {
	inBubble(t, func(t *testing.T, f *feed, h *Hub, l *pipeListener) {
		slow := l.dial(t)
		defer slow.conn.Close()
		slow.next("describe")
		const refreshes = 50
		for range refreshes {
			f.refresh(h)
			h.PublishLevels(f.levels(1, -1))
			synctest.Wait() // the writer is stuck in its first message by now
		}
		var got []int64
		for len(got) == 0 || got[len(got)-1] != refreshes {
			got = append(got, slow.refresh().Number)
		}
		if len(got) > 3 {
			t.Errorf("refreshes %v were sent to a browser that was not ready for them", got)
		}
	})
}

// A browser that never reads holds up nobody: the time of the bubble stands still, which it would not if
// anyone had to wait for a deadline.
func TestAStuckBrowserDelaysNobody(t *testing.T) {
	inBubble(t, func(t *testing.T, f *feed, h *Hub, l *pipeListener) {
		stuck := l.dial(t)
		defer stuck.conn.Close()
		good := l.dial(t)
		defer good.conn.Close()
		good.next("describe")
		start := time.Now()
		for n := int64(1); n <= 20; n++ {
			f.refresh(h)
			if m := good.refresh(); m.Number != n {
				t.Fatalf("refresh %d after %d", m.Number, n)
			}
			h.PublishLevels(f.levels(float64(n), -1))
			good.next("levels")
			h.PublishEvent(watch.Event{Text: fmt.Sprint(n)})
		}
		good.ask(`{"type":"events","after":0}`)
		good.next("events")
		if waited := time.Since(start); waited > 0 {
			t.Errorf("others waited %v for a browser that does not read", waited)
		}
		if n := h.browsers(); n != 2 {
			t.Fatalf("%d browsers", n)
		}
		time.Sleep(writeWait + time.Second)
		if n := h.browsers(); n != 1 {
			t.Errorf("%d browsers are left after %v, want the good one", n, writeWait)
		}
	})
}

func TestCloseCutsAStuckBrowserOff(t *testing.T) {
	inBubble(t, func(t *testing.T, f *feed, h *Hub, l *pipeListener) {
		stuck := l.dial(t) // inBubble closes the server and sees that nothing is left
		t.Cleanup(func() { stuck.conn.Close() })
	})
}

func TestCloseSaysGoodbye(t *testing.T) {
	left := make(chan error, 1)
	inBubble(t, func(t *testing.T, f *feed, h *Hub, l *pipeListener) {
		c := l.dial(t)
		go func() {
			for {
				if _, _, err := c.conn.ReadMessage(); err != nil {
					left <- err
					c.conn.Close()
					return
				}
			}
		}()
	})
	if err := <-left; !websocket.IsCloseError(err, websocket.CloseGoingAway) {
		t.Errorf("the browser was left with %v", err)
	}
}

// A page that sleeps, or a machine that was unplugged, answers no pings; one that is only quiet does.
func TestASilentBrowserIsLetGo(t *testing.T) {
	inBubble(t, func(t *testing.T, f *feed, h *Hub, l *pipeListener) {
		quiet, dead := l.dial(t), l.dial(t)
		defer quiet.conn.Close()
		defer dead.conn.Close()
		dead.conn.SetPingHandler(func(string) error { return nil })
		for _, c := range []*client{quiet, dead} {
			go func() {
				for {
					if _, _, err := c.conn.ReadMessage(); err != nil {
						return
					}
				}
			}()
		}
		time.Sleep(pongWait - time.Second)
		if n := h.browsers(); n != 2 {
			t.Errorf("%d browsers before the wait is over, want 2", n)
		}
		time.Sleep(2 * time.Second)
		if n := h.browsers(); n != 1 {
			t.Errorf("%d browsers after the wait, want the one that answers", n)
		}
		time.Sleep(10 * pongWait)
		if n := h.browsers(); n != 1 {
			t.Errorf("%d browsers much later, want the one that answers", n)
		}
	})
}

func TestMissedEventsCome(t *testing.T) {
	inBubble(t, func(t *testing.T, f *feed, h *Hub, l *pipeListener) {
		numbers := func(c *client) (list []int64) {
			for _, e := range readEvents(t, c.next("events")).Events {
				list = append(list, e.Number)
			}
			return list
		}
		for range 3 {
			h.PublishEvent(watch.Event{})
		}
		tests := []struct {
			name, ask string
			want      string
		}{
			{"a new page", `{"type":"events","after":0}`, "[1 2 3]"},
			{"a page that comes back", `{"type":"events","after":2}`, "[3]"},
			{"a page of another run", `{"type":"events","after":99}`, "[1 2 3]"},
		}
		var pages []*client
		for _, test := range tests {
			c := l.dial(t)
			defer c.conn.Close()
			c.ask(test.ask)
			if got := fmt.Sprint(numbers(c)); got != test.want {
				t.Errorf("%s got events %s, want %s", test.name, got, test.want)
			}
			pages = append(pages, c)
		}
		h.PublishEvent(watch.Event{})
		for i, c := range pages {
			if got := fmt.Sprint(numbers(c)); got != "[4]" {
				t.Errorf("%s then got events %s, want [4]", tests[i].name, got)
			}
		}
	})
}

func TestNonsenseEndsTheConnection(t *testing.T) {
	tests := []struct {
		name, text string
		code       int
	}{
		{"nonsense", `{"type":"dance"}`, websocket.ClosePolicyViolation},
		{"too long", `{"type":"` + strings.Repeat("x", maxRequestBytes) + `"}`, websocket.CloseMessageTooBig},
	}
	for _, test := range tests {
		t.Run(test.name, func(t *testing.T) {
			inBubble(t, func(t *testing.T, f *feed, h *Hub, l *pipeListener) {
				c := l.dial(t)
				defer c.conn.Close()
				c.next("describe")
				go c.conn.WriteMessage(websocket.TextMessage, []byte(test.text))
				var err error
				for err == nil { // the page's access may come in between
					_, _, err = c.conn.ReadMessage()
				}
				if !websocket.IsCloseError(err, test.code) {
					t.Errorf("ended with %v, want code %d", err, test.code)
				}
			})
		})
	}
}

func TestCommandsOfAPage(t *testing.T) {
	inBubble(t, func(t *testing.T, f *feed, h *Hub, l *pipeListener) {
		a, b := l.dial(t), l.dial(t)
		defer a.conn.Close()
		defer b.conn.Close()
		if m := string(a.next("access")); m != `{"type":"access","control":true}` {
			t.Error(m)
		}
		b.next("access")
		a.ask(`{"type":"note","text":"hatch open"}`)
		if got, want := <-h.Commands(), (Command{Kind: Note, Text: "hatch open"}); got != want {
			t.Errorf("%+v, want %+v", got, want)
		}
		b.next("asked") // every page sees what was done
		late := l.dial(t)
		defer late.conn.Close()
		late.next("access")
		a.ask(`{"type":"pause"}`)
		if m := string(late.next("asked")); !strings.Contains(m, `"pause"`) { // but one that comes later not what was done before
			t.Error(m)
		}
		a.ask(`{"type":"resume"}`)
		if m := string(a.next("refused")); m != `{"type":"refused","text":"The average is not paused."}` {
			t.Error(m)
		}
		a.ask(`{"type":"note","text":"` + strings.Repeat("x", maxNote+1) + `"}`)
		a.next("refused") // and the page stays connected
		a.ask(`{"type":"alive"}`)
		a.next("alive")

		h.PublishEvent(watch.Event{Edge: watch.Raised, Kind: "dead-channel", Channels: []string{"S1"}})
		if m := string(b.next("marks")); !strings.Contains(m, `"dead-channel"`) {
			t.Error(m)
		}
		a.ask(`{"type":"acknowledge","event":1}`)
		if m := string(b.next("acknowledged")); m != `{"type":"acknowledged","events":[1]}` {
			t.Error(m)
		}
		h.PublishLevels(f.levels(1, 0))
		b.next("held")
		a.ask(`{"type":"reset-peaks","channel":0}`)
		if m := string(b.next("held")); !strings.HasPrefix(m, `{"type":"held","peak":[null,0.`) {
			t.Error(m)
		}
	})
}

// A page that may only look sees all and moves nothing.
func TestAPageThatMayOnlyLook(t *testing.T) {
	f := newFeed(t, 1, 1, 101)
	for _, ask := range []string{
		`{"type":"pause"}`, `{"type":"resume"}`, `{"type":"start-over"}`, `{"type":"note","text":"x"}`, `{"type":"finish"}`,
		`{"type":"acknowledge","event":1}`, `{"type":"reset-peaks"}`, `{"type":"measure","stage":"low"}`,
		`{"type":"break","fault":"detach","target":"S1"}`, `{"type":"mend","fault":"detach","target":"S1"}`,
	} {
		t.Run(ask, func(t *testing.T) {
			h := NewHub(Run{Rig: f.rig, Kind: "demo", Faults: testFaults})
			h.PublishEvent(watch.Event{})
			h.PublishLevels(f.levels(1, 0))
			b := newBrowser(h, nil, slog.New(slog.DiscardHandler))
			b.mayControl = false
			r, err := parseRequest([]byte(ask), h.shape)
			if err != nil {
				t.Fatal(err)
			}
			held := h.held.message.number
			b.heed(r)
			if b.refused != "This page may look, and no more." {
				t.Errorf("refused with %q", b.refused)
			}
			if len(h.commands.queue) > 0 || h.finishing || len(h.acknowledged.numbers) > 0 || h.held.message.number != held {
				t.Error("it was done all the same")
			}
			b.mayControl = true
			b.refused = ""
			b.heed(r)
			if strings.Contains(b.refused, "may look") {
				t.Errorf("a page that may is refused with %q", b.refused)
			}
		})
	}
	for _, ask := range []string{`{"type":"select"}`, `{"type":"events","after":0}`, `{"type":"alive"}`} {
		r, err := parseRequest([]byte(ask), testShape)
		if err != nil || r.controls() {
			t.Errorf("%s is not for looking: %v", ask, err)
		}
	}
}
