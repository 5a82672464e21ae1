package web

import (
	"net/http"
	"strings"
	"testing"
)

// hostCases is who may call: the right port under a loopback name.
var hostCases = []struct {
	host   string
	served bool
}{
	{"127.0.0.1:8470", true},
	{"localhost:8470", true},
	{"LOCALHOST:8470", true},
	{"localhost.:8470", true},
	{"[::1]:8470", true},

	{"", false},
	{"evil.test", false},
	{"evil.test:8470", false},
	{"localhost.evil.test:8470", false},
	{"127.0.0.1.evil.test:8470", false},
	{"127.0.0.1.:8470", false},
	{"localhost..:8470", false},
	{"notlocalhost:8470", false},
	{"localhost:8471", false},
	{"127.0.0.1:80", false},
	{"127.0.0.1", false},
	{"localhost", false},
	{"localhost:", false},
	{"localhost:08470", false},
	{"[::1]", false},
	{"::1", false},
	{"[::1%25lo]:8470", false},
	{"127.0.0.2:8470", false},
	{"127.1:8470", false},
	{"2130706433:8470", false},
	{"0.0.0.0:8470", false},
	{"192.168.0.1:8470", false},
	{"127.0.0.1:8470@evil.test", false},
	{"user@127.0.0.1:8470", false},
}

func TestHostAllowListStandsBeforeEverything(t *testing.T) {
	s := newSite(t)
	routes := append(routesOf(t, s.router), route{"GET", "", "/nothing"}, route{"POST", "", "/api/v1/none"}, route{"PATCH", "", "/api/v1/designs"}, route{"OPTIONS", "", "/"})
	for _, c := range hostCases {
		for _, at := range routes {
			w := s.ask(at.method, at.path, "", func(r *http.Request) { r.Host = c.host })
			if refused := w.Code == http.StatusForbidden; refused == c.served {
				t.Errorf("%s %s for host %q: status %d", at.method, at.path, c.host, w.Code)
			}
		}
	}
}

func TestHostsOnPort80NeedNoPort(t *testing.T) {
	hosts, err := hostsOf("127.0.0.1:80")
	if err != nil {
		t.Fatal(err)
	}
	for host, want := range map[string]bool{"localhost": true, "127.0.0.1": true, "[::1]": true, "localhost:80": true, "evil.test": false, "": false} {
		if hosts.allow(host) != want {
			t.Errorf("allow(%q) = %t", host, !want)
		}
	}
}

func TestNoOtherOriginChangesAnything(t *testing.T) {
	s := seeded(t)
	before := s.dump()
	sites := []string{"same-origin", "same-site", "cross-site", "none", ""}
	origins := []string{"http://" + testHost, "http://127.0.0.1:9999", "null", "http://evil.test", "https://" + testHost, "", "absent"}
	unsafeRoutes, refusals := 0, 0
	for _, at := range routesOf(t, s.router) {
		if !unsafe(at.method) {
			continue
		}
		unsafeRoutes++
		for _, from := range sites {
			for _, origin := range origins {
				own := (from == "same-origin" || from == "none" || from == "") && (origin == origins[0] || origin == "absent")
				if own {
					continue // would change something; TestOwnOriginIsServed has it
				}
				w := s.ask(at.method, at.path, `{}`, fetchedFrom(from, origin))
				if w.Code != http.StatusForbidden {
					t.Errorf("%s %s from %q with Origin %q: status %d", at.method, at.path, from, origin, w.Code)
				}
				refusals++
			}
		}
	}
	if unsafeRoutes < 5 || refusals != unsafeRoutes*(len(sites)*len(origins)-6) {
		t.Errorf("checked %d refusals on %d routes", refusals, unsafeRoutes)
	}
	if after := s.dump(); after != before {
		t.Errorf("something changed:\n%s\n%s", before, after)
	}
}

func fetchedFrom(site, origin string) func(*http.Request) {
	return func(r *http.Request) {
		if site != "" {
			r.Header.Set("Sec-Fetch-Site", site)
		}
		if origin != "absent" {
			r.Header.Set("Origin", origin)
		}
	}
}

func TestOwnOriginIsServed(t *testing.T) {
	s := newSite(t)
	for _, site := range []string{"same-origin", "none", ""} {
		for _, origin := range []string{"http://" + testHost, "absent"} {
			for _, at := range routesOf(t, s.router) {
				w := s.ask(at.method, at.path, `{}`, fetchedFrom(site, origin))
				if w.Code == http.StatusForbidden {
					t.Errorf("%s %s from %q with Origin %q is refused", at.method, at.path, site, origin)
				}
			}
		}
	}
}

// dump is everything the API tells of the store.
func (s *site) dump() string {
	all := s.ask("GET", "/api/v1/designs", "").Body.String()
	for _, path := range []string{"/api/v1/designs/1", "/api/v1/designs/1/revisions", "/api/v1/designs/1/revisions/1", "/api/v1/designs/1/revisions/1/share"} {
		all += s.ask("GET", path, "").Body.String()
	}
	return all
}

func TestReadingWritesNothing(t *testing.T) {
	s := seeded(t)
	before := s.dump()
	for _, at := range routesOf(t, s.router) {
		if !unsafe(at.method) {
			s.ask(at.method, at.path, "")
			s.ask("HEAD", at.path, "")
		}
	}
	if after := s.dump(); after != before {
		t.Errorf("reading changed\n%s\nto\n%s", before, after)
	}
}

func TestEveryAnswerCarriesTheHeaders(t *testing.T) {
	s := seeded(t)
	s.router.Get("/panic", func(http.ResponseWriter, *http.Request) { panic("boom") })
	routes := append(routesOf(t, s.router), route{"GET", "", "/nothing"}, route{"GET", "", "/api/v1/none"}, route{"PATCH", "", "/api/v1/designs"})
	for _, at := range routes {
		for _, host := range []string{testHost, "evil.test"} {
			w := s.ask(at.method, at.path, "", func(r *http.Request) { r.Host = host })
			checkHeaders(t, at.method+" "+at.path+" at "+host, w.Header())
		}
	}
}

func checkHeaders(t *testing.T, what string, h http.Header) {
	t.Helper()
	for name, want := range map[string]string{
		"X-Content-Type-Options": "nosniff", "Referrer-Policy": "no-referrer", "Cross-Origin-Opener-Policy": "same-origin",
	} {
		if h.Get(name) != want {
			t.Errorf("%s: %s is %q", what, name, h.Get(name))
		}
	}
	if cache := h.Get("Cache-Control"); cache != "no-store" && !strings.Contains(cache, "immutable") {
		t.Errorf("%s: Cache-Control is %q", what, cache)
	}
	for name := range h {
		if strings.HasPrefix(name, "Access-Control-") {
			t.Errorf("%s: %s is set", what, name)
		}
	}
	checkPolicy(t, what, h.Get("Content-Security-Policy"))
}

func checkPolicy(t *testing.T, what, policy string) {
	t.Helper()
	directives := map[string]string{}
	for _, directive := range strings.Split(policy, ";") {
		name, sources, _ := strings.Cut(strings.TrimSpace(directive), " ")
		directives[name] = sources
	}
	for name, want := range map[string]string{"default-src": "'none'", "script-src": "'self'", "base-uri": "'none'", "form-action": "'self'", "frame-ancestors": "'none'"} {
		if directives[name] != want {
			t.Errorf("%s: %s is %q", what, name, directives[name])
		}
	}
	if strings.Contains(policy, "unsafe") || strings.Contains(policy, "*") || strings.Contains(policy, "http") {
		t.Errorf("%s: the policy is open: %s", what, policy)
	}
}
