package web

import (
	"context"
	"encoding/json"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"

	"lossbook/budget"
	"lossbook/store"
)

func TestRevisionsOverTheAPI(t *testing.T) {
	s := newSite(t)
	d := sample(t, "fish")
	s.want(201, "POST", "/api/v1/designs", text(t, designRequest{d}))
	for n, note := range []string{"first", "", "third =1+1 <b>"} {
		w := s.want(201, "POST", "/api/v1/designs/1/revisions", text(t, revisionRequest{note}))
		saved := read[Revision](t, w)
		if saved.Number != n+1 || saved.Note != note || saved.Model != budget.ModelVersion {
			t.Errorf("%+v", saved)
		}
		again := s.want(200, "GET", w.Header().Get("Location"), "")
		if again.Body.String() != w.Body.String() {
			t.Errorf("revision %d is read as\n%s\nnot\n%s", n+1, again.Body, w.Body)
		}
	}
	list := read[struct{ Revisions []revisionHead }](t, s.want(200, "GET", "/api/v1/designs/1/revisions", "")).Revisions
	if len(list) != 3 || list[0].Number != 3 || list[2].Note != "first" {
		t.Errorf("%+v", list)
	}
	for _, path := range []string{"/api/v1/designs/1/revisions/0", "/api/v1/designs/1/revisions/4", "/api/v1/designs/2/revisions/1", "/api/v1/designs/2/revisions", "/api/v1/designs/1/revisions/99999999999999999999"} {
		s.want(404, "GET", path, "")
	}
	s.want(422, "POST", "/api/v1/designs/1/revisions", text(t, revisionRequest{strings.Repeat("ß", maxNote+1)}))
	s.want(201, "POST", "/api/v1/designs/1/revisions", text(t, revisionRequest{strings.Repeat("ß", maxNote)}))
}

// TestRevisionKeepsItsResults edits the design after a revision was saved.
func TestRevisionKeepsItsResults(t *testing.T) {
	s := seeded(t)
	revision := "/api/v1/designs/1/revisions/1"
	before := s.want(200, "GET", revision, "").Body.String() + s.want(200, "GET", revision+"/efficiency.csv", "").Body.String()
	now := read[designResource](t, s.want(200, "GET", "/api/v1/designs/1", ""))
	now.Design.Switch.RdsOn = budget.N(0.1)
	s.want(200, "PUT", "/api/v1/designs/1", text(t, changeRequest{now.Design, &now.Version}))
	after := s.want(200, "GET", revision, "").Body.String() + s.want(200, "GET", revision+"/efficiency.csv", "").Body.String()
	if before != after {
		t.Errorf("the revision changed from\n%s\nto\n%s", before, after)
	}
}

// TestRevisionOfAnotherModel seeds results that this model would not give: they
// are shown as they were saved, and known to differ.
func TestRevisionOfAnotherModel(t *testing.T) {
	s := seeded(t)
	points := computed(t, sample(t, "frost")).Points
	last := len(points) - 1
	points[last].Loss *= 1.01
	kept := s.another("0.9", points)

	got := read[Revision](t, s.want(200, "GET", "/api/v1/designs/1/revisions/2", ""))
	rows, err := got.rows()
	if err != nil {
		t.Fatal(err)
	}
	if diff := cmp.Diff(points, rows); diff != "" || got.Model != "0.9" {
		t.Errorf("model %s: %s", got.Model, diff)
	}
	_, table := table(t, s.want(200, "GET", "/designs/1/revisions/2/efficiency.csv", "").Body.Bytes())
	if table[last]["loss_W"] != numberCell(points[last].Loss) {
		t.Errorf("the table says %s W", table[last]["loss_W"])
	}
	for n, want := range map[int]bool{1: false, kept.Number: true} {
		saved, err := s.store.Revision(context.Background(), 1, n)
		if err != nil {
			t.Fatal(err)
		}
		r := revisionOf(saved)
		if got, err := r.outdated(context.Background()); got != want || err != nil {
			t.Errorf("revision %d: outdated is %t, %v", n, got, err)
		}
	}
}

// another saves a revision as a program with another model would have.
func (s *site) another(model string, points []Point) store.Revision {
	s.t.Helper()
	ctx := context.Background()
	d, err := s.store.Design(ctx, 1)
	if err != nil {
		s.t.Fatal(err)
	}
	body, err := json.Marshal(points)
	if err != nil {
		s.t.Fatal(err)
	}
	saved, err := s.store.SaveRevision(ctx, 1, d.Version, store.NewRevision{Note: "old", Model: model, DesignJSON: d.Complete, Draft: d.Draft, Points: body, Findings: []byte("[]")})
	if err != nil {
		s.t.Fatal(err)
	}
	return saved
}

