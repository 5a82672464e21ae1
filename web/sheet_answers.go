package web

import (
	"context"
	"fmt"
	"math"
	"strings"

	"lossbook/budget"
	"lossbook/web/quantity"
	"lossbook/web/view"
)

// answers draws the picture: large figures, findings, charts, ledger.
func (p *picture) answers(base string, typed bool, take []view.Link) (view.Answers, error) {
	charts, err := p.charts(base)
	if err != nil {
		return view.Answers{}, err
	}
	waves, err := p.waves()
	if err != nil {
		return view.Answers{}, err
	}
	a := view.Answers{Views: p.spot.views(p.design, base, typed, p.vins), Head: p.head(), Flow: p.flow(), Charts: charts, Ledger: p.ledger(base, take),
		Working: p.working(base), Waves: waves, Weights: p.weights(), Shared: strings.HasPrefix(base, sharePrefix)}
	for _, f := range findingLines(p.findings) {
		if f.Level == string(budget.Note) {
			a.Notes = append(a.Notes, f)
		} else {
			a.Warnings = append(a.Warnings, f)
		}
	}
	a.Count = plural(len(a.Notes), "note", "notes")
	return a, nil
}

// head draws the large figures at the point looked at.
func (p *picture) head() *view.Head {
	q := p.chosen()
	if q == nil {
		return &view.Head{Reason: "This point was not kept."}
	}
	if !q.Settled() {
		return &view.Head{Reason: q.Reason}
	}
	h := &view.Head{Efficiency: percent(q.Efficiency) + " %", Loss: quantity.Show(q.Loss, "W", 3)}
	h.Hottest, h.Temperature = p.hottest(q.Temperatures)
	return h
}

// hottest names the part that comes nearest to its limit, or goes furthest
// beyond it: a warm core may be nearer to trouble than a hot switch.
func (p *picture) hottest(t Temperatures) (words, temperature string) {
	rectifier := "diode.tj_max"
	if p.design.Rectifier == "synchronous" {
		rectifier = "sync_switch.tj_max"
	}
	parts := []struct {
		name  string
		at    float64
		limit float64
	}{
		{"switch", t.Switch, limitOf(p.design, "switch.tj_max")},
		{"rectifier", t.Rectifier, limitOf(p.design, rectifier)},
		{"inductor", t.Inductor, limitOf(p.design, "inductor.t_max")},
	}
	worst := parts[0]
	for _, part := range parts {
		if part.limit-part.at < worst.limit-worst.at {
			worst = part
		}
	}
	margin := worst.limit - worst.at
	words = "nearest its limit: " + worst.name + ", " + decimals(margin, 0) + " K below"
	if margin < 0 {
		words = "over its limit: " + worst.name + ", " + decimals(-margin, 0) + " K above"
	}
	return words, degrees(worst.at) + " °C"
}

// findingLines words the findings with the point where each is worst.
func findingLines(findings []Finding) []view.Finding {
	lines := make([]view.Finding, len(findings))
	for i, f := range findings {
		lines[i] = view.Finding{Level: f.Level, Part: partWords[f.Part], Message: f.Message, Source: f.Source}
		if f.Point != nil {
			lines[i].At = "at " + quantityOf(f.Point.Vin, "V", 4) + " in, " + quantityOf(f.Point.Iout, "A", 3)
		}
	}
	return lines
}

// sizing draws what the parts must stand, and what a budget still lacks.
func sizing(t Draft, d *budget.Design) *view.Sizing {
	ripple, wrong := t.ripple()
	size, lacking := budget.Size(d, ripple)
	if wrong = append(lacking, wrong...); len(wrong) > 0 {
		return &view.Sizing{Error: problemsOf(wrong, true)}
	}
	s := &view.Sizing{Ripple: quantityOf(size.Ripple, "", 3), Inductance: quantity.Show(size.Inductance, "H", 3)}
	if size.Used != size.Inductance {
		s.Used = quantity.Show(size.Used, "H", 3)
	}
	s.Heads, s.Rows = requirements(size.Parts)
	for _, p := range size.Parts {
		if p.Part == "switch" {
			s.Duty = decimals(100*p.DutyMin, 1) + " to " + decimals(100*p.DutyMax, 1) + " %"
		}
	}
	return s
}

// requirements is the table of what each part must stand: a unit a column.
func requirements(parts []budget.Requirement) (heads []string, rows []view.Line) {
	heads = []string{"Part"}
	for _, p := range parts {
		rows = append(rows, view.Line{Head: partWords[p.Part]})
	}
	columns := []struct {
		name string
		unit quantity.Unit
		of   func(budget.Requirement) float64
	}{
		{"blocking", "V", func(p budget.Requirement) float64 { return p.Blocking }},
		{"peak", "A", func(p budget.Requirement) float64 { return p.Peak }},
		{"mean", "A", func(p budget.Requirement) float64 { return p.Mean }},
		{"rms", "A", func(p budget.Requirement) float64 { return p.RMS }},
	}
	for _, c := range columns {
		most := 0.0
		for _, p := range parts {
			most = max(most, math.Abs(c.of(p)))
		}
		scale := quantity.ScaleFor(most, c.unit)
		heads = append(heads, c.name+", "+scale.Unit)
		for i, p := range parts {
			text := scale.Number(c.of(p), 3)
			if c.of(p) == 0 {
				text = "·"
			}
			rows[i].Cells = append(rows[i].Cells, text)
		}
	}
	return heads, rows
}

// answersOf draws the right side of a sheet: the budget of the draft if it has
// one, else the last good one, marked as that, and what is missing.
func (s *sheet) answersOf(ctx context.Context) (view.Answers, error) {
	bad, missing := parted(s.wrong)
	design := s.design
	if len(s.wrong) > 0 {
		design = s.complete
	}
	if design == nil {
		return view.Answers{Missing: missingParts(missing), Sizing: sizing(s.draft, s.design)}, nil
	}
	p, err := paint(ctx, design, s.sight)
	if err != nil {
		return view.Answers{}, err
	}
	if p.energy, err = s.draft.energy(ctx, design); err != nil {
		return view.Answers{}, err
	}
	var take []view.Link
	if len(s.wrong) == 0 {
		take = files(s.address())
		s.now = fullLoad(design, p.columns)
	}
	a, err := p.answers(s.address(), true, take)
	if err != nil {
		return a, err
	}
	a.File = fileStem(design.Name, 0)
	a.Map, err = p.mapPlace(ctx, s.address(), "")
	a.Wrong, a.WrongToo = few(problemsOf(append(bad, missing...), true))
	if len(missing) > 0 {
		a.Missing, a.Sizing = missingParts(missing), sizing(s.draft, s.design)
	}
	return a, err
}

// files are the ways to take a table along, under the address of its page.
func files(base string) []view.Link {
	return []view.Link{{Text: "CSV", Href: base + "/efficiency.csv"}, {Text: "workbook", Href: base + "/efficiency.xlsx"}, {Text: "design.json", Href: base + "/design.json"}}
}

// parted tells what is wrong from what is only missing.
func parted(errs []budget.FieldError) (bad, missing []budget.FieldError) {
	for _, e := range errs {
		if e.Missing {
			missing = append(missing, e)
		} else {
			bad = append(bad, e)
		}
	}
	return bad, missing
}

// few keeps what can be read at a glance, and says how many more there are.
func few(list []view.Problem) ([]view.Problem, string) {
	const most = 3
	if len(list) <= most+1 {
		return list, ""
	}
	return list[:most], fmt.Sprintf("and %d more", len(list)-most)
}
