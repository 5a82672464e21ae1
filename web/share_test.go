package web

import (
	"fmt"
	"io"
	"net"
	"net/http"
	"net/http/httptest"
	"net/url"
	"regexp"
	"slices"
	"strings"
	"testing"

	"golang.org/x/net/html"
)

const shareAPI = "/api/v1/designs/1/revisions/1/share"

// shared makes a link to revision 1 of design 1 and returns its path.
func (s *site) shared(note string) string {
	s.t.Helper()
	made := read[shareMade](s.t, s.want(201, "POST", shareAPI, text(s.t, shareRequest{note})))
	path, ours := strings.CutPrefix(made.URL, "http://"+testHost)
	if !ours || !regexp.MustCompile(`^/share/[A-Z2-7]{26,}$`).MatchString(path) {
		s.t.Fatalf("link %+v", made)
	}
	return path
}

func TestSharesOverTheAPI(t *testing.T) {
	s := seeded(t)
	first, second, third := s.shared("for Ada =1+1 <b>"), s.shared(""), s.shared("third")
	list := func() []shareHead {
		t.Helper()
		return read[struct{ Shares []shareHead }](t, s.want(200, "GET", shareAPI, "")).Shares
	}
	got := list()
	if len(got) != 3 || got[2].Note != "for Ada =1+1 <b>" || got[0].Note != "third" || got[0].Revoked || got[0].CreatedAt.IsZero() {
		t.Fatalf("%+v", got)
	}
	s.want(204, "DELETE", fmt.Sprintf("%s/%d", shareAPI, got[2].ID), "")
	s.want(204, "DELETE", fmt.Sprintf("%s/%d", shareAPI, got[2].ID), "")
	s.want(404, "GET", first, "")
	s.want(200, "GET", second, "")
	if got = list(); !got[2].Revoked || got[1].Revoked {
		t.Errorf("%+v", got)
	}
	s.want(204, "DELETE", shareAPI, "")
	s.want(404, "GET", second, "")
	s.want(404, "GET", third, "")
	for _, at := range []string{"/api/v1/designs/1/revisions/2/share", "/api/v1/designs/2/revisions/1/share", "/api/v1/designs/1/revisions/0/share"} {
		s.want(404, "GET", at, "")
		s.want(404, "POST", at, "{}")
		s.want(404, "DELETE", at, "")
		s.want(404, "DELETE", at+"/1", "")
	}
	s.want(404, "DELETE", shareAPI+"/99", "")
	s.want(404, "DELETE", shareAPI+"/99999999999999999999", "")
	s.want(201, "POST", shareAPI, text(t, shareRequest{strings.Repeat("ß", maxShareNote)}))
	s.want(422, "POST", shareAPI, text(t, shareRequest{strings.Repeat("ß", maxShareNote+1)}))
	s.want(422, "POST", shareAPI, `{"notes":"x"}`)
	if len(list()) != 4 {
		t.Errorf("%d links, want 4", len(list()))
	}
}

func TestSharesAreAsDescribed(t *testing.T) {
	s, doc := seeded(t), description(t)
	made := s.want(201, "POST", shareAPI, `{}`)
	list := read[struct{ Shares []map[string]any }](t, s.want(200, "GET", shareAPI, "")).Shares
	if len(list) != 1 {
		t.Fatalf("%+v", list)
	}
	for schema, body := range map[string]string{"ShareMade": made.Body.String(), "ShareHead": text(t, list[0]), "ShareRequest": "{}"} {
		if errs := conforms(doc, schema, body); len(errs) > 0 {
			t.Errorf("%s: %v", schema, errs)
		}
	}
	if made.Header().Get("Location") != read[shareMade](t, made).URL {
		t.Errorf("Location %q", made.Header().Get("Location"))
	}
}