func TestStoredPointsReadBackBitForBit(t *testing.T) {
	for name, d := range everyDesign(t) {
		points := computed(t, d).Points
		body, err := json.Marshal(points)
		if err != nil {
			t.Fatal(name, err)
		}
		var back []Point
		if err := json.Unmarshal(body, &back); err != nil {
			t.Fatal(name, err)
		}
		if diff := cmp.Diff(points, back); diff != "" {
			t.Errorf("%s: %s", name, diff)
		}
	}
}

// TestDiffersSeesEveryFigure moves each figure a little: by less than rounding
// goes nothing differs, by more everything does.
func TestDiffersSeesEveryFigure(t *testing.T) {
	original := computed(t, sample(t, "radar")).Points
	if differs(original, copied(t, original)) {
		t.Fatal("the same differs")
	}
	changes := map[string]func(p *Point, by float64){
		"vin": func(p *Point, by float64) { p.Vin *= by }, "iout": func(p *Point, by float64) { p.Iout *= by },
		"ambient": func(p *Point, by float64) { p.Ambient *= by }, "vout": func(p *Point, by float64) { p.Vout *= by },
		"duty": func(p *Point, by float64) { p.Duty *= by }, "on_time": func(p *Point, by float64) { p.OnTime *= by },
		"pin": func(p *Point, by float64) { p.Pin *= by }, "pout": func(p *Point, by float64) { p.Pout *= by },
		"loss": func(p *Point, by float64) { p.Loss *= by }, "efficiency": func(p *Point, by float64) { p.Efficiency *= by },
		"iin": func(p *Point, by float64) { p.Iin *= by }, "mean": func(p *Point, by float64) { p.InductorCurrent.Mean *= by },
		"max": func(p *Point, by float64) { p.InductorCurrent.Max *= by }, "rms": func(p *Point, by float64) { p.InductorCurrent.RMS *= by },
		"min":    func(p *Point, by float64) { p.InductorCurrent.Min = p.InductorCurrent.Min*by + (by - 1) },
		"switch": func(p *Point, by float64) { p.SwitchRMS *= by }, "rectifier": func(p *Point, by float64) { p.RectifierRMS *= by },
		"rectifier mean": func(p *Point, by float64) { p.RectifierMean *= by }, "input": func(p *Point, by float64) { p.InputCapacitorRMS *= by },
		"output": func(p *Point, by float64) { p.OutputCapacitorRMS *= by }, "Tsw": func(p *Point, by float64) { p.Temperatures.Switch *= by },
		"Tre": func(p *Point, by float64) { p.Temperatures.Rectifier *= by }, "TL": func(p *Point, by float64) { p.Temperatures.Inductor *= by },
		"item": func(p *Point, by float64) { p.Items[0].Power *= by },
	}
	for name, change := range changes {
		moved := copied(t, original)
		change(&moved[3], 1+1e-8)
		if !differs(original, moved) || !differs(moved, original) {
			t.Errorf("%s may move by 1e-8", name)
		}
		near := copied(t, original)
		change(&near[3], 1+1e-11)
		if name != "min" && differs(original, near) {
			t.Errorf("%s may not move by 1e-11", name)
		}
	}
}

func TestDiffersSeesWhatIsNoFigure(t *testing.T) {
	original := computed(t, sample(t, "radar")).Points
	for name, change := range map[string]func(p *Point){
		"state": func(p *Point) {
			*p = Point{Vin: p.Vin, Iout: p.Iout, Ambient: p.Ambient, Vout: p.Vout, State: "runaway", Part: "switch"}
		},
		"mode":     func(p *Point) { p.Mode += "?" },
		"mark":     func(p *Point) { p.Items[1].Outside = !p.Items[1].Outside },
		"kind":     func(p *Point) { p.Items[1].Kind = "other" },
		"new item": func(p *Point) { p.Items = append(p.Items, Item{}) },
	} {
		changed := copied(t, original)
		change(&changed[0])
		if !differs(original, changed) || !differs(changed, original) {
			t.Errorf("%s may change", name)
		}
	}
	if !differs(original, original[1:]) {
		t.Error("a point may be missing")
	}
}

func copied(t *testing.T, points []Point) []Point {
	t.Helper()
	return read[[]Point](t, recorded(t, points))
}
