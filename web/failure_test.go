package web

import (
	"context"
	"errors"
	"fmt"
	"io"
	"log/slog"
	"net/http"
	"strings"
	"testing"

	"lossbook/store"
)

func TestPanicIsAnsweredAndLogged(t *testing.T) {
	s := newSite(t)
	boom := func(http.ResponseWriter, *http.Request) { panic("SELECT secret FROM /home/someone") }
	s.router.Get("/api/v1/boom", boom)
	s.router.Get("/boom", boom)
	api := s.want(500, "GET", "/api/v1/boom", "")
	id := read[problem](t, api).ID
	if len(id) < 8 || !strings.Contains(s.log.String(), "id="+id) || !strings.Contains(s.log.String(), "SELECT secret") {
		t.Errorf("id %q does not lead to the cause in the log:\n%s", id, s.log)
	}
	page := s.want(500, "GET", "/boom", "")
	for _, body := range []string{api.Body.String(), page.Body.String()} {
		for _, word := range []string{"SELECT", "/home", "goroutine", ".go:"} {
			if strings.Contains(body, word) {
				t.Errorf("the answer says %q:\n%s", word, body)
			}
		}
	}
	s.want(200, "GET", "/api/v1/designs", "")
}

// failures is every kind of error with the status it is answered by.
var failures = []struct {
	err    error
	status int
}{
	{store.ErrNotFound, 404},
	{fmt.Errorf("saving: %w", store.ErrNotFound), 404},
	{&store.StaleError{Current: store.Design{ID: 1, Version: 3, Draft: []byte("{}")}}, 409},
	{store.ErrFull, 507},
	{store.ErrCorrupt, 500},
	{&http.MaxBytesError{Limit: maxBody}, 413},
	{context.Canceled, 503},
	{errors.New("sql: no such table designs in /home/someone/data.db"), 500},
	{invalid(nil), 422},
	{errNoPage, 404},
}

func TestEveryErrorHasItsStatusAndSafeWords(t *testing.T) {
	s := newSite(t)
	for i, f := range failures {
		path := fmt.Sprintf("/api/v1/fails/%d", i)
		server := &Server{log: discard(), errorPage: plainErrorPage}
		s.router.Get(path, server.handle(func(http.ResponseWriter, *http.Request) error { return f.err }))
		w := s.want(f.status, "GET", path, "")
		p := read[problem](t, w)
		if p.Status != f.status || p.Title == "" || len(p.Detail) < 20 {
			t.Errorf("%v: %+v", f.err, p)
		}
		if strings.Contains(w.Body.String(), "sql") || strings.Contains(w.Body.String(), "/home") {
			t.Errorf("%v shows its cause: %s", f.err, w.Body)
		}
	}
}

func discard() *slog.Logger { return slog.New(slog.NewTextHandler(io.Discard, nil)) }
