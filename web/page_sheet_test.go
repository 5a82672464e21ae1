package web

import (
	"fmt"
	"maps"
	"net/http"
	"net/url"
	"slices"
	"strings"
	"testing"

	"golang.org/x/net/html"

	"lossbook/budget"
)

func TestSheetShowsTheBudget(t *testing.T) {
	p := seeded(t).open(200, "/designs/1")
	if got := words(p.all(withClass("head"))[0]); !strings.Contains(got, "95.41 %") || !strings.Contains(got, "2.31 W") {
		t.Errorf("head: %s", got)
	}
	want := map[string][]string{
		"Loss, mW":      {"227", "336", "500", "567", "639", "982", "1 565", "2 309"},
		"Efficiency, %": {"91.35", "93.46", "95.05", "95.49", "95.75", "96.07", "95.83", "95.41"},
		"turn-on":       {"·", "·", "8.18", "14.2", "20.2", "44.2", "74.4", "105"},
		"Switch":        {"45.0", "58.9", "96.3", "108", "120", "175", "281", "408"},
	}
	for heading, cells := range want {
		if got := p.row(heading); !slices.Equal(got, cells) {
			t.Errorf("%s: %q, want %q", heading, got, cells)
		}
	}
	if got := p.words(); !strings.Contains(got, "0 at every load: switch recovery") {
		t.Error("rows without a loss are not named")
	}
}

func TestSheetHasEveryField(t *testing.T) {
	s := seeded(t)
	p := s.open(200, "/designs/1")
	seen := 0
	for _, part := range budget.Parts() {
		if part.Path == "sync_switch" {
			if p.has("f-sync_switch.rds_on") {
				t.Error("the unused kind of rectifier is shown")
			}
			continue
		}
		for _, f := range part.Fields {
			path := f.Path
			if part.List {
				path = below(rowPath(part.Path, 0), f.Key)
			}
			if f.Key == "light_load" {
				continue // synchronous only
			}
			seen++
			if !p.has("f-" + path) {
				t.Errorf("no entry for %s", path)
			}
		}
	}
	if seen < 80 {
		t.Errorf("only %d fields were looked for", seen)
	}
	if p := s.page(200, s.send("/designs/1", p.form("entries", map[string]string{"rectifier": "synchronous"}), liveEdit), "edit"); !p.has("f-light_load") || !p.has("f-sync_switch.rds_on") {
		t.Error("a synchronous rectifier's entries are not shown")
	}
}

func TestEveryInputHasALabel(t *testing.T) {
	s := seeded(t)
	s.send("/designs/1", s.open(200, "/designs/1").form("entries", map[string]string{"do": "add:switch.rds_on_curve"}))
	for _, path := range []string{"/", "/designs/1", "/designs/1/rename", "/designs/1/revisions/1"} {
		p := s.open(200, path)
		labelled, ids := map[string]bool{}, map[string]bool{}
		for _, l := range p.all(tag("label")) {
			labelled[attr(l, "for")] = true
		}
		for _, n := range p.all(func(n *html.Node) bool { return attr(n, "id") != "" && !inTemplate(n) }) {
			if ids[attr(n, "id")] {
				t.Errorf("%s: two elements have the id %q", path, attr(n, "id"))
			}
			ids[attr(n, "id")] = true
		}
		inputs := p.all(func(n *html.Node) bool {
			return (n.Data == "input" && attr(n, "type") != "hidden" || n.Data == "select") && !inTemplate(n)
		})
		for _, n := range inputs {
			if !labelled[attr(n, "id")] && attr(n, "aria-label") == "" && n.Parent.Data != "label" {
				t.Errorf("%s: %q has no label", path, attr(n, "id"))
			}
			if attr(n, "type") == "number" {
				t.Errorf("%s: %q would swallow what is typed", path, attr(n, "id"))
			}
			for _, id := range strings.Fields(attr(n, "aria-describedby")) {
				if !ids[id] {
					t.Errorf("%s: %q is described by %q, which is not there", path, attr(n, "id"), id)
				}
			}
		}
		if h := p.all(tag("h1")); len(h) != 1 {
			t.Errorf("%s: %d headings of the first level", path, len(h))
		}
		if path != "/designs/1/revisions/1" && len(inputs) == 0 {
			t.Errorf("%s: no inputs were looked at", path)
		}
	}
}