// A link shows what the revision's own page and files show.
func TestShareShowsTheRevision(t *testing.T) {
	s := seeded(t)
	at := s.shared("for Ada")
	own, link := s.open(200, "/designs/1/revisions/1"), s.open(200, at)
	for _, row := range []string{"Loss, mW", "Efficiency, %"} {
		if !slices.Equal(own.row(row), link.row(row)) {
			t.Errorf("%s: %v, want %v", row, link.row(row), own.row(row))
		}
	}
	for _, want := range []string{"95.41 %", "11 mΩ", "first", "battery lead and fuse", "Capacitors hold charge"} {
		if !strings.Contains(link.words(), want) {
			t.Errorf("it lacks %q", want)
		}
	}
	if n := len(link.all(tag("loss-chart"))); n == 0 || n != len(own.all(tag("loss-chart"))) {
		t.Errorf("%d charts", n)
	}
	if got := s.open(200, at+"?vin=14.4+V").row("Efficiency, %"); got[7] != "96.23" {
		t.Errorf("at 14.4 V: %q", got)
	}
	for _, file := range []string{"/efficiency.csv", "/design.json"} {
		got, want := s.want(200, "GET", at+file, ""), s.want(200, "GET", "/designs/1/revisions/1"+file, "")
		if got.Body.String() != want.Body.String() || got.Body.Len() < 100 {
			t.Errorf("%s differs from the revision's", file)
		}
		if got.Header().Get("Content-Disposition") != want.Header().Get("Content-Disposition") {
			t.Errorf("%s is saved as %s", file, got.Header().Get("Content-Disposition"))
		}
	}
}

// The link stays at its revision, whatever becomes of the design.
func TestShareIsFrozen(t *testing.T) {
	s := seeded(t)
	at := s.shared("")
	before := s.want(200, "GET", at, "").Body.String()
	form := s.open(200, "/designs/1").form("entries", map[string]string{"name": "renamed", "switch.rds_on": "8m5", "note.revision": "next"})
	s.moved(s.send("/designs/1/revisions", form))
	if after := s.want(200, "GET", at, "").Body.String(); after != before {
		t.Error("it shows something else after an edit")
	}
}

// ways are the attributes by which a page leads on.
var ways = []string{"href", "src", "action", "formaction", "hx-get", "hx-post", "hx-put", "hx-delete", "hx-push-url"}

// Everything that a link's page leads to is the page itself, its files and what
// browsers need to draw it; no id of a design or link is on it.
func TestShareLeadsNowhereElse(t *testing.T) {
	s := seeded(t)
	s.another("0", nil) // a neighbour, and a later one
	at := s.shared("for Ada")
	leads := 0
	pages := map[string]page{"the page": s.open(200, at), "another point": s.open(200, at+"?vin=14.4+V&load=50", liveEdit),
		"a working": s.open(200, at+"?load=50&working=switch.turn_on"), "none": s.open(200, at+"?working=switch.x", liveEdit),
		"nothing": s.open(404, "/share/1"), "a wrong method": s.page(405, s.send(at, url.Values{"note": {"x"}}), "POST")}
	for name, p := range pages {
		for _, n := range p.all(func(*html.Node) bool { return true }) {
			for _, way := range ways {
				to, _, inside := strings.Cut(attr(n, way), "#")
				if inside && to == "" { // on this page
					leads++
					continue
				}
				if to == "" || way == "hx-push-url" && to == "true" {
					continue
				}
				leads++
				own := to == at || strings.HasPrefix(to, at+"?") || to == at+"/efficiency.csv" || to == at+"/efficiency.xlsx" || to == at+"/design.json"
				if !own && !strings.HasPrefix(to, "/assets/") {
					t.Errorf("%s: <%s %s=%q>", name, n.Data, way, to)
				}
			}
			if n.Data == "form" && attr(n, "method") != "get" {
				t.Errorf("%s: a form that is sent by %q", name, attr(n, "method"))
			}
		}
	}
	if leads < 30 {
		t.Errorf("only %d ways were looked at", leads)
	}
	body := s.want(200, "GET", at, "").Body.String()
	for _, word := range []string{"/designs", "/api", "Reopen", "for Ada", "the draft", "share.js"} {
		if strings.Contains(body, word) {
			t.Errorf("the page holds %q", word)
		}
	}
}

// What opens nothing tells nothing: all of it answers the same bytes.
func TestLinksThatOpenNothing(t *testing.T) {
	s := seeded(t)
	revoked, binned := s.shared(""), s.shared("")
	s.want(204, "DELETE", shareAPI+"/1", "")
	live := s.shared("")
	want := s.want(404, "GET", "/share/", "")
	if !strings.Contains(want.Body.String(), "This link opens nothing") {
		t.Fatalf("%s", want.Body)
	}
	odd := []string{"/share/%25", "/share/1", "/share/%00", "/share/%2F", "/share//", "/share/1/", "/share/a/b/c", "/share/1/efficiency.csv", "/share/" + strings.Repeat("A", 26),
		"/share/" + strings.Repeat("A", 8000), "/share/..%2fdesigns", "/share/%E2%80%AE", "/share/1?vin=12",
		revoked, revoked + "/efficiency.csv", revoked + "/design.json", revoked + "?vin=14.4", revoked + "?working=switch.conduction", "/share/1?working=switch.conduction",
		live + "/", live + "/other", live + "/working", live + "/switch.conduction?working=switch.conduction", live + "/design.json/", strings.ToLower(live), live + "%20"}
	check := func(path string) {
		t.Helper()
		got := s.want(404, "GET", path, "")
		if got.Body.String() != want.Body.String() {
			t.Errorf("%.60s: another answer:\n%s", path, got.Body)
		}
		for name := range want.Header() {
			if got.Header().Get(name) != want.Header().Get(name) {
				t.Errorf("%.60s: %s is %q", path, name, got.Header().Get(name))
			}
		}
		if len(got.Header()) != len(want.Header()) {
			t.Errorf("%.60s: headers %v", path, got.Header())
		}
	}
	for _, path := range odd {
		check(path)
	}
	s.want(200, "GET", live, "")
	s.want(200, "GET", binned, "")
	s.want(204, "DELETE", "/api/v1/designs/1", "")
	for _, path := range []string{binned, binned + "/efficiency.csv", live} {
		check(path)
	}
}

