// Package pagetest opens the dashboard in Debian's Chromium, for the tests of the page and of the
// whole program. It knows how to click, look and wait; it may not know what is right.
package pagetest

import (
	"context"
	"flag"
	"fmt"
	"net/url"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"sync"
	"testing"
	"time"

	"github.com/chromedp/cdproto/cdp"
	"github.com/chromedp/cdproto/emulation"
	"github.com/chromedp/cdproto/input"
	"github.com/chromedp/cdproto/log"
	"github.com/chromedp/cdproto/network"
	"github.com/chromedp/cdproto/page"
	"github.com/chromedp/cdproto/runtime"
	"github.com/chromedp/chromedp"
)

var pictures = flag.String("pictures", "", "directory for pictures of the page; empty makes none")

const (
	chromium   = "/usr/bin/chromium" // where Debian's package puts it
	windowLife = 3 * time.Minute     // far more than a test takes
	patience   = 30 * time.Second    // far more than a page takes to show anything
)

// A Window is a page in a browser, and what went wrong in it.
type Window struct {
	t   *testing.T
	ctx context.Context

	mu       sync.Mutex
	troubles []string // errors and warnings on the console, exceptions, dialogs
	hosts    []string // of all requests
}

// Open starts Chromium with a profile of its own and opens the address. It ends with the test.
func Open(t *testing.T, address string) *Window {
	t.Helper()
	if _, err := os.Stat(chromium); err != nil {
		t.Fatalf("the page's tests need Debian's package chromium: %v: apt-get install chromium", err)
	}
	options := []chromedp.ExecAllocatorOption{chromedp.ExecPath(chromium), chromedp.UserDataDir(t.TempDir())}
	for _, name := range []string{
		"headless", "no-sandbox", "disable-gpu", "no-first-run", "no-default-browser-check", "hide-scrollbars",
		"disable-background-networking", "disable-component-update", "disable-sync", "disable-dev-shm-usage",
	} {
		options = append(options, chromedp.Flag(name, true))
	}
	ctx, cancel := context.WithTimeout(context.Background(), windowLife)
	t.Cleanup(cancel)
	ctx, cancel = chromedp.NewExecAllocator(ctx, options...)
	t.Cleanup(cancel)
	w := &Window{t: t}
	w.ctx, cancel = chromedp.NewContext(ctx, chromedp.WithListener(w.note))
	t.Cleanup(func() {
		chromedp.Cancel(w.ctx) // waits until the browser is gone
		cancel()
	})
	Command(w, network.Enable, network.EnableParams{})
	w.Screen(1280, 720, "light")
	w.Do(chromedp.Navigate(address))
	return w
}

// note keeps what the test asks about later.
func (w *Window) note(event any) {
	w.mu.Lock()
	defer w.mu.Unlock()
	trouble := func(format string, args ...any) { w.troubles = append(w.troubles, fmt.Sprintf(format, args...)) }
	switch e := event.(type) {
	case *runtime.EventExceptionThrown:
		trouble("exception: %s %+v", e.ExceptionDetails.Text, e.ExceptionDetails.Exception)
	case *runtime.EventConsoleAPICalled:
		if e.Type == runtime.ConsoleAPICalledTypeError || e.Type == runtime.ConsoleAPICalledTypeWarning {
			for _, arg := range e.Args {
				trouble("console: %s", arg.Value)
			}
		}
	case *log.EventEntryAdded:
		if e.Entry.Level == log.EntryLevelError || e.Entry.Level == log.EntryLevelWarning {
			trouble("log: %s %s", e.Entry.Text, e.Entry.URL)
		}
	case *page.EventJavascriptDialogOpening:
		trouble("dialog: %s", e.Message)
	case *network.EventRequestWillBeSent:
		w.visit(e.Request.URL)
	case *network.EventWebSocketCreated:
		w.visit(e.URL)
	}
}

func (w *Window) visit(address string) {
	if u, err := url.Parse(address); err == nil && !slices.Contains(w.hosts, u.Host) {
		w.hosts = append(w.hosts, u.Host)
	}
}

// Clean fails the test when anything went wrong in the page, or when it asked another host than the
// address's for anything.
func (w *Window) Clean(address string) {
	w.t.Helper()
	w.mu.Lock()
	defer w.mu.Unlock()
	for _, trouble := range w.troubles {
		w.t.Error("in the page: ", trouble)
	}
	u, err := url.Parse(address)
	if err != nil {
		w.t.Fatal(err)
	}
	if !slices.Equal(w.hosts, []string{u.Host}) {
		w.t.Errorf("the page asked hosts %q, only %s may be asked", w.hosts, u.Host)
	}
}

