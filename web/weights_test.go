package web

import (
	"math"
	"net/http"
	"strings"
	"testing"

	"lossbook/budget"
)

// settled is a point with nothing but what a mean or a day looks at.
func settled(iout, pin, pout float64) Point {
	return Point{Vin: 12, Iout: iout, State: "settled", Figures: &Figures{Pin: pin, Pout: pout, Loss: pin - pout, Efficiency: pout / pin}}
}

func TestWeightsAddUpToOne(t *testing.T) {
	loads := budget.LoadGrid()
	for _, w := range weightings {
		sum := 0.0
		for _, l := range w.Weights {
			sum += l.Weight
			if i := indexOf(loads, l.Load); i < 0 {
				t.Errorf("%s needs %v of full load, which no budget is drawn up at", w.Name, l.Load)
			}
		}
		if math.Abs(sum-1) > 1e-15 || len(w.Weights) < 4 {
			t.Errorf("%s: %d weights add up to %v", w.Name, len(w.Weights), sum)
		}
		if !strings.Contains(w.Source, "(from memory)") && !strings.Contains(w.Source, "(read") {
			t.Errorf("%s does not say whether its source was read: %s", w.Name, w.Source)
		}
	}
	if len(weightings) != 3 {
		t.Errorf("%d means were looked at", len(weightings))
	}
}

func indexOf(list []float64, v float64) int {
	for i := range list {
		if list[i] == v {
			return i
		}
	}
	return -1
}

// TestWeightsByHand has efficiencies that make each mean a sum done by hand.
func TestWeightsByHand(t *testing.T) {
	efficiency := map[float64]float64{0.05: 0.50, 0.10: 0.60, 0.20: 0.70, 0.25: 0.72, 0.30: 0.80, 0.50: 0.90, 0.75: 0.92, 1: 0.88}
	var points []Point
	for _, load := range budget.LoadGrid() {
		points = append(points, settled(load*4, 1, efficiency[load]))
	}
	want := map[string]float64{
		"mean_active": (0.72 + 0.90 + 0.92 + 0.88) / 4,
		"european":    0.03*0.50 + 0.06*0.60 + 0.13*0.70 + 0.10*0.80 + 0.48*0.90 + 0.20*0.88,
		"cec":         0.04*0.60 + 0.05*0.70 + 0.12*0.80 + 0.21*0.90 + 0.53*0.92 + 0.05*0.88,
	}
	for _, w := range weightedOf(points, 4) {
		if w.Efficiency == nil || math.Abs(*w.Efficiency-want[w.Key]) > 1e-14 {
			t.Errorf("%s: %v, want %v", w.Key, w.Efficiency, want[w.Key])
		}
	}
	points[0] = Point{Vin: 12, Iout: 0.2, State: "out_of_reach", Reason: "the input is too high"}
	for _, w := range weightedOf(points, 4) {
		if european := w.Key == "european"; european != (w.Efficiency == nil) || european != strings.Contains(w.Reason, "5 % of full load there is no figure: the input is too high") {
			t.Errorf("%s without its point at 5 %%: %v %q", w.Key, w.Efficiency, w.Reason)
		}
	}
	for _, w := range weightedOf(points[:7], 4) {
		if w.Efficiency != nil || !strings.Contains(w.Reason, "% of full load") {
			t.Errorf("%s without full load: %v %q", w.Key, w.Efficiency, w.Reason)
		}
	}
}

// TestEnergyIsNoMeanOfPercentages has two uses whose mean percentage is far from
// their energy's.
func TestEnergyIsNoMeanOfPercentages(t *testing.T) {
	profile := []duty{{hours: 22, row: 0}, {hours: 2, row: 3}}
	e := energyOf(profile, []Point{settled(0.01, 0.2, 0.1), settled(2, 20, 18)})
	if e.Reason != "" || *e.In != 22*0.2+2*20 || *e.Out != 22*0.1+2*18 || math.Abs(*e.Lost-(22*0.1+2*2)) > 1e-12 || e.Hours != 24 {
		t.Errorf("%+v", e)
	}
	if got, want := *e.Efficiency, 38.2/44.4; math.Abs(got-want) > 1e-15 {
		t.Errorf("efficiency %v, want %v (a mean of percentages is 0.7, by hours 0.533)", got, want)
	}
	e = energyOf(profile, []Point{settled(0.01, 0.2, 0.1), {Vin: 12, Iout: 2, State: "runaway", Reason: "the diode runs away"}})
	if e.In != nil || e.Out != nil || e.Lost != nil || e.Efficiency != nil || e.Reason != "row 4 has no figure: the diode runs away" {
		t.Errorf("a day without one of its uses: %+v", e)
	}
	if e = energyOf(profile[:1], []Point{settled(0, 0, 0)}); e.Efficiency != nil || *e.In != 0 {
		t.Errorf("a day at rest: %+v", e)
	}
}