func TestEditWithoutScript(t *testing.T) {
	s := seeded(t)
	form := s.open(200, "/designs/1").form("entries", map[string]string{"switch.rds_on": "8m5", "sources.switch.rds_on": "p. 3", "view.vin": "14.4 V"})
	where := s.moved(s.send("/designs/1", form))
	if where != "/designs/1?vin=14.4+V" {
		t.Errorf("sent on to %s", where)
	}
	p := s.open(200, where)
	input := p.one("f-switch.rds_on")
	if attr(input, "value") != "8m5" || !strings.Contains(p.words(), "= 8.5 mΩ") || !strings.Contains(p.words(), "was 11 mΩ") {
		t.Error("the entry is not kept as typed, with what was understood and what it was")
	}
	if attr(p.one("f-sources.switch.rds_on"), "value") != "p. 3" {
		t.Error("its source is not kept")
	}
	if got := words(p.one("since")); !strings.Contains(got, "11 mΩ 8.5 mΩ") || !strings.Contains(got, "points") {
		t.Errorf("since: %s", got)
	}
	if got := attr(p.one("carried").FirstChild, "value"); got != "2" && !strings.Contains(fmt.Sprint(p.form("entries", nil)["version"]), "2") {
		t.Errorf("version %s", got)
	}
}

// The same form sent twice changes nothing the second time, and says nothing of
// a conflict: an edit under way when a button is pressed is such a form.
func TestEditTwice(t *testing.T) {
	s := seeded(t)
	form := s.open(200, "/designs/1").form("entries", map[string]string{"frequency": "300k"})
	s.moved(s.send("/designs/1", form))
	s.moved(s.send("/designs/1", form))
	if where := s.moved(s.send("/designs/1/revisions", form)); where != "/designs/1?kept=2" {
		t.Errorf("keeping what was just edited: %s", where)
	}
	if d, _ := s.store.Design(t.Context(), 1); d.Version != 2 {
		t.Errorf("version %d after two forms that changed nothing, want 2", d.Version)
	}
}

func TestBadEntry(t *testing.T) {
	s := seeded(t)
	form := s.open(200, "/designs/1").form("entries", map[string]string{"switch.rds_on": "9q", "frequency": "1,234"})
	p := s.page(422, s.send("/designs/1", form), "edit")
	if !strings.HasPrefix(p.title(), "Error: ") {
		t.Errorf("title %q", p.title())
	}
	summary := p.all(withClass("errors"))
	if len(summary) != 1 || attr(summary[0], "tabindex") != "-1" {
		t.Fatal("no summary that takes the focus")
	}
	for _, path := range []string{"switch.rds_on", "frequency"} {
		input := p.one("f-" + path)
		if attr(input, "value") != form.Get(path) || attr(input, "aria-invalid") != "true" {
			t.Errorf("%s: the text is not kept, or not marked", path)
		}
		if !strings.Contains(attr(input, "aria-describedby"), "e-"+path) {
			t.Errorf("%s: the error is not read with the entry", path)
		}
		said := words(p.one("e-" + path))
		if said == "" || !strings.Contains(words(summary[0]), said) {
			t.Errorf("%s: the summary does not say %q", path, said)
		}
		if len(p.all(func(n *html.Node) bool { return attr(n, "href") == "#f-"+path })) == 0 {
			t.Errorf("%s: nothing leads to the entry", path)
		}
	}
	if got := words(p.one("answers")); !strings.Contains(got, "Last good answer") || !strings.Contains(got, "95.41 %") {
		t.Error("the last good answer is not shown, or not marked")
	}
	again := s.open(200, "/designs/1")
	if attr(again.one("f-switch.rds_on"), "value") != "9q" {
		t.Error("a wrong entry is lost on reload")
	}
}

func TestLiveEdit(t *testing.T) {
	s := seeded(t)
	form := s.open(200, "/designs/1").form("entries", map[string]string{"switch.rds_on": "8m5"})
	w := s.send("/designs/1", form, liveEdit)
	body := w.Body.String()
	for _, part := range []string{"#trouble", "#carried", "#since", "#fields", "#answers"} {
		if !strings.Contains(body, `hx-target="`+part+`"`) {
			t.Errorf("the answer leaves %s as it was", part)
		}
	}
	if strings.Contains(body, "<html") || strings.Contains(body, `hx-target="#fields" hx-swap="outerHTML"`) {
		t.Error("the answer replaces more than follows from the entries")
	}
	form = s.open(200, "/designs/1").form("entries", map[string]string{"do": "add:inductor.l_curve"})
	if body := s.send("/designs/1", form, liveEdit).Body.String(); !strings.Contains(body, `hx-target="#fields" hx-swap="outerHTML"`) {
		t.Error("rows that came are not drawn")
	}
	form = s.open(200, "/designs/1").form("entries", map[string]string{"frequency": "x"})
	w = s.send("/designs/1", form, liveEdit)
	if w.Code != 422 || !strings.Contains(w.Body.String(), "<title>Error: ") {
		t.Errorf("a wrong entry: %d", w.Code)
	}
}

