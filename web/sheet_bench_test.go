package web

import (
	"bytes"
	"context"
	"io"
	"log/slog"
	"net/http/httptest"
	"net/url"
	"path/filepath"
	"strconv"
	"strings"
	"testing"

	"github.com/go-chi/chi/v5"

	"lossbook/assets"
	"lossbook/budget"
	"lossbook/store"
	"lossbook/web/view"
)

// BenchmarkSheet times an edit of a sheet: the posted form of all its entries, one of
// them changed, to the drawn blocks of the answer, with the draft kept in the store; and
// without the store what follows from the entries alone.
func BenchmarkSheet(b *testing.B) {
	d, _, err := decodeDesign(assets.Samples()[1].JSON)
	if err != nil {
		b.Fatal(err)
	}
	draft := draftOf(d)
	kept, _, err := draft.stored()
	if err != nil {
		b.Fatal(err)
	}
	b.Run("answer", func(b *testing.B) {
		b.ReportAllocs()
		for b.Loop() {
			s := standing(draft, store.Design{ID: 1, Version: 1, Draft: kept}, d)
			v, err := s.model(b.Context())
			if err != nil {
				b.Fatal(err)
			}
			var body bytes.Buffer
			if err := view.SheetAnswer(v).Render(b.Context(), &body); err != nil {
				b.Fatal(err)
			}
		}
	})
	b.Run("posted", func(b *testing.B) {
		b.ReportAllocs()
		router, version := shop(b, draft)
		form := url.Values{"structure": {draft.structure()}}
		for name, text := range draft {
			form.Set(name, text)
		}
		for n := 0; b.Loop(); n++ {
			form.Set("switch.rds_on", strconv.Itoa(10+n%7)+"m")
			form.Set("version", strconv.FormatInt(version, 10))
			r := httptest.NewRequest("POST", "/designs/1", strings.NewReader(form.Encode()))
			r.Host = testHost
			r.Header.Set("Content-Type", "application/x-www-form-urlencoded")
			r.Header.Set("HX-Request", "true")
			w := httptest.NewRecorder()
			router.ServeHTTP(w, r)
			if w.Code != 200 || w.Body.Len() < 10_000 {
				b.Fatalf("status %d, %d bytes", w.Code, w.Body.Len())
			}
			version++
		}
	})
}

// standing is the sheet of a draft as it stands in the store, without revisions.
func standing(draft Draft, kept store.Design, complete *budget.Design) *sheet {
	s := &sheet{kept: kept, draft: draft, complete: complete}
	s.design, s.wrong = draft.design()
	_, s.beside = draft.profile(s.design)
	return s
}

// shop is a server with one design, and the version its next edit starts from.
func shop(b *testing.B, draft Draft) (chi.Router, int64) {
	b.Helper()
	data, err := store.Open(context.Background(), filepath.Join(b.TempDir(), "data.db"))
	if err != nil {
		b.Fatal(err)
	}
	b.Cleanup(func() { data.Close() })
	router, err := newRouter(Config{Store: data, Log: slog.New(slog.NewTextHandler(io.Discard, nil)), Host: testHost})
	if err != nil {
		b.Fatal(err)
	}
	kept, complete, err := draft.stored()
	if err != nil {
		b.Fatal(err)
	}
	made, err := data.Create(context.Background(), store.NewDesign{Name: "bench", Draft: kept, Complete: complete})
	if err != nil {
		b.Fatal(err)
	}
	return router, made.Version
}