func TestProfileIsRead(t *testing.T) {
	d := sample(t, "frost")
	full := d.Output.Current.V
	draft := Draft{"profile[0].load": "50 %", "profile[0].hours": "6 h", "profile[0].vin": "", "profile[2].load": "250m", "profile[2].vin": "14.4 V",
		"profile[2].ambient": "-20", "profile[2].hours": "18"}
	list, wrong := draft.profile(d)
	if len(wrong) > 0 || len(list) != 2 {
		t.Fatal(list, wrong)
	}
	want := []duty{{budget.Point{Vin: d.Input.Nominal.V, Iout: full / 2, Ambient: d.AmbientTemperature()}, 6, 0}, {budget.Point{Vin: 14.4, Iout: 0.25, Ambient: -20}, 18, 2}}
	for i := range want {
		if list[i] != want[i] {
			t.Errorf("row %d is read as %+v, want %+v", i, list[i], want[i])
		}
	}
	if list, wrong := (Draft{"profile[0].load": " ", "profile[1].hours": ""}).profile(d); len(list)+len(wrong) > 0 {
		t.Errorf("empty rows are read: %v %v", list, wrong)
	}
}

func TestProfileIsRefused(t *testing.T) {
	d := sample(t, "frost")
	for _, c := range []struct{ key, typed, words string }{
		{"load", "much", "number"}, {"load", "-1", "0 A or more"}, {"load", "-5 %", "0 A or more"}, {"vin", "0", "above 0 V"}, {"vin", "12 A", "A"},
		{"ambient", "-300", "-273.15"}, {"hours", "0", "above 0"}, {"hours", "25", "at most 24"}, {"hours", "1,234", "1.234"}, {"hours", "", "empty"}, {"load", "", "empty"},
	} {
		draft := Draft{"profile[1].load": "1", "profile[1].vin": "12", "profile[1].ambient": "20", "profile[1].hours": "4"}
		draft["profile[1]."+c.key] = c.typed
		_, wrong := draft.profile(d)
		if len(wrong) != 1 || wrong[0].Path != "profile[1]."+c.key || !strings.Contains(wrong[0].Message, c.words) || wrong[0].Missing != (c.typed == "") {
			t.Errorf("%s %q: %+v", c.key, c.typed, wrong)
		}
	}
	long := Draft{}
	for _, row := range []string{"0", "1", "2"} {
		long["profile["+row+"].load"], long["profile["+row+"].hours"] = "1", "8"
	}
	if _, wrong := long.profile(d); len(wrong) > 0 {
		t.Errorf("24 hours are refused: %v", wrong)
	}
	long["profile[2].hours"] = "8.001"
	if _, wrong := long.profile(d); len(wrong) != 1 || wrong[0].Path != "profile[2].hours" || !strings.Contains(wrong[0].Message, "24.001") {
		t.Errorf("more hours than a day has: %v", wrong)
	}
	many := Draft{}
	for i := range budget.MaxRows + 1 {
		many[rowPath(profilePath, i)+".load"], many[rowPath(profilePath, i)+".hours"] = "1", "0.1"
	}
	if list, wrong := many.profile(d); len(list) != budget.MaxRows || len(wrong) != 1 {
		t.Errorf("%d rows, %v", len(list), wrong)
	}
}

// TestEnergyIsOfExactlyThoseLoads compares a day with points computed one by one.
func TestEnergyIsOfExactlyThoseLoads(t *testing.T) {
	d := sample(t, "frost")
	draft := Draft{"profile[0].load": "0.137", "profile[0].vin": "11.3", "profile[0].ambient": "-7", "profile[0].hours": "5", "profile[1].load": "100 %", "profile[1].hours": "19"}
	e, err := draft.energy(t.Context(), d)
	if err != nil || e.Reason != "" {
		t.Fatal(e, err)
	}
	found, _, err := compute(t.Context(), d, []budget.Point{{Vin: 11.3, Iout: 0.137, Ambient: -7}, {Vin: d.Input.Nominal.V, Iout: d.Output.Current.V, Ambient: d.AmbientTemperature()}})
	if err != nil {
		t.Fatal(err)
	}
	first, second := found.Points[0], found.Points[1]
	if got, want := *e.In, first.Pin*5+second.Pin*19; got != want {
		t.Errorf("in %v, want %v", got, want)
	}
	if got := *e.Out + *e.Lost; math.Abs(got-*e.In) > 1e-12**e.In {
		t.Errorf("out and lost are %v of %v in", got, *e.In)
	}
	if none, err := (Draft{}).energy(t.Context(), d); none != nil || err != nil {
		t.Errorf("a day without a profile: %v %v", none, err)
	}
}

