package web

import (
	"bytes"
	"encoding/json"
	"io"
	"log/slog"
	"maps"
	"net/http/httptest"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"

	"lossbook/assets"
	"lossbook/budget"
	"lossbook/store"
	"lossbook/web/view"
)

// FuzzBudgetCall sends any body to the API: the answer is JSON and says what was wrong,
// and what was read as a design is written and read again as the same.
func FuzzBudgetCall(f *testing.F) {
	for _, s := range assets.Samples() {
		f.Add([]byte(`{"design":` + string(s.JSON) + `,"points":[{"vin":12,"iout":1}]}`))
	}
	files, err := filepath.Glob("../testdata/malformed/*.json")
	if err != nil || len(files) < 30 {
		f.Fatalf("%d files: %v", len(files), err)
	}
	for _, file := range files {
		body, err := os.ReadFile(file)
		if err != nil {
			f.Fatal(err)
		}
		f.Add(body)
	}
	f.Fuzz(func(t *testing.T, body []byte) {
		if len(body) > 20_000 || bytes.Count(body, []byte("vin")) > 100 {
			return // some thousand points take their time, and show nothing more
		}
		r := httptest.NewRequest("POST", "/api/v1/budget", bytes.NewReader(body))
		r.Header.Set("Content-Type", "application/json")
		w := httptest.NewRecorder()
		var log bytes.Buffer
		s := &Server{log: slog.New(slog.NewTextHandler(&log, nil)), errorPage: plainErrorPage}
		s.handle(postBudget)(w, r)
		if w.Code != 200 && w.Code != 400 && w.Code != 422 || !json.Valid(w.Body.Bytes()) {
			t.Errorf("status %d: %.300s\n%s", w.Code, w.Body, log.String())
		}
		var ask budgetRequest
		if wrong, err := decode(body, &ask); err == nil && len(wrong) == 0 && ask.Design != nil {
			sameAgain(t, ask.Design)
		}
	})
}

// sameAgain writes a design as a file and, if it is complete, as entries, and wants it
// back.
func sameAgain(t *testing.T, d *budget.Design) {
	t.Helper()
	raw, err := json.Marshal(d)
	if err != nil {
		t.Fatal(err)
	}
	again, wrong, err := decodeDesign(raw)
	if err != nil || len(wrong) > 0 {
		t.Fatalf("%s\nis read as %v, %v", raw, wrong, err)
	}
	if diff := cmp.Diff(d, again); diff != "" {
		t.Errorf("a file: %s", diff)
	}
	if len(budget.Validate(d)) > 0 {
		return
	}
	typed, wrong := draftOf(d).design()
	if len(wrong) > 0 {
		t.Errorf("as entries: %v", wrong)
	}
	rawTyped, err := json.Marshal(typed)
	if err != nil || !bytes.Equal(raw, rawTyped) {
		t.Errorf("as entries: %s (%v), want %s", rawTyped, err, raw)
	}
}

// FuzzSheet posts any form to a sheet: it is kept as typed or refused, and drawn.
func FuzzSheet(f *testing.F) {
	d, _, err := decodeDesign(assets.Samples()[1].JSON)
	if err != nil {
		f.Fatal(err)
	}
	start := draftOf(d)
	for _, form := range []string{
		"version=1&switch.rds_on=4m7", "version=1&switch.rds_on_curve[0][0]=25&switch.rds_on_curve[0][1]=1&switch.rds_on_curve[7][0]=150",
		"version=1&do=add:series_resistances", "version=1&do=remove:series_resistances[0]", "version=1&do=add:switch.rds_on_curve", "version=1&series_resistances[199].name=x",
		"version=1&profile[0].load=50%25&profile[0].hours=24", "version=1&topology=buck&rectifier=synchronous", "version=1&inductor.l_curve[0][0]=0&inductor.l_curve[0][1]=10u",
		"version=1&name=%00%ff&sources.switch.rds_on=<script>", "version=1&input.nominal=1e400&output.current=NaN", "version=1&working=switch.conduction&view.load=50&view.vin=x",
	} {
		f.Add(form)
	}
	f.Fuzz(func(t *testing.T, form string) {
		if len(form) > 20_000 {
			return
		}
		r := httptest.NewRequest("POST", "/designs/1", strings.NewReader(form))
		r.Header.Set("Content-Type", "application/x-www-form-urlencoded")
		e, err := readEdit(r)
		if err != nil {
			return
		}
		draft, err := e.apply(start)
		if err != nil {
			return
		}
		kept, _, err := draft.stored()
		if err != nil {
			t.Fatal(err)
		}
		if again, err := readDraft(kept); err != nil || !maps.Equal(draft, again) {
			t.Errorf("kept as something else: %v\n%s", err, cmp.Diff(draft, again))
		}
		s := standing(draft, store.Design{ID: 1, Version: 1, Draft: kept}, d)
		s.sight = e.sight
		v, err := s.model(t.Context())
		if err != nil {
			t.Fatal(err)
		}
		if err := view.SheetAnswer(v).Render(t.Context(), io.Discard); err != nil {
			t.Fatal(err)
		}
		if len(s.wrong) == 0 {
			sameAgain(t, s.design)
		}
	})
}
