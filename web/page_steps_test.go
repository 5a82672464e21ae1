package web

import (
	"maps"
	"net/http"
	"net/url"
	"strings"
	"testing"
	"time"

	"lossbook/web/view"
)

// press sends the sheet's form by one of its buttons, without a script, and opens
// the page it leads to.
func (s *site) press(button string, changes map[string]string) (page, string) {
	s.t.Helper()
	p := s.open(200, "/designs/1")
	where := s.moved(s.send(attr(p.one(button), "formaction"), p.form("entries", changes)))
	return s.open(200, strings.Split(where, "#")[0]), where
}

// edits changes entries of the sheet, as its form does without a script.
func (s *site) edits(changes map[string]string) {
	s.t.Helper()
	s.moved(s.send("/designs/1", s.open(200, "/designs/1").form("entries", changes)))
}

func (s *site) draft() Draft {
	s.t.Helper()
	d, err := s.store.Design(s.t.Context(), 1)
	if err != nil {
		s.t.Fatal(err)
	}
	t, err := readDraft(d.Draft)
	if err != nil {
		s.t.Fatal(err)
	}
	return t
}

// Each kind of edit can be taken back and made again by the page's own buttons,
// said in words before and after, and the page leads to what changed.
func TestEveryEditCanBeUndone(t *testing.T) {
	revision := func(s *site) { s.moved(s.send("/designs/1/revisions/1/reopen", url.Values{})) }
	for name, c := range map[string]struct {
		edit       func(s *site)
		words, led string // of the undo, and where it leads
	}{
		"a value":         {func(s *site) { s.edits(map[string]string{"switch.rds_on": "10m"}) }, "Switch: On-resistance 10m → 11 mΩ", "f-switch.rds_on"},
		"a value emptied": {func(s *site) { s.edits(map[string]string{"diode.i_leak": ""}) }, "Diode: Leakage blank → 9 mA", "f-diode.i_leak"},
		"a wrong value": {func(s *site) {
			s.page(422, s.send("/designs/1", s.open(200, "/designs/1").form("entries", map[string]string{"frequency": "4k7x"})), "edit")
		}, "Switching frequency 4k7x → 250 kHz", "f-frequency"},
		"a folded entry": {func(s *site) { s.edits(map[string]string{"drive.voltage_off": "-2"}) }, "Gate drive: Gate voltage when off -2 → blank", "f-drive.voltage_off"},
		"a source":       {func(s *site) { s.edits(map[string]string{"sources.switch.rds_on": "p. 3"}) }, "Source of Switch: On-resistance p. 3 → ", "f-sources.switch.rds_on"},
		"rows added":     {func(s *site) { s.edits(map[string]string{"do": "add:series_resistances"}) }, "Copper and shunts 4 rows → 3 rows", "part-series_resistances"},
		"a row removed":  {func(s *site) { s.edits(map[string]string{"do": "remove:series_resistances[1]"}) }, "Copper and shunts 2 rows → 3 rows", "f-series_resistances[1].name"},
		"a curve": {func(s *site) {
			s.edits(map[string]string{"do": "add:inductor.l_curve"})
			s.edits(map[string]string{"inductor.l_curve[0][0]": "1", "inductor.l_curve[0][1]": "20u", "inductor.l_curve[1][0]": "2", "inductor.l_curve[1][1]": "15u"})
		}, "Inductor: Inductance over current: other values", "f-inductor.l_curve[0][0]"},
		"a cell":       {func(s *site) { s.edits(map[string]string{"series_resistances[0].resistance": "1m"}) }, "Copper and shunts: Resistance, row 1 1m → ", "f-series_resistances[0].resistance"},
		"the topology": {func(s *site) { s.edits(map[string]string{"topology": "buck"}) }, "Topology buck → boost", "f-topology"},
		"the rectifier, with values of the other kind": {func(s *site) {
			s.edits(map[string]string{"rectifier": "synchronous"})
			s.edits(map[string]string{"rectifier": "diode", "sync_switch.rds_on": "7m"})
		}, "Rectifier diode → synchronous MOSFET and 1 more", "f-rectifier"},
		"the load profile": {func(s *site) {
			s.edits(map[string]string{"do": "add:profile"})
			s.edits(map[string]string{"profile[0].load": "1", "profile[0].hours": "8"})
		}, "Load profile: other values", "f-profile[0].load"},
		"the ripple ratio": {func(s *site) { s.edits(map[string]string{rippleRatio: "0.4"}) }, "Ripple ratio wanted 0.4 → blank", "f-" + rippleRatio},
		"another name": {func(s *site) { s.moved(s.send("/designs/1/rename", url.Values{"name": {"Mast"}})) },
			"Name Mast → Night-frost mast, siren and strobe rail", "f-name"},
		"a script's change": {func(s *site) {
			d := sample(s.t, "frost")
			d.Frequency.V = 150e3
			s.want(200, "PUT", "/api/v1/designs/1", text(s.t, map[string]any{"design": d, "version": 1}))
		}, "Switching frequency 150 kHz → 250 kHz", "f-frequency"},
		"a revision reopened over a draft": {func(s *site) {
			s.edits(map[string]string{"name": "Not kept yet", "switch.rds_on": "4k7x", "frequency": "180 k"}) // goes wrong, and is kept
		}, "", ""},
	} {
		t.Run(name, func(t *testing.T) {
			s := seeded(t)
			if strings.HasPrefix(name, "a revision") {
				form := s.open(200, "/designs/1").form("entries", map[string]string{"name": "Not kept yet", "switch.rds_on": "4k7x", "frequency": "180 k"})
				s.page(422, s.send("/designs/1", form), "edit")
				c.edit, c.words, c.led = revision, "Name Night-frost mast, siren and strobe rail → Not kept yet and 2 more", "f-name"
			}
			at := func() int64 { d, _ := s.store.Design(t.Context(), 1); return d.Version }
			earlier := s.draft()
			c.edit(s)
			if strings.Contains(name, "rectifier") || name == "a curve" || name == "the load profile" { // two edits: the last one is undone
				d, _ := s.store.Steps(t.Context(), 1)
				earlier, _ = readDraft(d.Undo)
			}
			later, version := s.draft(), at()
			said := attr(s.open(200, "/designs/1").one("undo"), "title")
			if !strings.HasPrefix(said, "Undo: "+c.words) {
				t.Errorf("the button says %q, want %q", said, "Undo: "+c.words)
			}
			p, where := s.press("undo", nil)
			if got := s.draft(); !maps.Equal(got, earlier) {
				t.Errorf("undone to\n%v, want\n%v", got, earlier)
			}
			if !strings.HasSuffix(where, "#"+c.led) || !p.has(c.led) {
				t.Errorf("it leads to %s, want #%s", where, c.led)
			}
			if got := words(p.one("said")); !strings.HasPrefix(got, "Undone: "+strings.TrimPrefix(said, "Undo: ")) {
				t.Errorf("said %q, want what the button said", got)
			}
			if at() != version+1 {
				t.Errorf("undo gives version %d after %d", at(), version)
			}
			if _, where = s.press("redo", nil); !strings.Contains(where, "step=redone") || !maps.Equal(s.draft(), later) {
				t.Errorf("redone to\n%v, want\n%v (%s)", s.draft(), later, where)
			}
		})
	}
}