func TestStaleEdit(t *testing.T) {
	s := seeded(t)
	mine := s.open(200, "/designs/1").form("entries", map[string]string{"frequency": "300k"})
	theirs := maps.Clone(mine)
	theirs.Set("frequency", "200k")
	s.moved(s.send("/designs/1", theirs))

	w := s.send("/designs/1", mine, liveEdit)
	if w.Code != http.StatusConflict || !strings.Contains(w.Body.String(), "Keep mine instead") {
		t.Fatalf("live: %d %s", w.Code, w.Body)
	}
	p := s.page(http.StatusConflict, s.send("/designs/1", mine), "edit")
	if attr(p.one("f-frequency"), "value") != "300k" {
		t.Error("what was typed is lost")
	}
	if got := p.form("entries", nil).Get("version"); got != mine.Get("version") {
		t.Errorf("the page's own version is %s: the next edit would overwrite unasked", got)
	}
	keep := p.all(func(n *html.Node) bool { return n.Data == "button" && attr(n, "name") == "version" })
	if len(keep) != 1 {
		t.Fatal("no way to keep mine")
	}
	mine.Add("version", attr(keep[0], "value"))
	s.moved(s.send("/designs/1", mine))
	if got := attr(s.open(200, "/designs/1").one("f-frequency"), "value"); got != "300k" {
		t.Errorf("after keeping mine: %s", got)
	}
}

func TestRectifierKeepsBothKinds(t *testing.T) {
	s := seeded(t)
	form := s.open(200, "/designs/1").form("entries", map[string]string{"rectifier": "synchronous"})
	p := s.page(200, s.send("/designs/1", form, liveEdit), "edit")
	if got := p.words(); !strings.Contains(got, "Last good answer") || !strings.Contains(got, "Still missing for a budget") {
		t.Error("an unfinished rectifier is not said to be missing")
	}
	form = s.open(200, "/designs/1").form("entries", map[string]string{"rectifier": "diode"})
	s.moved(s.send("/designs/1", form))
	p = s.open(200, "/designs/1")
	if got := attr(p.one("f-diode.v_f0"), "value"); got != "360 mV" {
		t.Errorf("the diode came back with %q", got)
	}
}

func TestRows(t *testing.T) {
	s := seeded(t)
	press := func(do string, changes map[string]string) page {
		t.Helper()
		form := s.open(200, "/designs/1").form("entries", changes)
		form.Set("do", do)
		where := s.moved(s.send("/designs/1", form))
		if !strings.Contains(where, "#add-") {
			t.Errorf("%s: sent on to %s", do, where)
		}
		return s.open(200, "/designs/1")
	}
	p := press("remove:series_resistances[1]", map[string]string{"sources.series_resistances[2].resistance": "measured"})
	if got := attr(p.one("f-series_resistances[1].name"), "value"); got != "board copper, power loop" {
		t.Errorf("the row behind did not move up: %q", got)
	}
	if got := attr(p.one("f-sources.series_resistances[1].resistance"), "value"); got != "measured" {
		t.Errorf("its source did not come along: %q", got)
	}
	if p.has("f-series_resistances[2].name") {
		t.Error("a row is left over")
	}
	p = press("add:series_resistances", nil)
	if !p.has("f-series_resistances[2].name") {
		t.Error("no row was added")
	}
	p = press("add:inductor.l_curve", nil)
	if !p.has("f-inductor.l_curve[3][1]") || p.has("f-inductor.l_curve[4][1]") {
		t.Error("a press adds four rows to a curve")
	}
	if got := p.words(); strings.Contains(got, "Last good answer") {
		t.Error("blank rows keep the budget away")
	}
	p = press("remove:inductor.l_curve[0]", map[string]string{"inductor.l_curve[1][0]": "2", "inductor.l_curve[1][1]": "20u"})
	if attr(p.one("f-inductor.l_curve[0][1]"), "value") != "20u" {
		t.Error("the curve's rows did not move up")
	}
}