// An address that is none, with a bare %, is refused before any of this: alike,
// whether a link stands in it or not.
func TestAddressThatIsNone(t *testing.T) {
	s := seeded(t)
	token := strings.TrimPrefix(s.shared(""), "/share/")
	server := httptest.NewServer(s.router)
	defer server.Close()
	answers := map[string]bool{}
	for _, path := range []string{"/share/%", "/share/" + token + "%", "/share/" + token + "/%zz"} {
		conn, err := net.Dial("tcp", server.Listener.Addr().String())
		if err != nil {
			t.Fatal(err)
		}
		defer conn.Close()
		fmt.Fprintf(conn, "GET %s HTTP/1.1\r\nHost: %s\r\n\r\n", path, testHost)
		answer, err := io.ReadAll(conn)
		if err != nil || !strings.HasPrefix(string(answer), "HTTP/1.1 400 ") || strings.Contains(string(answer), token) {
			t.Errorf("%s: %v %s", path, err, answer)
		}
		answers[string(answer)] = true
	}
	if len(answers) != 1 {
		t.Errorf("%d different answers: %v", len(answers), answers)
	}
}

// With the link come the headers of every answer, and nothing of it is kept.
func TestShareHeaders(t *testing.T) {
	s := seeded(t)
	at := s.shared("")
	for _, path := range []string{at, at + "/efficiency.csv", at + "/design.json", "/share/1"} {
		for _, method := range []string{"GET", "HEAD", "POST", "DELETE"} {
			w := s.ask(method, path, "")
			checkHeaders(t, method+" "+path, w.Header())
			if cache := w.Header().Get("Cache-Control"); cache != "no-store" {
				t.Errorf("%s %s: Cache-Control %q", method, path, cache)
			}
			if reads := method == "GET" || method == "HEAD"; !reads && w.Code != http.StatusMethodNotAllowed {
				t.Errorf("%s %s: status %d", method, path, w.Code)
			}
		}
		if w := s.ask("GET", path, "", func(r *http.Request) { r.Host = "evil.test" }); w.Code != http.StatusForbidden {
			t.Errorf("%s under another name: status %d", path, w.Code)
		}
	}
}

// Whatever goes wrong with a link, the log is not told how to open it.
func TestTokenIsInNoLog(t *testing.T) {
	s := seeded(t)
	at := s.shared("")
	token := strings.TrimPrefix(at, "/share/")
	s.router.Get("/share/{token}/boom", func(http.ResponseWriter, *http.Request) { panic("boom") })
	s.router.Get("/share/{token}/boom/{more}", func(http.ResponseWriter, *http.Request) { panic("boom") })
	s.want(200, "GET", at, "")
	s.want(500, "GET", at+"/boom", "")
	s.want(500, "GET", at+"/boom/2", "")
	if err := s.store.Close(); err != nil {
		t.Fatal(err)
	}
	for _, path := range []string{at, at + "/design.json", at + "/efficiency.csv?vin=1"} {
		p := s.open(500, path)
		for _, n := range p.all(tag("a")) {
			if to := attr(n, "href"); !strings.HasPrefix(to, "#") {
				t.Errorf("the fault of a link leads to %s", to)
			}
		}
	}
	log := s.log.String()
	if strings.Contains(log, token) {
		t.Errorf("the log holds the token:\n%s", log)
	}
	if n := strings.Count(log, "/share/…"); n < 5 || !strings.Contains(log, "path=/share/…/boom/2") {
		t.Errorf("%d requests of links are in the log:\n%s", n, log)
	}
}
