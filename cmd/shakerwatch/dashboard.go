package main

import (
	"context"
	"fmt"
	"net"
	"sync"

	"shakerwatch/cmd/internal/monitor"
	"shakerwatch/web"
)

// A dashboard is the page and its server. A nil one is none at all.
type dashboard struct {
	hub    *web.Hub
	server *web.Server
	served chan error
}

// openDashboard starts serving the page. It returns nil with --headless.
func (a *app) openDashboard(m measurement) (*dashboard, error) {
	if a.headless {
		return nil, nil
	}
	if err := loopback(a.listen); err != nil {
		return nil, err
	}
	hub := web.NewHub(web.Run{Rig: m.rig, Kind: m.kind, Saves: a.out != "", Level: a.confidence, Fixed: m.only != nil, Faults: m.breaker.offers()})
	server := web.NewServer(hub, a.logger())
	listener, err := net.Listen("tcp", a.listen)
	if err != nil {
		return nil, fmt.Errorf("--listen %s: %w: choose another port, or end what uses this one", a.listen, err)
	}
	d := &dashboard{hub: hub, server: server, served: make(chan error, 1)}
	go func() { d.served <- server.Serve(listener) }()
	fmt.Fprintln(a.stdout, "dashboard:", web.URL(listener.Addr()))
	fmt.Fprintln(a.stdout, "It only watches and is no protective system: keep clear, keep the emergency stop in reach.")
	return d, nil
}

// loopback refuses addresses that others than this computer can reach: the page has no lock yet.
func loopback(addr string) error {
	host, _, err := net.SplitHostPort(addr)
	if err != nil {
		return fmt.Errorf("--listen %s: %w: give ADDRESS:PORT, such as %s", addr, err, defaultListen)
	}
	if ip := net.ParseIP(host); host != "localhost" && (ip == nil || !ip.IsLoopback()) {
		return fmt.Errorf("--listen %s: this version serves this computer only: choose a loopback address, such as %s", addr, defaultListen)
	}
	return nil
}

// observe has the pipeline tell the page what happens.
func (d *dashboard) observe(c *monitor.Config) {
	if d == nil {
		return
	}
	c.OnEvent = d.hub.PublishEvent
	c.OnLevels = d.hub.PublishLevels
	c.OnRefresh = d.hub.Refresh
	c.Commands = d.hub.Commands()
}

// onFinish calls finish when the page asks to finish and save. What it returns is done when ctx has
// ended.
func (d *dashboard) onFinish(ctx context.Context, finish func()) *sync.WaitGroup {
	var waiting sync.WaitGroup
	if d == nil {
		return &waiting
	}
	waiting.Go(func() {
		select {
		case <-d.hub.Finish():
			finish()
		case <-ctx.Done():
		}
	})
	return &waiting
}

// publishSetup shows how far a setup check is.
func (d *dashboard) publishSetup(s web.SetupState) {
	if d != nil {
		d.hub.PublishSetup(s)
	}
}

// proceed gives a value when the page says that the rig is ready. Without a page it never does.
func (d *dashboard) proceed() <-chan struct{} {
	if d == nil {
		return nil
	}
	return d.hub.Proceed()
}

// ended tells the page that the run is over.
func (d *dashboard) ended(text string) {
	if d != nil {
		d.hub.Ended(text)
	}
}

// close stops serving and waits for it.
func (d *dashboard) close() error {
	if d == nil {
		return nil
	}
	if err := d.server.Close(); err != nil {
		return err
	}
	return <-d.served
}
