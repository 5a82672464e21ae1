package web

import (
	"strings"
	"testing"

	"golang.org/x/net/html"
)

// typed sends entries of a sheet as a person without scripts does, and opens it.
func (s *site) typed(status int, entries map[string]string) page {
	s.t.Helper()
	w := s.send("/designs/1", s.open(200, "/designs/1").form("entries", entries))
	if status == 200 {
		where, _, _ := strings.Cut(s.moved(w), "#")
		return s.open(200, where)
	}
	return s.page(status, w, "an edit")
}

// changed are the lines of what changed since the last revision. Each must lead to an
// element of the page.
func (p page) changed() string {
	p.t.Helper()
	var lines []string
	for _, n := range (page{p.t, p.one("since"), 200}).all(func(n *html.Node) bool { return n.Data == "li" && inside(n, "changes") }) {
		lines = append(lines, words(n))
		for _, a := range (page{p.t, n, 200}).all(tag("a")) {
			if to := attr(a, "href"); !p.has(strings.TrimPrefix(to, "#")) {
				p.t.Errorf("%q leads to %s, which is not there", words(n), to)
			}
		}
	}
	return strings.Join(lines, "; ")
}

// What can't be read is a change too, and is said to be unreadable: it is not nothing.
func TestSinceWithUnreadableEntries(t *testing.T) {
	s := seeded(t)
	s.typed(422, map[string]string{"switch.l_source": " 3x7 "})
	p := s.open(200, "/designs/1")
	if got := p.changed(); got != "L s Common source inductance not given “3x7”, not readable" && !strings.Contains(got, "not given “3x7”, not readable") {
		t.Errorf("changes: %q", got)
	}
	if got := words(p.one("since")); strings.Contains(got, "Nothing has changed") || !strings.Contains(got, "1 entry") {
		t.Errorf("since: %s", got)
	}
	s.typed(422, map[string]string{"switch.rds_on": "8m5", "inductor.dcr": strings.Repeat("<b>", 20), "inductor.ac_curve[1][1]": "?", "frequency": ""})
	got := s.open(200, "/designs/1").changed()
	for _, want := range []string{"250 kHz not given", "11 mΩ 8.5 mΩ", "26 mΩ “<b><b><b><b><b><b><b><b>…”, not readable", "5 rows 5 rows, not all readable", "not given “3x7”, not readable"} {
		if !strings.Contains(got, want) {
			t.Errorf("%q is not among the changes: %s", want, got)
		}
	}
	s.moved(s.send("/designs/1/revisions/1/reopen", nil))
	if got := words(s.open(200, "/designs/1").one("since")); !strings.Contains(got, "Nothing has changed.") {
		t.Errorf("reopened: %s", got)
	}
}

// Rows are counted as typed: one that is empty stands between.
func TestSinceLeadsToTheRowAsTyped(t *testing.T) {
	s := seeded(t)
	s.typed(200, map[string]string{"series_resistances[0].name": "", "series_resistances[0].location": "", "series_resistances[0].resistance": "", "do": "add:series_resistances"})
	form := s.open(200, "/designs/1").form("entries", map[string]string{"series_resistances[1].name": "fuse", "series_resistances[1].location": "input", "series_resistances[1].resistance": "2m"})
	p := s.open(200, s.moved(s.send("/designs/1", form)))
	if got := p.changed(); !strings.Contains(got, "fuse") {
		t.Errorf("changes: %s", got)
	}
	s.typed(422, map[string]string{"series_resistances[1].resistance": "2q"})
	if got := s.open(200, "/designs/1").changed(); !strings.Contains(got, "“2q”, not readable") {
		t.Errorf("changes: %s", got)
	}
	gone := s.open(200, "/designs/1").form("entries", map[string]string{"do": "remove:series_resistances[1]"})
	if got := s.open(200, strings.TrimSuffix(s.moved(s.send("/designs/1", gone)), "#add-series_resistances")).changed(); !strings.Contains(got, "not given") {
		t.Errorf("changes: %s", got)
	}
}

// What a revision was kept with, unread in a part that it did not need, is no change.
func TestSinceWithAnUnusedPart(t *testing.T) {
	s := seeded(t)
	s.typed(200, map[string]string{"rectifier": "synchronous"})
	p := s.page(422, s.send("/designs/1", s.open(200, "/designs/1").form("entries", map[string]string{"sync_switch.rds_on": "x"})), "an edit")
	form := p.form("entries", map[string]string{"rectifier": "diode", "note.revision": "with a rest"})
	s.moved(s.send("/designs/1", form))
	if got := s.open(200, "/designs/1").changed(); !strings.Contains(got, "not given “x”, not readable") {
		t.Errorf("changes: %s", got)
	}
	s.moved(s.send("/designs/1/revisions", s.open(200, "/designs/1").form("entries", map[string]string{"note.revision": "with a rest"})))
	if got := words(s.open(200, "/designs/1").one("since")); !strings.Contains(got, "Since revision 2 Nothing has changed.") {
		t.Errorf("since: %s", got)
	}
}

// A change that moves no figure says so, and is no difference of ±0. A day of 10 hours at
// half load loses ten times the 0.982 W of the ledger.
func TestSinceWithoutAnEffect(t *testing.T) {
	s := seeded(t)
	s.typed(200, map[string]string{"do": "add:profile"})
	p := s.typed(200, map[string]string{"profile[0].load": "50 %", "profile[0].hours": "10"})
	if got := p.changed(); got != "Load profile not given 1 row, 9.821 W·h lost a day" {
		t.Errorf("changes: %q", got)
	}
	unmoved := func(p page) {
		t.Helper()
		got := words(p.one("since"))
		if !strings.Contains(got, "No change of efficiency or losses at full load, 12 V in") || strings.Contains(got, "±") || strings.Contains(got, "points") {
			t.Errorf("since: %s", got)
		}
	}
	unmoved(p)
	s.moved(s.send("/designs/1/revisions", p.form("entries", map[string]string{"note.revision": "a day"})))
	p = s.typed(200, map[string]string{"profile[0].hours": "20"})
	unmoved(p)
	if got := p.changed(); got != "Load profile 1 row, 9.821 W·h lost a day 1 row, 19.64 W·h lost a day" {
		t.Errorf("changes: %q", got)
	}
	p = s.typed(422, map[string]string{"profile[0].hours": "many"})
	if got := p.changed(); got != "Load profile 1 row 1 row, not all readable" {
		t.Errorf("changes: %q", got)
	}
	p = s.typed(200, map[string]string{"profile[0].hours": "10", "sources.switch.rds_on": "p. 3"})
	unmoved(p)
	if p = s.typed(200, map[string]string{"switch.rds_on": "8m5"}); !strings.Contains(words(p.one("since")), "points") {
		t.Errorf("since: %s", words(p.one("since")))
	}
}