// TestProfileOnTheSheet types a profile row by row: it changes the answers, is kept
// with a revision, and a wrong entry leaves the budget as it is.
func TestProfileOnTheSheet(t *testing.T) {
	s := seeded(t)
	if got := s.open(200, "/designs/1").words(); !strings.Contains(got, "European weights") || !strings.Contains(got, "0.48 at 50") || strings.Contains(got, "A day of the load profile") {
		t.Error("the weighted figures are not on the sheet, or a day without a profile is")
	}
	form := s.open(200, "/designs/1").form("entries", map[string]string{"do": "add:profile"})
	if where := s.moved(s.send("/designs/1", form)); where != "/designs/1#add-profile" {
		t.Errorf("sent on to %s", where)
	}
	form = s.open(200, "/designs/1").form("entries", map[string]string{"profile[0].load": "50 %", "profile[0].hours": "30"})
	p := s.page(422, s.send("/designs/1", form), "30 hours")
	if attr(p.one("f-profile[0].hours"), "aria-invalid") != "true" || !strings.Contains(words(p.all(withClass("errors"))[0]), "Load profile, row 1, hours a day") {
		t.Error("the entry is not marked, or the summary does not name it")
	}
	if got := p.words(); !strings.Contains(got, "95.41 %") || strings.Contains(got, "Last good answer") || !strings.Contains(got, "No figures: Load profile, row 1") {
		t.Error("a wrong profile touches the budget, or does not say why its day has no figures")
	}
	form = p.form("entries", map[string]string{"profile[0].hours": "6"})
	p = s.page(200, s.send("/designs/1", form, liveEdit), "6 hours")
	if got := p.words(); !strings.Contains(got, "not a mean of percentages") || !strings.Contains(got, "cover 6 of 24 hours") || !strings.Contains(got, "Load profile not given 1 row, 5.893 W·h lost a day") {
		t.Errorf("the day is not told: %s", got)
	}
	form = s.open(200, "/designs/1").form("entries", map[string]string{"note.revision": "first"})
	s.moved(s.send("/designs/1/revisions", form))
	if got := s.open(200, "/designs/1/revisions/2").words(); !strings.Contains(got, "A day of the load profile") || !strings.Contains(got, "lost a day") {
		t.Error("the revision has lost its profile")
	}
	if got := s.open(200, "/designs/1/revisions/1").words(); strings.Contains(got, "A day of the load profile") || !strings.Contains(got, "CEC weights") {
		t.Error("revision 1 has a profile, or no weighted figures")
	}
	now := read[designResource](t, s.want(200, "GET", "/api/v1/designs/1", ""))
	s.want(200, "PUT", "/api/v1/designs/1", text(t, changeRequest{now.Design, &now.Version}))
	if got := s.open(200, "/designs/1").words(); !strings.Contains(got, "A day of the load profile") {
		t.Error("a script that changes the design drops the profile")
	}
	form = s.open(200, "/designs/1").form("entries", map[string]string{"do": "remove:profile[0]"})
	s.moved(s.send("/designs/1", form))
	if got := s.open(200, "/designs/1").words(); strings.Contains(got, "A day of the load profile") {
		t.Error("the row can't be removed")
	}
}

func TestWeightsOverTheAPI(t *testing.T) {
	s, doc := seeded(t), description(t)
	path := "/api/v1/designs/1/revisions/1/weights"
	w := s.want(http.StatusOK, "GET", path, "")
	if errs := conforms(doc, "Weights", w.Body.String()); len(errs) > 0 {
		t.Error(errs)
	}
	got := read[weightsAnswer](t, w)
	if len(got.Voltages) != 3 || got.Profile != nil || got.Model != budget.ModelVersion {
		t.Fatalf("%+v", got)
	}
	revision := read[Revision](t, s.want(200, "GET", "/api/v1/designs/1/revisions/1", ""))
	points, err := revision.rows()
	if err != nil {
		t.Fatal(err)
	}
	mean := (points[11].Efficiency + points[13].Efficiency + points[14].Efficiency + points[15].Efficiency) / 4
	if e := got.Voltages[1].Means[0].Efficiency; e == nil || math.Abs(*e-mean) > 1e-15 || got.Voltages[1].Vin != points[11].Vin {
		t.Errorf("mean %v of the kept points is %v at %v V", mean, e, got.Voltages[1].Vin)
	}
	d, err := s.store.Design(t.Context(), 1)
	if err != nil {
		t.Fatal(err)
	}
	draft, err := readDraft(d.Draft)
	if err != nil {
		t.Fatal(err)
	}
	draft["profile[0].load"], draft["profile[0].hours"] = "1", "4"
	s.keepDraft(d, draft)
	s.want(201, "POST", "/api/v1/designs/1/revisions", "{}")
	w = s.want(200, "GET", "/api/v1/designs/1/revisions/2/weights", "")
	if errs := conforms(doc, "Weights", w.Body.String()); len(errs) > 0 {
		t.Error(errs)
	}
	if e := read[weightsAnswer](t, w).Profile; e == nil || e.Hours != 4 || e.In == nil || *e.In <= 0 || e.Model != budget.ModelVersion {
		t.Errorf("profile %+v", e)
	}
	s.want(404, "GET", "/api/v1/designs/1/revisions/9/weights", "")
}
