package web

import (
	"context"
	"encoding/json"
	"slices"
	"strings"
	"testing"
	"time"

	"github.com/google/go-cmp/cmp"

	"lossbook/budget"
	"lossbook/store"
)

func TestDesignsOverTheAPI(t *testing.T) {
	s := newSite(t)
	d := sample(t, "radar")
	w := s.want(201, "POST", "/api/v1/designs", text(t, designRequest{d}))
	if got := w.Header().Get("Location"); got != "/api/v1/designs/1" {
		t.Errorf("Location: %q", got)
	}
	made := read[designResource](t, w)
	got := read[designResource](t, s.want(200, "GET", "/api/v1/designs/1", ""))
	if diff := cmp.Diff(made, got); diff != "" {
		t.Error(diff)
	}
	if diff := cmp.Diff(d, got.Design); diff != "" || got.Missing != nil || got.Version != 1 || time.Since(got.UpdatedAt) > time.Minute {
		t.Errorf("%+v %s", got, diff)
	}

	d.Name = "renamed"
	changed := read[designResource](t, s.want(200, "PUT", "/api/v1/designs/1", text(t, changeRequest{d, &got.Version})))
	if changed.Version != 2 || changed.Design.Name != "renamed" {
		t.Errorf("%+v", changed)
	}
	list := read[struct{ Designs []designHead }](t, s.want(200, "GET", "/api/v1/designs", "")).Designs
	if len(list) != 1 || list[0].Name != "renamed" || list[0].ID != 1 || list[0].Revisions != 0 {
		t.Errorf("%+v", list)
	}
	s.want(204, "DELETE", "/api/v1/designs/1", "")
	s.want(404, "GET", "/api/v1/designs/1", "")
	s.want(404, "DELETE", "/api/v1/designs/1", "")
	s.want(404, "PUT", "/api/v1/designs/1", text(t, changeRequest{d, &changed.Version}))
}

// TestStaleSaveNamesBothVersions keeps two editors from overwriting each other.
func TestStaleSaveNamesBothVersions(t *testing.T) {
	s := seeded(t)
	read1 := read[designResource](t, s.want(200, "GET", "/api/v1/designs/1", ""))
	first, second := *read1.Design, *read1.Design
	first.Name, second.Name = "first", "second"
	s.want(200, "PUT", "/api/v1/designs/1", text(t, changeRequest{&first, &read1.Version}))
	p := read[problem](t, s.want(409, "PUT", "/api/v1/designs/1", text(t, changeRequest{&second, &read1.Version})))
	if p.Version != read1.Version || p.Current == nil || p.Current.Version != read1.Version+1 || p.Current.Design.Name != "first" {
		t.Errorf("%+v", p)
	}
	now := read[designResource](t, s.want(200, "GET", "/api/v1/designs/1", ""))
	if now.Design.Name != "first" {
		t.Errorf("the design is now %q", now.Design.Name)
	}
}

// TestWrongDesignsAreRefused names every wrong field at its path in the body.
func TestWrongDesignsAreRefused(t *testing.T) {
	s := seeded(t)
	d := sample(t, "frost")
	d.Frequency = budget.N(-1)
	d.Switch.RdsOn = budget.Num{}
	d.Series[1].Name = d.Series[0].Name
	version := int64(1)
	for _, to := range []struct{ method, path, body string }{
		{"POST", "/api/v1/designs", text(t, designRequest{d})},
		{"POST", "/api/v1/budget", text(t, designRequest{d})},
		{"PUT", "/api/v1/designs/1", text(t, changeRequest{d, &version})},
	} {
		p := read[problem](t, s.want(422, to.method, to.path, to.body))
		var fields []string
		for _, e := range p.Errors {
			fields = append(fields, e.Field)
			if len(e.Message) < 5 {
				t.Errorf("%s has the words %q", e.Field, e.Message)
			}
		}
		for _, field := range []string{"design.frequency", "design.switch.rds_on"} {
			if !slices.Contains(fields, field) {
				t.Errorf("%s: no error at %s: %v", to.path, field, fields)
			}
		}
		if !slices.ContainsFunc(fields, func(f string) bool { return strings.HasPrefix(f, "design.series_resistances[1]") }) {
			t.Errorf("%s: the name used twice is not named: %v", to.path, fields)
		}
	}
}

// TestOneWordForOneField sends a text for a required number: that it is missing
// too is not said.
func TestOneWordForOneField(t *testing.T) {
	s := newSite(t)
	body := strings.Replace(text(t, designRequest{sample(t, "frost")}), `"frequency":250000`, `"frequency":"250k"`, 1)
	p := read[problem](t, s.want(422, "POST", "/api/v1/budget", body))
	if len(p.Errors) != 1 || p.Errors[0].Field != "design.frequency" || p.Errors[0].Message != "must be a number, not a text" {
		t.Errorf("%+v", p.Errors)
	}
}

