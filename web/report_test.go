package web

import (
	"math"
	"slices"
	"strings"
	"testing"

	"lossbook/budget"
)

func marginNamed(list []margin, part, what string) *margin {
	if i := slices.IndexFunc(list, func(m margin) bool { return m.part == part && m.what == what }); i >= 0 {
		return &list[i]
	}
	return nil
}

// TestMargins holds two points, of which one does not settle, against limits that
// were done by hand.
func TestMargins(t *testing.T) {
	d := sample(t, "frost")
	d.Switch.VdsRating, d.Switch.IDRating, d.Switch.TjMax, d.Switch.ThetaJA = budget.N(60), budget.N(10), budget.N(150), budget.N(40)
	d.Inductor.ISat, d.Inductor.IRMSRating = budget.N(5), budget.Num{}
	d.Controller = &budget.Controller{OnTimeMin: budget.N(1e-7), DutyMax: budget.N(0.9)}
	q := Point{Vin: 12, Iout: 2, Ambient: 50, State: "settled", Figures: &Figures{SwitchRMS: 4, Duty: 0.45, OnTime: 2e-7,
		InductorCurrent: Current{Max: 6, RMS: 5}, Temperatures: Temperatures{Switch: 130, Rectifier: 60, Inductor: 60}}}
	lighter := q
	half := *q.Figures
	half.SwitchRMS, half.InductorCurrent.Max, half.Temperatures.Switch, half.OnTime = 2, 3, 90, 4e-7
	lighter.Iout, lighter.Figures = 1, &half
	list, unrated := marginsOf(d, []Point{q, lighter, {Vin: 12, Iout: 3, State: "runaway"}})
	for _, want := range []struct {
		part, what string
		used       float64
	}{
		{"inductor", "peak current to saturation", 6.0 / 5}, {"switch", "junction", (130.0 - 50) / (150 - 50)}, {"switch", "rms current", 0.4},
		{"switch", "blocking voltage, without ringing", 24.0 / 60}, {"controller", "duty", 0.5}, {"controller", "on-time, not below", 0.5},
	} {
		m := marginNamed(list, want.part, want.what)
		if m == nil || math.Abs(m.used-want.used) > 1e-12 || m.at != nil && m.at.Iout != 2 && m.part != "controller" {
			t.Errorf("%s, %s: %+v, want %v at 2 A", want.part, want.what, m, want.used)
		}
	}
	if list[0].what != "peak current to saturation" || !slices.IsSortedFunc(list, func(a, b margin) int { return int(math.Copysign(1, b.used-a.used)) }) {
		t.Errorf("the nearest is not first: %+v", list)
	}
	if !slices.Contains(unrated, "inductor rms current") || marginNamed(list, "inductor", "rms current") != nil {
		t.Errorf("what nothing is stated for: %v", unrated)
	}
	q.Ambient = 150
	if list, _ := marginsOf(d, []Point{q}); !math.IsInf(marginNamed(list, "switch", "junction").used, 1) {
		t.Error("air as hot as the limit leaves room")
	}
	d.Switch.ThetaJA = budget.Num{}
	if list, unrated := marginsOf(d, []Point{q}); marginNamed(list, "switch", "junction") != nil || !slices.Contains(unrated, "switch junction") {
		t.Error("a junction without a thermal resistance is held against its limit")
	}
}

// TestMarginsOfEveryDesign agrees with the findings: what is over its limit here
// is exceeded there.
func TestMarginsOfEveryDesign(t *testing.T) {
	rules := map[string]string{"junction": "junction", "peak current to saturation": "saturation", "rms current": "current_rating",
		"mean current": "current_rating", "duty": "modulation", "on-time, not below": "modulation"}
	compared := 0
	for name, d := range everyDesign(t) {
		found := computed(t, d)
		list, _ := marginsOf(d, found.Points)
		for _, m := range list {
			rule, known := rules[m.what]
			if !known || m.part == "inductor" && m.what == "rms current" {
				continue
			}
			compared++
			exceeded := slices.ContainsFunc(found.Findings, func(f Finding) bool {
				return f.Level == "exceeded" && f.Rule == rule && f.Part == m.part
			})
			if over := m.used > 1; over && !exceeded || !over && exceeded && rule != "modulation" {
				t.Errorf("%s: %s, %s uses %v of its limit, and the findings say exceeded: %t", name, m.part, m.what, m.used, exceeded)
			}
		}
	}
	if compared < 60 {
		t.Errorf("only %d margins were compared", compared)
	}
}

