package main

import (
	"fmt"
	"net"

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
	hub := web.NewHub(m.rig, m.kind)
	server := web.NewServer(hub, a.logger())
	listener, err := net.Listen("tcp", a.listen)
	if err != nil {
		return nil, fmt.Errorf("--listen %s: %w: choose another port, or end what uses this one", a.listen, err)
	}
	d := &dashboard{hub: hub, server: server, served: make(chan error, 1)}
	go func() { d.served <- server.Serve(listener) }()
	fmt.Fprintf(a.stdout, "dashboard: http://%s\n", listener.Addr())
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
}

// finished is closed when the page asks to finish and save. Without a page it never is.
func (d *dashboard) finished() <-chan struct{} {
	if d == nil {
		return nil
	}
	return d.hub.Finish()
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
