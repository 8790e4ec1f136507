package web

import (
	"net"
	"net/http"
	"net/netip"
	"strings"
)

// policy lets the page load and talk to nothing but this server, and run nothing that is not a file of
// it.
const policy = "default-src 'none'; script-src 'self'; style-src 'self'; img-src 'self'; connect-src 'self'; " +
	"base-uri 'none'; form-action 'none'; frame-ancestors 'none'"

// guard lets through only requests that name this machine, and sets what browsers are to keep to.
//
// The name is checked because a page of another site can have its own host name point here and so pass
// for the same origin.
func (s *Server) guard(next http.Handler) http.Handler {
	return http.HandlerFunc(func(w http.ResponseWriter, r *http.Request) {
		local, _ := r.Context().Value(http.LocalAddrContextKey).(net.Addr)
		if !ownHost(r.Host, local) {
			s.logger.Warn("unknown host name refused", keyHost, r.Host, keyBrowser, r.RemoteAddr)
			http.Error(w, "This program does not go by that name. Open it by the address that it printed when it started.", http.StatusMisdirectedRequest)
			return
		}
		header := w.Header()
		header.Set("Content-Security-Policy", policy)
		header.Set("X-Content-Type-Options", "nosniff")
		header.Set("Referrer-Policy", "no-referrer")
		header.Set("Cross-Origin-Resource-Policy", "same-origin")
		header.Set("Cache-Control", "no-cache") // after an update no page keeps an old script
		next.ServeHTTP(w, r)
	})
}

// ownHost tells whether a request's Host is a loopback name or address, or the address at which the
// request arrived, which is one that the server listens at.
func ownHost(host string, local net.Addr) bool {
	name := host
	if h, _, err := net.SplitHostPort(host); err == nil {
		name = h
	}
	name = strings.TrimSuffix(strings.TrimPrefix(name, "["), "]")
	if strings.EqualFold(name, "localhost") {
		return true
	}
	ip, err := netip.ParseAddr(name)
	if err != nil {
		return false
	}
	if ip.IsLoopback() {
		return true
	}
	at, ok := local.(*net.TCPAddr)
	return ok && ip.Unmap() == at.AddrPort().Addr().Unmap().WithZone("")
}

// URL is where a browser on this machine finds a server that listens at a.
func URL(a net.Addr) string {
	at, ok := a.(*net.TCPAddr)
	if !ok {
		return "http://" + a.String() + "/"
	}
	ip := at.AddrPort().Addr().Unmap()
	switch {
	case !ip.IsUnspecified():
	case ip.Is6():
		ip = netip.IPv6Loopback()
	default:
		ip = netip.AddrFrom4([4]byte{127, 0, 0, 1})
	}
	return "http://" + netip.AddrPortFrom(ip, at.AddrPort().Port()).String() + "/"
}
