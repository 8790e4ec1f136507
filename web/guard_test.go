package web

import (
	"net"
	"net/http"
	"net/http/httptest"
	"strings"
	"testing"
)

func tcp(address string) net.Addr {
	a, err := net.ResolveTCPAddr("tcp", address)
	if err != nil {
		panic(err)
	}
	return a
}

func TestOwnHost(t *testing.T) {
	loopback, lan, six := tcp("127.0.0.1:8765"), tcp("192.0.2.7:8765"), tcp("[2001:db8::7]:8765")
	tests := []struct {
		name, host string
		local      net.Addr
		want       bool
	}{
		{"the usual address", "127.0.0.1:8765", loopback, true},
		{"the usual name", "localhost:8765", loopback, true},
		{"a name in capitals", "LOCALHOST:8765", loopback, true},
		{"through a forwarded port", "localhost:9000", loopback, true},
		{"without a port", "127.0.0.1", loopback, true},
		{"another loopback address", "127.0.0.2:8765", loopback, true},
		{"loopback of IPv6", "[::1]:8765", loopback, true},
		{"loopback of IPv6 without a port", "[::1]", loopback, true},
		{"the address listened at", "192.0.2.7:8765", lan, true},
		{"the address listened at, IPv6", "[2001:db8::7]:8765", six, true},
		{"an address mapped into IPv6", "[::ffff:192.0.2.7]:8765", lan, true},
		{"another machine's address", "192.0.2.8:8765", lan, false},
		{"an outside name that points here", "evil.example:8765", loopback, false},
		{"a name that begins like ours", "localhost.evil.example", loopback, false},
		{"a name that begins like an address", "127.0.0.1.evil.example", loopback, false},
		{"no name", "", loopback, false},
		{"no local address", "192.0.2.7:8765", nil, false},
		{"any address", "0.0.0.0:8765", loopback, false},
	}
	for _, test := range tests {
		t.Run(test.name, func(t *testing.T) {
			if got := ownHost(test.host, test.local); got != test.want {
				t.Errorf("%v, want %v", got, test.want)
			}
		})
	}
}

func TestGuardRefusesOtherNames(t *testing.T) {
	s := NewServer(NewHub(Run{Rig: madeRig(t, 1, 1, 101), Kind: "demo", Saves: true}), nil)
	for host, want := range map[string]int{"localhost:8765": http.StatusOK, "evil.example:8765": http.StatusMisdirectedRequest} {
		for _, path := range []string{"/", "/main.js"} {
			r := httptest.NewRequest("GET", path, nil)
			r.Host = host
			w := httptest.NewRecorder()
			s.http.Handler.ServeHTTP(w, r)
			if w.Code != want {
				t.Errorf("%s%s: status %d, want %d", host, path, w.Code, want)
			}
			if leaked := strings.Contains(w.Body.String(), "script"); leaked && want != http.StatusOK {
				t.Errorf("%s%s was answered with %q", host, path, w.Body)
			}
		}
	}
}

func TestGuardSetsThePolicy(t *testing.T) {
	s := NewServer(NewHub(Run{Rig: madeRig(t, 1, 1, 101), Kind: "demo", Saves: true}), nil)
	r := httptest.NewRequest("GET", "http://localhost/", nil)
	w := httptest.NewRecorder()
	s.http.Handler.ServeHTTP(w, r)
	csp := w.Result().Header.Get("Content-Security-Policy")
	for _, want := range []string{"default-src 'none'", "script-src 'self'", "connect-src 'self'", "style-src 'self'", "frame-ancestors 'none'"} {
		if !strings.Contains(csp, want) {
			t.Errorf("policy %q lacks %q", csp, want)
		}
	}
	if strings.Contains(csp, "unsafe") || strings.Contains(csp, "*") {
		t.Errorf("policy %q lets too much through", csp)
	}
	if w.Result().Header.Get("X-Content-Type-Options") != "nosniff" {
		t.Error("content types may be guessed")
	}
}

func TestURL(t *testing.T) {
	for address, want := range map[string]string{
		"127.0.0.1:8765": "http://127.0.0.1:8765/",
		"0.0.0.0:80":     "http://127.0.0.1:80/",
		"[::]:8765":      "http://[::1]:8765/",
		"192.0.2.7:8765": "http://192.0.2.7:8765/",
	} {
		if got := URL(tcp(address)); got != want {
			t.Errorf("%s, want %s", got, want)
		}
	}
}
