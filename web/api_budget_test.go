package web

import (
	"slices"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"

	"lossbook/budget"
)

func TestWrongPointsAreRefused(t *testing.T) {
	s := newSite(t)
	body := `{"design":` + text(t, sample(t, "frost")) + `,"points":[{"vin":12,"iout":1},{"vin":0,"iout":1},{"vin":12,"iout":-1},{"vin":12,"iout":1,"ambient":-300}]}`
	p := read[problem](t, s.want(422, "POST", "/api/v1/budget", body))
	var fields []string
	for _, e := range p.Errors {
		fields = append(fields, e.Field)
	}
	if diff := cmp.Diff([]string{"points[1].vin", "points[2].iout", "points[3].ambient"}, fields); diff != "" {
		t.Error(diff)
	}
	body = `{"design":` + text(t, sample(t, "frost")) + `,"points":[{"iout":1},{"vin":12}]}`
	p = read[problem](t, s.want(422, "POST", "/api/v1/budget", body))
	if len(p.Errors) != 2 || p.Errors[0].Field != "points[0].vin" || p.Errors[1].Field != "points[1].iout" {
		t.Errorf("%+v", p.Errors)
	}
}

// TestBudgetIsTheModel compares the API's numbers with the model's, and its
// default points with the grid.
func TestBudgetIsTheModel(t *testing.T) {
	s := newSite(t)
	d := sample(t, "fish")
	model, err := budget.Prepare(d)
	if err != nil {
		t.Fatal(err)
	}
	got := read[Answer](t, s.want(200, "POST", "/api/v1/budget", text(t, designRequest{d})))
	grid := budget.Grid(d)
	if len(got.Points) != 24 || len(grid) != 24 {
		t.Fatalf("%d points", len(got.Points))
	}
	var b budget.Budget
	for i, p := range grid {
		model.At(p, &b)
		if diff := cmp.Diff(pointOf(&b, model.Findings(&b)), got.Points[i]); diff != "" {
			t.Errorf("point %d: %s", i, diff)
		}
	}
	asked := `{"design":` + text(t, d) + `,"points":[{"vin":28,"iout":0.5,"ambient":-10},{"vin":20,"iout":0.25}]}`
	got = read[Answer](t, s.want(200, "POST", "/api/v1/budget", asked))
	order := []At{}
	for _, p := range got.Points {
		order = append(order, At{p.Vin, p.Iout, p.Ambient})
	}
	if diff := cmp.Diff([]At{{28, 0.5, -10}, {20, 0.25, 40}}, order); diff != "" {
		t.Error(diff)
	}
}

// TestEveryPointHasEveryItem holds the order of the ledger to the contract's.
func TestEveryPointHasEveryItem(t *testing.T) {
	settled := 0
	for name, d := range everyDesign(t) {
		var want, got []string
		for _, it := range itemsOf(d, nil) {
			want = append(want, it.Part+"."+it.Kind)
		}
		for _, p := range computed(t, d).Points {
			if !p.Settled() {
				if p.Reason == "" || p.State == "runaway" && p.Part == "" {
					t.Errorf("%s: %+v", name, p)
				}
				continue
			}
			settled++
			got = nil
			for _, it := range p.Items {
				got = append(got, it.Part+"."+it.Kind)
			}
			if diff := cmp.Diff(want, got); diff != "" {
				t.Errorf("%s: %s", name, diff)
			}
		}
	}
	if settled < 300 {
		t.Errorf("only %d points were checked", settled)
	}
}

// TestMembersOfAPoint holds names and order to the contract.
func TestMembersOfAPoint(t *testing.T) {
	points := computed(t, sample(t, "fish")).Points
	i := slices.IndexFunc(points, func(p Point) bool { return len(p.Findings) > 0 && p.Settled() })
	if i < 0 {
		t.Fatal("no point has a finding")
	}
	got, at := text(t, points[i]), 0
	for _, name := range strings.Fields(`vin iout ambient vout state mode duty on_time pin pout loss efficiency iin
		inductor_current mean min max rms switch_rms rectifier_rms rectifier_mean input_capacitor_rms output_capacitor_rms
		temperatures switch rectifier inductor items part kind power findings level part rule message value limit source`) {
		next := strings.Index(got[at:], `"`+name+`":`)
		if next < 0 {
			t.Fatalf("%s does not follow in %s", name, got[at:])
		}
		at += next + 1
	}
}

// TestUnsettledPointHasNoFigures reads the JSON as a script would.
func TestUnsettledPointHasNoFigures(t *testing.T) {
	s := newSite(t)
	body := `{"design":` + text(t, sample(t, "frost")) + `,"points":[{"vin":30,"iout":1},{"vin":12,"iout":1}]}`
	got := read[struct{ Points []map[string]any }](t, s.want(200, "POST", "/api/v1/budget", body)).Points
	if got[0]["state"] != "out_of_reach" || got[0]["reason"] == "" || len(got[0]) != 7 {
		t.Errorf("%v", got[0])
	}
	for _, name := range []string{"vin", "iout", "ambient", "vout", "state", "reason", "findings"} {
		if _, ok := got[0][name]; !ok {
			t.Errorf("%s is absent", name)
		}
	}
	if got[1]["state"] != "settled" || len(got[1]) != 23 {
		t.Errorf("%d members: %v", len(got[1]), got[1])
	}
}