func TestUnknownCommandsAndEntries(t *testing.T) {
	s := seeded(t)
	before, _ := s.store.Design(t.Context(), 1)
	form := s.open(200, "/designs/1").form("entries", nil)
	for name, value := range map[string]string{
		"do": "add:nothing.here", "nobody": "1", "switch.rds_on[0]": "1", "switch.rds_on_curve[0]": "1", "sources.nobody": "x",
		"series_resistances[999].name": "x", "series_resistances[200].name": "x", "switch.rds_on_curve[0][0][0]": "1", "switch[0].rds_on": "1", "sources.switch]": "x",
	} {
		form.Set(name, value)
	}
	s.moved(s.send("/designs/1", form))
	after, _ := s.store.Design(t.Context(), 1)
	if string(after.Draft) != string(before.Draft) {
		t.Errorf("kept what is no entry:\n%s", after.Draft)
	}
}

func TestUnreadableForms(t *testing.T) {
	s := seeded(t)
	form := s.open(200, "/designs/1").form("entries", nil)
	without := maps.Clone(form)
	without.Del("version")
	wrong := maps.Clone(form)
	wrong.Set("version", "one")
	long := maps.Clone(form)
	long.Set("note", strings.Repeat("n", maxEntry+1))
	for name, c := range map[string]struct {
		form url.Values
		want int
	}{"no version": {without, 400}, "no number": {wrong, 400}, "too long": {long, 422}} {
		p := s.page(c.want, s.send("/designs/1", c.form), name)
		if !strings.HasPrefix(p.title(), "Error: ") {
			t.Errorf("%s: title %q", name, p.title())
		}
	}
	s.page(415, s.ask("POST", "/designs/1", "{}"), "JSON")
	s.page(404, s.send("/designs/99", form), "no such design")
	s.page(404, s.ask("GET", "/designs/99", ""), "no such design")
	s.page(404, s.ask("GET", "/designs/99999999999999999999", ""), "no such number")
}

func TestViewIsInTheAddress(t *testing.T) {
	s := seeded(t)
	p := s.open(200, "/designs/1?vin=11&ambient=60&load=50&scale=lin")
	if got := words(p.all(withClass("ask"))[0]); !strings.Contains(got, "11 V in, 1 A (50 %), 60 °C") {
		t.Errorf("shown: %s", got)
	}
	if chart := p.all(tag("loss-chart"))[0]; attr(chart, "scale") != "lin" || !strings.Contains(attr(chart, "data"), "\"11\u00a0V\"") {
		t.Error("the chart does not show the voltage asked for, or not the axis")
	}
	for name, want := range map[string]string{"view.vin": "11", "view.ambient": "60", "view.load": "50", "view.scale": "lin"} {
		if got := p.form("entries", nil).Get(name); got != want {
			t.Errorf("an edit would forget %s: %q", name, got)
		}
	}
	for address, said := range map[string]string{
		"vin=x": "There is no number", "vin=-3": "must be", "ambient=-300": "must be", "load=33": "not one of the loads",
	} {
		p := s.open(200, "/designs/1?"+address)
		if got := words(p.one("answers")); !strings.Contains(got, said) || !strings.Contains(got, "95.41") {
			t.Errorf("%s: it does not say %q and show the usual point", address, said)
		}
	}
	w := s.ask("GET", "/designs/1?vin=11", "", liveEdit)
	if body := w.Body.String(); strings.Contains(body, "<html") || !strings.Contains(body, "11\u00a0V in") {
		t.Error("a live choice gets more, or something else, than the answers")
	}
}

// A point that does not settle says why, and takes no other with it.
func TestColumnWithoutFigures(t *testing.T) {
	s := seeded(t)
	p := s.open(200, "/designs/1?vin=30")
	none := p.all(withClass("none"))
	if len(none) != 1 || attr(none[0], "colspan") != "8" || words(none[0]) == "" {
		t.Fatalf("%d cells say why", len(none))
	}
	if got := p.row("Efficiency, %"); len(got) != 8 || got[0] != "—" {
		t.Errorf("efficiency: %q", got)
	}
	if got := words(p.all(withClass("head"))[0]); !strings.Contains(got, words(none[0])) {
		t.Errorf("head: %s", got)
	}
}
