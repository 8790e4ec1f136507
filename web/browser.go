package web

import (
	"errors"
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

	mayControl bool // else it may only look

	mu      sync.Mutex // guards what the page asked
	view    view
	events  bool // it asked for events
	after   int64
	alive   bool   // it asked whether the program is alive, and has no answer yet
	refused string // why the last thing that it asked is not done, until it is told

	sent sent // belongs to the writing goroutine
}

// sent is what a page has.
type sent struct {
	refresh, levels, run, event, setup, findings int64 // numbers
	held, marks, acknowledged, asked, broken     int64
	view                                         view // of refresh
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
	b.sent.asked = b.hub.join(b.wake)
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
		var told refusal
		if errors.As(err, &told) {
			b.refuse(string(told))
			continue
		}
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
	if r.controls() && !b.mayControl {
		b.refuse("This page may look, and no more.")
		return
	}
	b.mu.Lock()
	switch r.kind {
	case selectView:
		b.view = r.view
	case sendEvents:
		b.events, b.after = true, r.after
	case stillAlive:
		b.alive = true
	}
	b.mu.Unlock()
	b.wakeUp()
	if r.controls() {
		b.control(r)
	}
}

// control has the run, or what all pages share, do what the page asks.
func (b *browser) control(r request) {
	no := ""
	switch {
	case r.command != nil:
		no = b.hub.askCommand(*r.command)
		b.logger.Info("command", keyAsked, r.kind, keyTaken, no == "")
	case r.kind == finishAndEnd:
		b.logger.Info("asked to finish")
		b.hub.askFinish()
	case r.kind == startMeasuring:
		b.logger.Info("asked to measure", keyStage, r.stage, keyTaken, b.hub.askMeasure(r.stage))
	case r.kind == acknowledge:
		no = b.hub.askAcknowledge(r.event, r.before)
	case r.kind == resetPeaks:
		b.hub.askResetPeaks(r.channel)
	}
	if no != "" {
		b.refuse(no)
	}
}

// refuse tells the page why something is not done. Of several refusals it is told the last.
func (b *browser) refuse(why string) {
	b.mu.Lock()
	b.refused = why
	b.mu.Unlock()
	b.wakeUp()
}

func (b *browser) wakeUp() {
	select {
	case b.wake <- struct{}{}:
	default:
	}
}

// write sends what is new until gone or b.quit is closed or the connection ends.
func (b *browser) write(gone <-chan struct{}) {
	ping := time.NewTicker(pingPeriod)
	defer ping.Stop()
	if b.send(b.hub.description) != nil || b.send(accessMessage(b.mayControl)) != nil || b.sendNews() != nil {
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
	own := b.ownNews()
	b.after, b.alive, b.refused = 0, false, ""
	b.mu.Unlock()

	for _, text := range append(own, b.hub.news(&b.sent, events, after)...) {
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
