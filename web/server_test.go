package web

import (
	"bytes"
	"context"
	"encoding/json"
	"io"
	"log/slog"
	"net/http"
	"net/http/httptest"
	"os"
	"path/filepath"
	"regexp"
	"strings"
	"testing"

	"github.com/go-chi/chi/v5"

	"lossbook/assets"
	"lossbook/budget"
	"lossbook/store"
)

const testHost = "127.0.0.1:8470"

// site is a whole server over a store of its own, without a network.
type site struct {
	t      *testing.T
	store  *store.Store
	router chi.Router
	log    *bytes.Buffer
}

func newSite(t *testing.T) *site {
	t.Helper()
	data, err := store.Open(context.Background(), filepath.Join(t.TempDir(), "data.db"))
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { data.Close() })
	s := &site{t: t, store: data, log: &bytes.Buffer{}}
	s.router, err = newRouter(Config{Store: data, Log: slog.New(slog.NewTextHandler(s.log, nil)), Host: testHost, Evidence: os.DirFS("../testdata")})
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// ask sends a request; changes add what the test is about.
func (s *site) ask(method, path, body string, changes ...func(*http.Request)) *httptest.ResponseRecorder {
	r := httptest.NewRequest(method, path, strings.NewReader(body))
	r.Host = testHost
	if body != "" {
		r.Header.Set("Content-Type", "application/json")
	}
	for _, change := range changes {
		change(r)
	}
	w := httptest.NewRecorder()
	s.router.ServeHTTP(w, r)
	return w
}

// want sends a request and checks the status of its answer.
func (s *site) want(status int, method, path, body string) *httptest.ResponseRecorder {
	s.t.Helper()
	w := s.ask(method, path, body)
	if w.Code != status {
		s.t.Fatalf("%s %s: status %d, want %d\n%s", method, path, w.Code, status, w.Body)
	}
	return w
}

func header(name, value string) func(*http.Request) {
	return func(r *http.Request) { r.Header.Set(name, value) }
}

func read[T any](t *testing.T, w *httptest.ResponseRecorder) T {
	t.Helper()
	var v T
	if err := json.Unmarshal(w.Body.Bytes(), &v); err != nil {
		t.Fatalf("%v in %s", err, w.Body)
	}
	return v
}

// sample returns a sample design that a test may change.
func sample(t *testing.T, name string) *budget.Design {
	t.Helper()
	for _, s := range assets.Samples() {
		if strings.Contains(s.Name, name) {
			d, wrong, err := decodeDesign(s.JSON)
			if err != nil || len(wrong) > 0 {
				t.Fatal(name, wrong, err)
			}
			return d
		}
	}
	t.Fatalf("there is no sample %q", name)
	return nil
}

func text(t *testing.T, value any) string {
	t.Helper()
	b, err := encodeJSON(value)
	if err != nil {
		t.Fatal(err)
	}
	return string(b)
}

// seeded is a site that holds one design with one revision.
func seeded(t *testing.T) *site {
	t.Helper()
	s := newSite(t)
	s.want(201, "POST", "/api/v1/designs", text(t, designRequest{sample(t, "frost")}))
	s.want(201, "POST", "/api/v1/designs/1/revisions", `{"note":"first"}`)
	return s
}

// route is an address of the server with its parameters filled in.
type route struct{ method, pattern, path string }

var parameter = regexp.MustCompile(`\{[^}]*\}|\*`)

// routesOf walks the router, so that no route can be left out of a test.
func routesOf(t *testing.T, router chi.Router) []route {
	t.Helper()
	var found []route
	err := chi.Walk(router, func(method, pattern string, _ http.Handler, _ ...func(http.Handler) http.Handler) error {
		found = append(found, route{method, pattern, parameter.ReplaceAllString(pattern, "1")})
		return nil
	})
	if err != nil || len(found) < 15 {
		t.Fatalf("walked %d routes: %v", len(found), err)
	}
	return found
}

func TestNewRefusesWhatItCannotServe(t *testing.T) {
	s := newSite(t)
	log := slog.New(slog.NewTextHandler(io.Discard, nil))
	for _, c := range []Config{{Store: s.store, Host: testHost}, {Log: log, Host: testHost}, {Store: s.store, Log: log, Host: "nowhere"}, {Store: s.store, Log: log, Host: "127.0.0.1:0"}} {
		if _, err := New(c); err == nil {
			t.Errorf("New(%+v) gives no error", c)
		}
	}
}

func TestUnknownAddressesAndMethods(t *testing.T) {
	s := newSite(t)
	for _, path := range []string{"/nothing", "/designs/x", "/api/v1/designs/-1", "/api/v1/designs/99999999999999999999", "/api/v1/designs/7", "/assets/none"} {
		s.want(404, "GET", path, "")
	}
	w := s.want(405, "PATCH", "/api/v1/designs/1", "")
	if got := strings.Join(w.Header().Values("Allow"), " "); got != "GET PUT DELETE" {
		t.Errorf("Allow: %q", got)
	}
	if kind := w.Header().Get("Content-Type"); kind != "application/problem+json" {
		t.Errorf("an error of the API is %s", kind)
	}
}

// recorded is a value as an answer, for read to take apart.
func recorded(t *testing.T, value any) *httptest.ResponseRecorder {
	t.Helper()
	w := httptest.NewRecorder()
	if err := writeJSON(w, http.StatusOK, value); err != nil {
		t.Fatal(err)
	}
	return w
}
