package api

import (
	"net"
	"net/http"
	"net/netip"
	"strings"
)

// Hosts are the names that a server answers to. A page of another site can make
// its own name point at this machine; the browser then takes the two for one site.
// But it says the foreign name in every request, and here it is not on the list.
type Hosts struct {
	names map[string]bool
	// anyAddress: the server listens to the network, where people reach it by
	// whatever address the machine has. An address is not a name and cannot be
	// made to point elsewhere.
	anyAddress bool
}

// NewHosts returns the loopback names, the host of the address listened to, and
// the names added, which may have a port that is ignored.
func NewHosts(listening string, more []string) Hosts {
	h := Hosts{names: map[string]bool{"localhost": true}}
	host := bareHost(listening)
	if a, err := netip.ParseAddr(host); host == "" || err == nil && !a.IsLoopback() {
		h.anyAddress = true
	}
	for _, name := range append([]string{host}, more...) {
		if name = bareHost(name); name != "" {
			h.names[name] = true
		}
	}
	return h
}

// bareHost returns the host of "host", "host:port", "[v6]" or "[v6]:port", in lower case.
func bareHost(s string) string {
	if host, _, err := net.SplitHostPort(s); err == nil {
		s = host
	}
	s = strings.TrimSuffix(strings.TrimPrefix(s, "["), "]")
	return strings.ToLower(strings.TrimSuffix(s, "."))
}

// allows reports whether a Host header is one of this server's.
func (h Hosts) allows(header string) bool {
	host := bareHost(header)
	if h.names[host] {
		return true
	}
	a, err := netip.ParseAddr(host)
	return err == nil && (h.anyAddress || a.Unmap().IsLoopback())
}

func (s *server) ownHostOnly(next http.Handler) http.Handler {
	return http.HandlerFunc(func(w http.ResponseWriter, r *http.Request) {
		if !s.Hosts.allows(r.Host) {
			s.Log.Warn("a request for a foreign host was refused", "host", r.Host, "from", r.RemoteAddr)
			http.Error(w, "This server does not answer to that name. If it should, start it with --allow-host NAME.", http.StatusMisdirectedRequest)
			return
		}
		next.ServeHTTP(w, r)
	})
}
