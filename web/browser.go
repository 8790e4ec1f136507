package web

import (
	"log/slog"
	"sync"
	"time"

	"github.com/gorilla/websocket"
)

const (
	// writeWait is how long one message may take to be taken over by the browser's machine; a page that
	// stands still that long is let go, and comes back by itself.
	writeWait = 10 * time.Second
	// pongWait is how long a browser may be silent. A hidden page still answers pings.
	pongWait = 30 * time.Second
	// pingPeriod leaves time for two pings within pongWait.
	pingPeriod = 12 * time.Second
	// maxRequestBytes is far above the longest request.
	maxRequestBytes = 4096
	// maxBrowsers bounds what all browsers together can cost.
	maxBrowsers = 32
)

// A browser is one page that is connected. Of each kind of news it is sent the newest when it is ready,
// and of events all that are still kept.
type browser struct {
	hub    *Hub
	conn   *websocket.Conn
	logger *slog.Logger
	wake   chan struct{} // there is news
	quit   chan struct{} // closed when the server closes

	mu     sync.Mutex // guards what the page asked
	view   view
	events bool // it asked for events
	after  int64

	sent sent // belongs to the writing goroutine
}

// sent is what a page has.
type sent struct {
	refresh, levels, run, event, setup, findings int64 // numbers
	view                                         view  // of refresh
}

func newBrowser(h *Hub, conn *websocket.Conn, logger *slog.Logger) *browser {
	return &browser{
		hub: h, conn: conn, logger: logger, view: h.first,
		wake: make(chan struct{}, 1), quit: make(chan struct{}),
	}
}

// serve serves the page until it leaves, is let go or b.quit is closed. It returns when both of the
// connection's goroutines are done.
func (b *browser) serve() {
	b.hub.join(b.wake)
	defer b.hub.leave(b.wake)
	gone, written := make(chan struct{}), make(chan struct{})
	go func() {
		defer close(written)
		b.write(gone)
		b.conn.Close()
	}()
	b.read()
	b.conn.Close()
	close(gone)
	<-written
}

// read takes requests until the connection ends.
func (b *browser) read() {
	b.conn.SetReadLimit(maxRequestBytes)
	alive := func(string) error { return b.conn.SetReadDeadline(time.Now().Add(pongWait)) }
	b.conn.SetPongHandler(alive)
	alive("")
	for {
		_, text, err := b.conn.ReadMessage()
		if err != nil {
			return
		}
		r, err := parseRequest(text, b.hub.shape)
		if err != nil {
			b.logger.Warn("request refused", keyError, err)
			b.close(websocket.ClosePolicyViolation, "this page does not fit this program: load it again")
			return
		}
		b.heed(r)
	}
}

// heed does what the page asks.
func (b *browser) heed(r request) {
	b.mu.Lock()
	switch r.kind {
	case selectView:
		b.view = r.view
	case sendEvents:
		b.events, b.after = true, r.after
	}
	b.mu.Unlock()
	if r.kind == finishAndEnd {
		b.logger.Info("asked to finish")
		b.hub.askFinish()
	}
	if r.kind == startMeasuring {
		b.logger.Info("asked to measure", keyStage, r.stage, keyTaken, b.hub.askMeasure(r.stage))
	}
	select {
	case b.wake <- struct{}{}:
	default:
	}
}

// write sends what is new until gone or b.quit is closed or the connection ends.
func (b *browser) write(gone <-chan struct{}) {
	ping := time.NewTicker(pingPeriod)
	defer ping.Stop()
	if b.send(b.hub.description) != nil || b.sendNews() != nil {
		return
	}
	for {
		select {
		case <-b.wake:
			if b.sendNews() != nil {
				return
			}
		case <-ping.C:
			if b.conn.WriteControl(websocket.PingMessage, nil, time.Now().Add(writeWait)) != nil {
				return
			}
		case <-b.quit:
			b.goodbye()
			return
		case <-gone:
			return
		}
	}
}

// sendNews sends what the page does not have yet, the newest of each kind.
func (b *browser) sendNews() error {
	b.mu.Lock()
	view, events, after := b.view, b.events, b.after
	b.after = 0
	b.mu.Unlock()

	for _, text := range b.hub.news(&b.sent, events, after) {
		if err := b.send(text); err != nil {
			return err
		}
	}
	if b.hub.results.number.Load() == b.sent.refresh && view == b.sent.view {
		return nil
	}
	text, number := b.hub.results.message(view)
	if number == 0 {
		return nil
	}
	b.sent.refresh, b.sent.view = number, view
	return b.send(text)
}

// news returns the messages that a page which has s lacks, except results, and enters them in s. With
// events, those behind number after, or behind s, are among them.
func (h *Hub) news(s *sent, events bool, after int64) [][]byte {
	var list [][]byte
	h.mu.Lock()
	defer h.mu.Unlock()
	if events {
		if after <= h.events.newest { // else it is a number of another run
			s.event = max(s.event, after)
		}
		if text := h.events.message(s.event); text != nil {
			list = append(list, text)
			s.event = h.events.newest
		}
	}
	if h.levels.number != s.levels {
		s.levels = h.levels.number
		list = append(list, h.levels.text)
	}
	if h.setup.state.number != s.setup {
		s.setup = h.setup.state.number
		list = append(list, h.setup.state.text)
	}
	if h.setup.findings.number != s.findings {
		s.findings = h.setup.findings.number
		list = append(list, h.setup.findings.text)
	}
	if h.run.number != s.run {
		s.run = h.run.number
		list = append(list, h.run.text)
	}
	return list
}

func (b *browser) send(text []byte) error {
	b.conn.SetWriteDeadline(time.Now().Add(writeWait))
	return b.conn.WriteMessage(websocket.TextMessage, text)
}

// goodbye is said when the server closes.
func (b *browser) goodbye() { b.close(websocket.CloseGoingAway, "the program has closed") }

// close says why the connection ends, as far as the browser listens.
func (b *browser) close(code int, reason string) {
	b.conn.WriteControl(websocket.CloseMessage, websocket.FormatCloseMessage(code, reason), time.Now().Add(closeWait))
}