func TestReportPage(t *testing.T) {
	s := seeded(t)
	d, err := s.store.Design(t.Context(), 1)
	if err != nil {
		t.Fatal(err)
	}
	draft, err := readDraft(d.Draft)
	if err != nil {
		t.Fatal(err)
	}
	draft["profile[0].load"], draft["profile[0].hours"], draft["sources.switch.rds_on"] = "25 %", "24", "data sheet, p. 3"
	s.keepDraft(d, draft)
	s.want(201, "POST", "/api/v1/designs/1/revisions", `{"note": "for the review"}`)
	if links := words(s.open(200, "/designs/1/revisions/2").all(withClass("take"))[0]); !strings.Contains(links, "CSV · workbook · design.json · paper") {
		t.Errorf("the ways to take the table along: %s", links)
	}
	p := s.open(200, "/designs/1/revisions/2/report")
	got := p.words()
	for _, want := range []string{"for the review", "95.41 %", "Output voltage", "data sheet, p. 3", "mW at 10.5 V in", "mW at 12 V in", "mW at 14.4 V in", "Margins, the nearest",
		"European weights", "lost a day", "from memory", "model " + budget.ModelVersion, "revision 2", "Dowell"} {
		if !strings.Contains(got, want) {
			t.Errorf("the report lacks %q", want)
		}
	}
	ledgers := p.all(withClass("ledger"))
	if len(ledgers) != 3 {
		t.Errorf("%d ledgers", len(ledgers))
	}
	for _, l := range ledgers { // nothing opens on paper, and nothing says that it would
		table := page{t, l, 200}
		caption := words(table.all(tag("caption"))[0])
		if len(table.all(tag("a"))) > 0 || !strings.HasSuffix(caption, " in, 45 °C; shade: share of the column’s loss") {
			t.Errorf("%d links in the ledger %q", len(table.all(tag("a"))), caption)
		}
	}
	if caption := words(s.open(200, "/designs/1/revisions/2").all(tag("caption"))[0]); !strings.Contains(caption, "share of the column’s loss ; a figure opens how it came about") {
		t.Errorf("on screen: %q", caption)
	}
	if n := len(p.all(tag("loss-chart"))); n != 2 {
		t.Errorf("%d charts", n)
	}
	if forms := len(p.all(tag("form"))) + len(p.all(tag("button"))); forms > 0 {
		t.Errorf("%d things to press on paper", forms)
	}
	s.page(404, s.ask("GET", "/designs/1/revisions/9/report", ""), "no such revision")
}

func TestHostileReport(t *testing.T) {
	s := seeded(t)
	seen := 0
	for _, name := range hostile {
		if nameError(strings.TrimSpace(name)) != "" || strings.ContainsRune(name, 0) {
			continue
		}
		d := sample(t, "frost")
		d.Name, d.Note, d.Switch.Part, d.Series[0].Name = name, name, name, name
		d.Sources = map[string]string{"switch.rds_on": name}
		w := s.ask("POST", "/api/v1/designs", text(t, designRequest{d}), header("Content-Type", "application/json"))
		if w.Code != 201 {
			continue
		}
		id := strings.TrimPrefix(w.Header().Get("Location"), "/api/v1")
		s.want(201, "POST", "/api/v1"+id+"/revisions", text(t, revisionRequest{name}))
		s.open(200, id+"/revisions/1/report").harmless(id, name)
		seen++
	}
	if seen < 15 {
		t.Errorf("only %d names were tried", seen)
	}
}