// TestIncompleteDraftOverTheAPI edits a sheet until it is no design: the API
// gives the last complete state, says what is missing, and saves no revision.
func TestIncompleteDraftOverTheAPI(t *testing.T) {
	s := seeded(t)
	before := read[designResource](t, s.want(200, "GET", "/api/v1/designs/1", ""))
	kept, err := s.store.Design(context.Background(), 1)
	if err != nil {
		t.Fatal(err)
	}
	draft, err := readDraft(kept.Draft)
	if err != nil {
		t.Fatal(err)
	}
	draft["switch.rds_on"] = ""
	draft["inductor.dcr"] = "2p5"
	s.keepDraft(kept, draft)

	got := read[designResource](t, s.want(200, "GET", "/api/v1/designs/1", ""))
	if diff := cmp.Diff(before.Design, got.Design); diff != "" || got.Version != before.Version+1 {
		t.Errorf("version %d: %s", got.Version, diff)
	}
	if len(got.Missing) != 2 || got.Missing[0].Field != "inductor.dcr" || got.Missing[1].Field != "switch.rds_on" {
		t.Errorf("missing: %+v", got.Missing)
	}
	p := read[problem](t, s.want(422, "POST", "/api/v1/designs/1/revisions", `{"note":"too early"}`))
	if len(p.Errors) != 2 || p.Errors[0].Field != "design.inductor.dcr" {
		t.Errorf("%+v", p.Errors)
	}
	s.want(422, "GET", "/designs/1/efficiency.csv", "")
	s.want(422, "GET", "/designs/1/design.json", "")
	s.want(200, "GET", "/designs/1/revisions/1/efficiency.csv", "")
}

func (s *site) keepDraft(d store.Design, draft Draft) {
	s.t.Helper()
	kept, complete, err := draft.stored()
	if err != nil {
		s.t.Fatal(err)
	}
	if _, err := s.store.Update(context.Background(), d.ID, d.Version, store.Change{Name: d.Name, Draft: kept, Complete: complete}); err != nil {
		s.t.Fatal(err)
	}
}

func TestDraftThatWasNeverComplete(t *testing.T) {
	s := newSite(t)
	draft, _, _ := Draft{"name": "new"}.stored()
	if _, err := s.store.Create(context.Background(), store.NewDesign{Name: "new", Draft: draft}); err != nil {
		t.Fatal(err)
	}
	got := read[map[string]any](t, s.want(200, "GET", "/api/v1/designs/1", ""))
	if design, there := got["design"]; !there || design != nil {
		t.Errorf("design is %v", design)
	}
	if missing, ok := got["missing"].([]any); !ok || len(missing) < 8 {
		t.Errorf("missing is %v", got["missing"])
	}
}

// TestHostileNamesOverTheAPI keeps texts as texts: what went in comes out, as
// JSON, and no error shows it as anything else.
func TestHostileNamesOverTheAPI(t *testing.T) {
	s := newSite(t)
	kept := 0
	for _, name := range hostile {
		d := sample(t, "frost")
		d.Name, d.Note, d.Switch.Part = name, name, name
		d.Sources = map[string]string{"switch.rds_on": name}
		w := s.ask("POST", "/api/v1/designs", text(t, designRequest{d}))
		if w.Code != 201 && w.Code != 422 {
			t.Errorf("%q: status %d", name, w.Code)
		}
		if kind := w.Header().Get("Content-Type"); kind != "application/json" && kind != "application/problem+json" {
			t.Errorf("%q is answered as %s", name, kind)
		}
		if w.Code != 201 {
			continue
		}
		kept++
		at := w.Header().Get("Location")
		got := read[designResource](t, s.want(200, "GET", at, "")).Design
		if got.Name != name || got.Note != name || got.Switch.Part != name || got.Sources["switch.rds_on"] != name {
			t.Errorf("%q comes back as %q", name, got.Name)
		}
	}
	if kept < 10 {
		t.Errorf("only %d names were kept", kept)
	}
	for _, path := range []string{"/<script>alert(1)</script>", "/designs/1/%3Cscript%3E", "/api/v1/%22%3E%3Cimg%20src=x%3E"} {
		if w := s.want(404, "GET", path, ""); strings.Contains(w.Body.String(), "script>alert") || strings.Contains(w.Body.String(), "<img") {
			t.Errorf("%s is shown in its error: %s", path, w.Body)
		}
	}
}

func TestSamples(t *testing.T) {
	samples, err := Samples()
	if err != nil || len(samples) != 3 {
		t.Fatalf("%d samples: %v", len(samples), err)
	}
	for _, s := range samples {
		draft, err := readDraft(s.Draft)
		if err != nil {
			t.Fatal(err)
		}
		if _, wrong := draft.design(); len(wrong) > 0 || !s.Sample || !json.Valid(s.Complete) {
			t.Errorf("%s: %v", s.Name, wrong)
		}
	}
}