// What an address leads to is not folded away.
func TestUndoOpensWhatItChanged(t *testing.T) {
	s := seeded(t)
	open := func(p page, id string) bool {
		for n := p.one(id); n != nil; n = n.Parent {
			if n.Data == "details" && !hasAttr(n, "open") {
				return false
			}
		}
		return true
	}
	for path, id := range map[string]string{"drive.voltage_off": "f-drive.voltage_off", "sources.switch.rds_on": "f-sources.switch.rds_on",
		"sources.series_resistances[1].resistance": "f-sources.series_resistances[1].resistance"} {
		if open(s.open(200, "/designs/1"), id) {
			t.Fatalf("%s is in sight anyway", id)
		}
		s.edits(map[string]string{path: "-2"})
		if p, where := s.press("undo", nil); !open(p, id) {
			t.Errorf("%s is folded away at %s", id, where)
		}
	}
}

// What the form holds that was not sent before is the edit that undo takes back,
// and redo brings it again.
func TestUndoTakesBackWhatWasTypedLast(t *testing.T) {
	s := seeded(t)
	s.edits(map[string]string{"frequency": "150k"})
	s.press("undo", map[string]string{"switch.rds_on": "9m"})
	if got := s.draft(); got["switch.rds_on"] != "11 mΩ" || got["frequency"] != "150k" {
		t.Errorf("undone to %s at %s", got["switch.rds_on"], got["frequency"])
	}
	s.press("redo", nil)
	if got := s.draft(); got["switch.rds_on"] != "9m" {
		t.Errorf("redone to %s", got["switch.rds_on"])
	}
}

