package web

import (
	"bytes"
	"io"
	"io/fs"
	"mime"
	"net"
	"net/http"
	"path"
	"runtime"
	"strings"
	"testing"
	"testing/fstest"
	"time"

	"github.com/gorilla/websocket"

	"shakerwatch/static"
)

func TestWhatIsServedIsWhatIsEmbedded(t *testing.T) {
	address, _ := serve(t, NewHub(Run{Rig: madeRig(t, 1, 1, 101), Kind: "demo", Saves: true}))
	client := &http.Client{Transport: &http.Transport{DisableKeepAlives: true}}
	get := func(name string) (*http.Response, []byte) {
		response, err := client.Get(address + name)
		if err != nil {
			t.Fatal(err)
		}
		defer response.Body.Close()
		body, err := io.ReadAll(response.Body)
		if err != nil {
			t.Fatal(err)
		}
		return response, body
	}
	files := 0
	err := fs.WalkDir(static.Page(), ".", func(name string, d fs.DirEntry, err error) error {
		if err != nil || d.IsDir() {
			return err
		}
		files++
		want, err := fs.ReadFile(static.Page(), name)
		if err != nil {
			return err
		}
		at := name
		if name == "index.html" {
			at = "" // by its own name it sends on to the root
		}
		response, body := get(at)
		kind, _, _ := mime.ParseMediaType(response.Header.Get("Content-Type"))
		wantKind, _, _ := mime.ParseMediaType(mime.TypeByExtension(path.Ext(name)))
		if response.StatusCode != http.StatusOK || !bytes.Equal(body, want) || kind != wantKind {
			t.Errorf("%s: status %d, %s, %d bytes of %d", name, response.StatusCode, kind, len(body), len(want))
		}
		return nil
	})
	if err != nil || files < 10 {
		t.Errorf("%d files, %v", files, err)
	}
	if response, _ := get("nothing.js"); response.StatusCode != http.StatusNotFound {
		t.Errorf("a file that is not there: status %d", response.StatusCode)
	}
	response, err := client.Post(address, "text/plain", strings.NewReader("x"))
	if err != nil {
		t.Fatal(err)
	}
	response.Body.Close()
	if response.StatusCode != http.StatusMethodNotAllowed {
		t.Errorf("POST: status %d", response.StatusCode)
	}
}

func TestServeNeedsTheChartLibrary(t *testing.T) {
	s := NewServer(NewHub(Run{Rig: madeRig(t, 1, 1, 101), Kind: "demo", Saves: true}), nil)
	s.page = fstest.MapFS{"index.html": {}}
	l, err := net.Listen("tcp", "127.0.0.1:0")
	if err != nil {
		t.Fatal(err)
	}
	err = s.Serve(l)
	if err == nil || !strings.Contains(err.Error(), "make") || !strings.Contains(err.Error(), static.ChartLibrary) {
		t.Errorf("built without the chart library: %v", err)
	}
	if _, err := net.Dial("tcp", l.Addr().String()); err == nil {
		t.Error("the listener was left open")
	}
}

func TestOnlyTheOwnPageMayConnect(t *testing.T) {
	address, _ := serve(t, NewHub(Run{Rig: madeRig(t, 1, 1, 101), Kind: "demo", Saves: true}))
	host := strings.TrimSuffix(strings.TrimPrefix(address, "http://"), "/")
	tests := []struct {
		name   string
		header http.Header
		want   int
	}{
		{"its own page", http.Header{"Origin": {"http://" + host}}, http.StatusSwitchingProtocols},
		{"a program, which names no origin", nil, http.StatusSwitchingProtocols},
		{"another site", http.Header{"Origin": {"http://evil.example"}}, http.StatusForbidden},
		{"another port of this machine", http.Header{"Origin": {"http://127.0.0.1:1"}}, http.StatusForbidden},
		{"a file", http.Header{"Origin": {"null"}}, http.StatusForbidden},
		{"a name that points here", http.Header{"Origin": {"http://evil.example"}, "Host": {"evil.example"}}, http.StatusMisdirectedRequest},
	}
	for _, test := range tests {
		t.Run(test.name, func(t *testing.T) {
			conn, response, err := websocket.DefaultDialer.Dial("ws://"+host+"/live", test.header)
			if response == nil || response.StatusCode != test.want {
				t.Errorf("%v, %v; want status %d", response, err, test.want)
			}
			if err == nil {
				conn.Close()
			}
		})
	}
}

func TestTooManyPagesAreTurnedAway(t *testing.T) {
	address, stop := serve(t, NewHub(Run{Rig: madeRig(t, 1, 1, 101), Kind: "demo", Saves: true}))
	host := strings.TrimPrefix(address, "http://")
	for i := range maxBrowsers {
		conn, _, err := websocket.DefaultDialer.Dial("ws://"+host+"live", nil)
		if err != nil {
			t.Fatalf("page %d: %v", i+1, err)
		}
		defer conn.Close()
	}
	_, response, err := websocket.DefaultDialer.Dial("ws://"+host+"live", nil)
	if err == nil || response == nil || response.StatusCode != http.StatusServiceUnavailable {
		t.Errorf("one page too many: %v, %v", response, err)
	}
	stop()
	checkGone(t)
}

// checkGone fails the test when a goroutine of this package outlives Close. One that has counted
// itself out may still be on its last lines, so it looks again for a while.
func checkGone(t *testing.T) {
	t.Helper()
	stacks := ownStacks()
	for tries := 0; stacks != "" && tries < 100; tries++ {
		time.Sleep(20 * time.Millisecond)
		stacks = ownStacks()
	}
	if stacks != "" {
		t.Errorf("still running after Close:\n%s", stacks)
	}
}

// ownStacks are the goroutines of this package's browsers and servers.
func ownStacks() string {
	var text []byte
	for n := 1 << 20; ; n *= 2 {
		text = make([]byte, n)
		if got := runtime.Stack(text, true); got < n {
			text = text[:got]
			break
		}
	}
	var own []string
	for stack := range strings.SplitSeq(string(text), "\n\n") {
		if strings.Contains(stack, "web.(*browser)") || strings.Contains(stack, "web.(*Server)") {
			own = append(own, stack)
		}
	}
	return strings.Join(own, "\n\n")
}

func TestCloseBeforeServe(t *testing.T) {
	s := NewServer(NewHub(Run{Rig: madeRig(t, 1, 1, 101), Kind: "demo", Saves: true}), nil)
	if err := s.Close(); err != nil {
		t.Error(err)
	}
	if err := s.Close(); err != nil {
		t.Error("twice: ", err)
	}
	l, err := net.Listen("tcp", "127.0.0.1:0")
	if err != nil {
		t.Fatal(err)
	}
	if err := s.Serve(l); err != nil {
		t.Error("serve after close: ", err)
	}
}
