package web

import (
	"context"
	"errors"
	"fmt"
	"io/fs"
	"log/slog"
	"net"
	"net/http"
	"sync"
	"time"

	"github.com/gorilla/websocket"

	"shakerwatch/static"
)

const (
	// headerWait and fileWait bound how long a browser may take over a request and over taking a file.
	headerWait = 5 * time.Second
	fileWait   = 30 * time.Second
	// closeWait is how long goodbye may take when the server closes; then connections are cut.
	closeWait = 500 * time.Millisecond
)

// A Server serves the page and a hub's news to browsers.
type Server struct {
	hub      *Hub
	logger   *slog.Logger
	page     fs.FS
	http     *http.Server
	upgrader websocket.Upgrader // its default check of the origin is kept: same host only

	mayControl func(*http.Request) bool // tells whether that page may do more than look

	mu       sync.Mutex // guards what follows
	closing  bool
	entered  int // pages that are connected or about to be
	browsers map[*browser]bool
	serving  sync.WaitGroup // one for each browser
}

// NewServer makes a server for h. With logger nil nothing is logged.
func NewServer(h *Hub, logger *slog.Logger) *Server {
	if logger == nil {
		logger = slog.New(slog.DiscardHandler)
	}
	s := &Server{
		hub: h, logger: logger, page: static.Page(), browsers: make(map[*browser]bool),
		mayControl: func(*http.Request) bool { return true },
	}
	s.http = &http.Server{
		Handler:           s.guard(s.routes()),
		ReadHeaderTimeout: headerWait,
		ReadTimeout:       headerWait,
		WriteTimeout:      fileWait,
		ErrorLog:          slog.NewLogLogger(logger.Handler(), slog.LevelDebug),
	}
	return s
}

// routes are all that is served.
func (s *Server) routes() http.Handler {
	mux := http.NewServeMux()
	mux.Handle("GET /", http.FileServerFS(s.page))
	mux.HandleFunc("GET /live", s.live)
	return mux
}

// Serve answers browsers that come to l until Close, and then returns nil. It closes l. It returns an
// error at once when the program was built without the page's chart library.
func (s *Server) Serve(l net.Listener) error {
	if _, err := fs.Stat(s.page, static.ChartLibrary); err != nil {
		l.Close()
		return fmt.Errorf("the program was built without %s, so its dashboard cannot draw: build it with make, or run with --headless", static.ChartLibrary)
	}
	err := s.http.Serve(l)
	if errors.Is(err, http.ErrServerClosed) {
		return nil
	}
	return fmt.Errorf("serve the dashboard: %w", err)
}

// Close ends Serve, says goodbye to every browser, and returns when nothing of the server runs any
// more; a browser that does not listen is cut off after half a second.
func (s *Server) Close() error {
	s.mu.Lock()
	if !s.closing {
		s.closing = true
		for b := range s.browsers {
			close(b.quit)
		}
	}
	s.mu.Unlock()

	gone := make(chan struct{})
	go func() {
		s.serving.Wait()
		close(gone)
	}()
	ctx, cancel := context.WithTimeout(context.Background(), closeWait)
	defer cancel()
	err := s.http.Shutdown(ctx)
	select {
	case <-gone:
	case <-ctx.Done():
		s.cut()
		<-gone
	}
	if err != nil {
		return s.http.Close() // cuts files that are still on their way
	}
	return nil
}

// cut ends every browser's connection as it stands.
func (s *Server) cut() {
	s.mu.Lock()
	defer s.mu.Unlock()
	for b := range s.browsers {
		b.conn.Close()
	}
}

// live is the page's WebSocket.
func (s *Server) live(w http.ResponseWriter, r *http.Request) {
	if !s.enter() {
		http.Error(w, fmt.Sprintf("already %d pages are connected, or the program is closing", maxBrowsers), http.StatusServiceUnavailable)
		return
	}
	defer s.leave()
	conn, err := s.upgrader.Upgrade(w, r, nil) // it answers the browser itself when it refuses
	if err != nil {
		s.logger.Warn("connection refused", keyBrowser, r.RemoteAddr, keyError, err)
		return
	}
	logger := s.logger.With(keyBrowser, r.RemoteAddr)
	b := newBrowser(s.hub, conn, logger)
	b.mayControl = s.mayControl(r)
	if !s.add(b) {
		b.goodbye()
		conn.Close()
		return
	}
	defer s.remove(b)
	logger.Debug("page connected")
	b.serve()
	logger.Debug("page left")
}