func TestNothingToUndo(t *testing.T) {
	s := seeded(t)
	p := s.open(200, "/designs/1")
	for _, id := range []string{"undo", "redo"} {
		if attr(p.one(id), "aria-disabled") != "true" || attr(p.one(id), "title") != "" {
			t.Errorf("%s offers something", id)
		}
		if p, _ := s.press(id, nil); words(p.one("said")) != "There is nothing to "+id+"." {
			t.Errorf("%s: said %q", id, words(p.one("said")))
		}
	}
	for _, address := range []string{"/designs/1?step=undone", "/designs/1?step=redone&show=f-frequency", "/designs/1?step=x&show=x"} {
		if p := s.open(200, address); words(p.one("said")) != "" {
			t.Errorf("%s claims %q", address, words(p.one("said")))
		}
	}
	if d, _ := s.store.Design(t.Context(), 1); d.Version != 1 {
		t.Errorf("version %d", d.Version)
	}
}

// Another window's edit is not undone from a page that does not show it, whether
// or not something was typed there.
func TestStaleUndo(t *testing.T) {
	for _, button := range []string{"undo", "redo"} {
		for name, typed := range map[string]map[string]string{"as loaded": nil, "with something typed": {"diode.r_d": "5m"}} {
			t.Run(button+" "+name, func(t *testing.T) {
				s := seeded(t)
				s.edits(map[string]string{"frequency": "150k"})
				s.press("undo", nil) // so that there is something to redo
				mine := s.open(200, "/designs/1").form("entries", typed)
				s.edits(map[string]string{"rectifier": "synchronous"})
				s.edits(map[string]string{"sync_switch.rds_on": "7m"})
				s.edits(map[string]string{"rectifier": "diode"}) // the same entries are shown again
				before := s.draft()
				for kind, change := range map[string]func(*http.Request){"live": liveEdit, "a form": func(*http.Request) {}} {
					w := s.send("/designs/1/"+button, mine, change)
					if w.Code != http.StatusConflict || !strings.Contains(w.Body.String(), "Keep mine instead") {
						t.Errorf("%s: status %d", kind, w.Code)
					}
				}
				if !maps.Equal(s.draft(), before) {
					t.Error("the draft changed")
				}
			})
		}
	}
	s := seeded(t)
	s.page(404, s.send("/designs/9/undo", url.Values{"version": {"1"}}), "no such design")
	s.page(400, s.send("/designs/1/redo", url.Values{}), "no version")
	s.page(415, s.ask("POST", "/designs/1/undo", "{}"), "no form")
}

func TestLiveUndo(t *testing.T) {
	s := seeded(t)
	s.edits(map[string]string{"switch.rds_on": "9m"})
	w := s.send("/designs/1/undo", s.open(200, "/designs/1").form("entries", nil), liveEdit)
	body := w.Body.String()
	if w.Code != 200 || strings.Contains(body, "<html") {
		t.Fatalf("status %d: %.300s", w.Code, body)
	}
	for _, part := range []string{`hx-target="#steps"`, `data-to="f-switch.rds_on"`, "Undone: Switch: On-resistance 9m → 11", `hx-target="#fields" hx-swap="outerHTML"`, `hx-target="#carried"`, `hx-target="#answers"`} {
		if !strings.Contains(body, part) {
			t.Errorf("the answer has no %s", part)
		}
	}
	// The next edit says nothing of it any more.
	body = s.send("/designs/1", s.open(200, "/designs/1").form("entries", map[string]string{"frequency": "150k"}), liveEdit).Body.String()
	if strings.Contains(body, "Undone") || !strings.Contains(body, `title="Undo: Switching frequency 150k → 250`) {
		t.Error("an edit leaves the words of the undo, or does not say what would be undone")
	}
}

// The edits of one entry in quick succession are one step, whatever stood between.
func TestTypingIsOneStep(t *testing.T) {
	for range 50 {
		s := seeded(t)
		began := time.Now()
		for _, typed := range []string{"1", "12", "12m"} {
			s.edits(map[string]string{"switch.rds_on": typed})
		}
		s.edits(map[string]string{"frequency": "150k"})
		if time.Since(began) > 2*time.Second {
			continue // on a machine this busy it was no quick succession
		}
		s.press("undo", nil)
		s.press("undo", nil)
		if got := s.draft(); got["switch.rds_on"] != "11 mΩ" || got["frequency"] != "250 kHz" {
			t.Errorf("two steps lead back to %s at %s", got["switch.rds_on"], got["frequency"])
		}
		return
	}
	t.Fatal("four edits never took less than two seconds")
}

func TestWordsOfASwitchOfLongTexts(t *testing.T) {
	long := strings.Repeat("µ", 60)
	s := turn(Draft{"note": long}, Draft{"note": "short"})
	if want := strings.Repeat("µ", 40) + "… → short"; !strings.HasSuffix(s.Words(), want) {
		t.Errorf("%q", s.Words())
	}
	if s := turn(Draft{"a": "1"}, Draft{"a": "1"}); s != (view.Step{}) {
		t.Errorf("no difference is %q", s.Words())
	}
}