func (w *Window) Do(steps ...chromedp.Action[chromedp.Void]) {
	w.t.Helper()
	if err := chromedp.Do(w.ctx, steps...); err != nil {
		w.t.Fatal(err)
	}
}

func Command[P, R any](w *Window, c cdp.Command[P, R], params P) {
	w.t.Helper()
	if _, err := chromedp.Call(w.ctx, c, params); err != nil {
		w.t.Fatal(err)
	}
}

// Ask gives the browser a command and returns its answer.
func Ask[P, R any](w *Window, c cdp.Command[P, R], params P) R {
	w.t.Helper()
	answer, err := chromedp.Call(w.ctx, c, params)
	if err != nil {
		w.t.Fatal(err)
	}
	return answer
}

// Value is what a JavaScript expression gives.
func Value[T any](w *Window, expression string) T {
	w.t.Helper()
	v, err := chromedp.Run(w.ctx, chromedp.Evaluate[T](expression))
	if err != nil {
		w.t.Fatalf("%s: %v", expression, err)
	}
	return v
}

// Until waits for a JavaScript expression to become true, also across a page that loads itself anew.
func (w *Window) Until(expression string) {
	w.t.Helper()
	poll := chromedp.Poll[bool](expression, chromedp.WithPollingTimeout(patience))
	_, err := chromedp.Run(w.ctx, poll)
	for err != nil && elsewhere(err) && w.ctx.Err() == nil {
		_, err = chromedp.Run(w.ctx, poll)
	}
	if err != nil {
		w.mu.Lock()
		defer w.mu.Unlock()
		w.t.Fatalf("waiting for %s: %v; in the page: %q", expression, err, w.troubles)
	}
}

// elsewhere tells whether a command failed because the page it was for has gone.
func elsewhere(err error) bool {
	return strings.Contains(err.Error(), "navigated") || strings.Contains(err.Error(), "Cannot find context")
}

// Screen gives the page a screen of that size, light or dark.
func (w *Window) Screen(width, height int64, scheme string) {
	w.t.Helper()
	w.Do(chromedp.EmulateViewport(width, height))
	Command(w, emulation.SetEmulatedMedia, emulation.SetEmulatedMediaParams{
		Features: []*emulation.MediaFeature{{Name: "prefers-color-scheme", Value: scheme}},
	})
}

// Mouse moves, presses or releases the pointer at a share of a plot's width and of its height.
func (w *Window) Mouse(kind input.DispatchMouseEventType, plot string, x, y float64) {
	w.t.Helper()
	at := Value[[]float64](w, fmt.Sprintf(`(() => { const r = document.querySelector("#plot-%s .canvas").getBoundingClientRect(); return [r.left + %g * r.width, r.top + %g * r.height]; })()`, plot, x, y))
	event := input.DispatchMouseEventParams{Type: kind, X: at[0], Y: at[1], ClickCount: 1}
	if kind != input.DispatchMouseEventTypeMouseMoved {
		event.Button = input.MouseButtonLeft
	}
	Command(w, input.DispatchMouseEvent, event)
}

func (w *Window) Click(selector string) {
	w.t.Helper()
	w.Do(chromedp.Click(chromedp.CSS(selector)))
}

func (w *Window) Focus(selector string) {
	w.t.Helper()
	w.Do(chromedp.Focus(chromedp.CSS(selector)))
}

func (w *Window) Press(key string) {
	w.t.Helper()
	w.Do(chromedp.KeyEvent(key))
}

// Type types text into an element as if it were pasted, blanks and all.
func (w *Window) Type(selector, text string) {
	w.t.Helper()
	w.Focus(selector)
	Command(w, input.InsertText, input.InsertTextParams{Text: text})
}

// Choose chooses an option of a select element as a person would.
func (w *Window) Choose(selector, option string) {
	w.t.Helper()
	Value[bool](w, fmt.Sprintf(`(() => { const e = document.querySelector(%q); e.value = %q; return e.dispatchEvent(new Event("change")); })()`, selector, option))
}

// Picture takes a picture of the screen, when pictures are asked for.
func (w *Window) Picture(name string) {
	w.t.Helper()
	if *pictures == "" {
		return
	}
	w.Do(chromedp.Sleep(600 * time.Millisecond)) // for what is still being drawn
	png, err := chromedp.Run(w.ctx, chromedp.CaptureScreenshot())
	if err == nil {
		err = os.WriteFile(filepath.Join(*pictures, name+".png"), png, 0o644)
	}
	if err != nil {
		w.t.Fatal(err)
	}
}
