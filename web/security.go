package web

import (
	"fmt"
	"net"
	"net/http"
	"net/netip"
	"strings"

	"lossbook/assets"
)

// maxBody bounds what a request may send.
const maxBody = 8 << 20

// contentPolicy lets a page load what this server serves and nothing else. The
// one hash is that of the fixed stylesheet the chart library writes.
const contentPolicy = "default-src 'none'; script-src 'self'; style-src 'self' " + assets.ChartStyle +
	"; img-src 'self' data:; font-src 'self'; connect-src 'self'; base-uri 'none'; form-action 'self'; frame-ancestors 'none'"

// secureHeaders sets what every answer carries. An asset, which is the same for
// everybody, replaces the no-store.
func secureHeaders(next http.Handler) http.Handler {
	return http.HandlerFunc(func(w http.ResponseWriter, r *http.Request) {
		h := w.Header()
		h.Set("Content-Security-Policy", contentPolicy)
		h.Set("X-Content-Type-Options", "nosniff")
		h.Set("Referrer-Policy", "no-referrer")
		h.Set("Cross-Origin-Opener-Policy", "same-origin")
		h.Set("Cross-Origin-Resource-Policy", "same-origin")
		h.Set("Cache-Control", "no-store")
		next.ServeHTTP(w, r)
	})
}

// hostList is the names a request may call this server by. It stands before
// every route: a page of another name that resolves to this machine must not
// read a design, and no browser header tells such a request apart.
type hostList struct {
	port  string
	addrs map[netip.Addr]bool
}

// hostsOf allows localhost, both loopback addresses and the address listened on.
func hostsOf(listen string) (hostList, error) {
	host, port, err := net.SplitHostPort(listen)
	if err != nil || port == "" || port == "0" {
		return hostList{}, fmt.Errorf("web: %q is no host and port to be called by", listen)
	}
	hosts := hostList{port, map[netip.Addr]bool{netip.IPv6Loopback(): true, netip.AddrFrom4([4]byte{127, 0, 0, 1}): true}}
	if addr, err := netip.ParseAddr(host); err == nil {
		hosts.addrs[addr] = true
	}
	return hosts, nil
}

func (l hostList) allow(hostport string) bool {
	host, port, err := net.SplitHostPort(hostport)
	if err != nil { // no port is the port of plain HTTP
		host, port = strings.TrimSuffix(strings.TrimPrefix(hostport, "["), "]"), "80"
	}
	if port != l.port {
		return false
	}
	if strings.EqualFold(strings.TrimSuffix(host, "."), "localhost") {
		return true
	}
	addr, err := netip.ParseAddr(host)
	return err == nil && l.addrs[addr]
}

func (s *Server) onlyHosts(hosts hostList) func(http.Handler) http.Handler {
	return func(next http.Handler) http.Handler {
		return s.handle(func(w http.ResponseWriter, r *http.Request) error {
			if !hosts.allow(r.Host) {
				return &Failure{Status: http.StatusForbidden, Title: "Not served under this name",
					Detail: "Open Lossbook under the address it printed when it started."}
			}
			next.ServeHTTP(w, r)
			return nil
		})
	}
}

// sameOrigin refuses what a page of another origin makes a browser send. The
// library's check trusts Sec-Fetch-Site where a browser sends it; an Origin that
// is not this server's is refused besides, whatever the other header says.
func (s *Server) sameOrigin(next http.Handler) http.Handler {
	protection := http.NewCrossOriginProtection()
	return s.handle(func(w http.ResponseWriter, r *http.Request) error {
		if err := protection.Check(r); err != nil || unsafe(r.Method) && foreignOrigin(r) {
			return &Failure{Status: http.StatusForbidden, Title: "Asked by another site",
				Detail: "Changes are only taken from Lossbook's own pages and from programs on this machine."}
		}
		next.ServeHTTP(w, r)
		return nil
	})
}

func unsafe(method string) bool {
	return method != http.MethodGet && method != http.MethodHead && method != http.MethodOptions
}

func foreignOrigin(r *http.Request) bool {
	origins, sent := r.Header["Origin"]
	return sent && (len(origins) != 1 || !strings.EqualFold(origins[0], "http://"+r.Host))
}

// boundedBody cuts a body off at the limit while it is read, and refuses one at
// once that says it is longer.
func boundedBody(next http.Handler) http.Handler {
	return http.HandlerFunc(func(w http.ResponseWriter, r *http.Request) {
		r.Body = http.MaxBytesReader(w, r.Body, maxBody)
		next.ServeHTTP(w, r)
	})
}
