package web

import (
	"errors"
	"fmt"
	"net/http/httptest"
	"strings"
	"testing"

	"lossbook/store"
)

func TestKeepRevision(t *testing.T) {
	s := seeded(t)
	p := s.open(200, "/designs/1")
	if got := words(p.one("since")); !strings.Contains(got, "Since revision 1 Nothing has changed.") {
		t.Errorf("since: %s", got)
	}
	form := p.form("entries", map[string]string{"switch.rds_on": "8m5", "note.revision": "cheaper"})
	where := s.moved(s.send("/designs/1/revisions", form))
	if where != "/designs/1?kept=2" {
		t.Fatalf("sent on to %s", where)
	}
	p = s.open(200, where)
	if got := words(p.all(withClass("notice"))[0]); got != "Kept as revision 2." {
		t.Errorf("notice: %s", got)
	}
	if got := words(p.one("since")); !strings.Contains(got, "Since revision 2 Nothing has changed.") || !strings.Contains(got, "Revision 2") || !strings.Contains(got, "cheaper") {
		t.Errorf("since: %s", got)
	}
	if got := s.open(200, "/designs/1?kept=9"); len(got.all(withClass("notice"))) != 0 {
		t.Error("an address claims a revision that is not there")
	}
	again := s.open(200, "/designs/1").form("entries", map[string]string{"note.revision": "cheaper"})
	if where := s.moved(s.send("/designs/1/revisions", again)); where != "/designs/1?kept=2" {
		t.Errorf("the same revision is kept twice: %s", where)
	}
}

func TestKeepUnfinished(t *testing.T) {
	s := seeded(t)
	form := s.open(200, "/designs/1").form("entries", map[string]string{"inductor.dcr": "", "frequency": "x", "note.revision": "typed"})
	p := s.page(422, s.send("/designs/1/revisions", form), "keep")
	summary := words(p.all(withClass("errors"))[0])
	for _, want := range []string{"can’t be kept", "Winding resistance", "Switching frequency"} {
		if !strings.Contains(summary, want) {
			t.Errorf("%q lacks %q", summary, want)
		}
	}
	if attr(p.one("f-inductor.dcr"), "aria-invalid") != "true" || attr(p.one("f-note.revision"), "value") != "typed" {
		t.Error("the entry is not marked, or the note is lost")
	}
	if !strings.HasPrefix(p.title(), "Error: ") {
		t.Errorf("title %q", p.title())
	}
	stale := s.open(200, "/designs/1").form("entries", map[string]string{"version": "1", "inductor.dcr": "20m"})
	s.page(409, s.send("/designs/1/revisions", stale), "a stale keep")
	if heads, _ := s.store.Revisions(t.Context(), 1); len(heads) != 1 {
		t.Errorf("%d revisions", len(heads))
	}
}

func TestRevisionPage(t *testing.T) {
	s := seeded(t)
	s.moved(s.send("/designs/1/revisions", s.open(200, "/designs/1").form("entries", map[string]string{"switch.rds_on": "8m5", "sources.switch.rds_on": "p. 3"})))
	p := s.open(200, "/designs/1/revisions/1")
	got := p.words()
	for _, want := range []string{"95.41 %", "11 mΩ", "revision 2", "Reopen as the draft", "battery lead and fuse", "first"} {
		if !strings.Contains(got, want) {
			t.Errorf("revision 1 lacks %q", want)
		}
	}
	if strings.Contains(got, "gives other figures") {
		t.Error("the banner stands although nothing differs")
	}
	if len(p.all(withClass("f"))) > 3 || p.has("entries") {
		t.Error("a revision's entries can be typed over")
	}
	if got := s.open(200, "/designs/1/revisions/2").words(); !strings.Contains(got, "p. 3") || !strings.Contains(got, "revision 1") {
		t.Error("revision 2 lacks its source, or the way back")
	}
	if got := p.row("Loss, mW"); got[7] != "2 309" {
		t.Errorf("loss %q", got)
	}
	if got := s.open(200, "/designs/1/revisions/1?vin=14.4+V").row("Efficiency, %"); got[7] != "96.23" {
		t.Errorf("at 14.4 V: %q", got)
	}
	if got := s.open(200, "/designs/1/revisions/1?vin=11&ambient=80").words(); !strings.Contains(got, "95.41 %") || strings.Contains(got, "80 °C") {
		t.Error("a voltage that was not kept, or another ambient, is shown")
	}
	s.page(404, s.ask("GET", "/designs/1/revisions/3", ""), "no such revision")
}

func TestRevisionBanner(t *testing.T) {
	s := seeded(t)
	first, err := s.store.Revision(t.Context(), 1, 1)
	if err != nil {
		t.Fatal(err)
	}
	points, _, err := savedResults(first)
	if err != nil {
		t.Fatal(err)
	}
	points[15].Figures.Loss *= 1.01
	s.another("0", points)
	p := s.open(200, "/designs/1/revisions/2")
	if got := words(p.all(withClass("stale"))[0]); !strings.Contains(got, "Saved with model 0") || !strings.Contains(got, "gives other figures") {
		t.Errorf("banner: %s", got)
	}
	if got := p.row("Loss, mW"); got[7] != "2 332" {
		t.Errorf("shown are other figures than the saved ones: %q", got)
	}
}

func TestReopen(t *testing.T) {
	s := seeded(t)
	s.page(422, s.send("/designs/1", s.open(200, "/designs/1").form("entries", map[string]string{"switch.rds_on": "oops"})), "a wrong entry")
	where := s.moved(s.send("/designs/1/revisions/1/reopen", nil))
	p := s.open(200, where)
	if got := words(p.all(withClass("notice"))[0]); got != "Revision 1 is open as the draft." {
		t.Errorf("notice: %s", got)
	}
	if got := attr(p.one("f-switch.rds_on"), "value"); got != "11 mΩ" {
		t.Errorf("R_DS(on) is %q", got)
	}
	s.moved(s.send("/designs/1/revisions/1/reopen", nil))
	s.page(404, s.send("/designs/1/revisions/7/reopen", nil), "no such revision")
	s.page(404, s.send("/designs/7/revisions/1/reopen", nil), "no such design")
}

// payloads are texts that would run, break out of an attribute, or end a script
// element, if any place took it for markup.
var payloads = []string{
	`<script>alert(1)</script>`, `"><img src=x onerror=alert(1)>`, `'onmouseover='alert(1)`, `</title><svg onload=alert(1)>`,
	`javascript:alert(1)`, `{{7*7}}${7*7}`, `</template><iframe src=//evil.test>`, "\u202eevil", `<hx-partial hx-target="body">x`,
}

func TestHostileNamesAreText(t *testing.T) {
	s := seeded(t)
	for i, name := range payloads {
		form := s.open(200, "/designs/1").form("entries", map[string]string{
			"name": name, "note": name, "switch.part": name, "series_resistances[0].name": name, "sources.switch.rds_on": name,
			"note.revision": name + fmt.Sprint(i), "inductor.part": name, "diode.part": name,
		})
		s.moved(s.send("/designs/1/revisions", form))
		for _, path := range []string{"/", "/designs/1", fmt.Sprintf("/designs/1/revisions/%d", i+2), "/designs/1/rename"} {
			p := s.open(200, path)
			p.harmless(path, name)
			if !strings.Contains(p.words(), strings.Join(strings.Fields(name), " ")) {
				t.Errorf("%s: %q is not to be read", path, name)
			}
		}
		bad := s.open(200, "/designs/1").form("entries", map[string]string{"switch.rds_on": name, "inductor.l_curve[0][0]": name, "topology": name})
		p := s.page(422, s.send("/designs/1", bad), "a hostile value")
		p.harmless("error", name)
		s.page(422, s.send("/designs/1", s.open(200, "/designs/1").form("entries", map[string]string{"switch.rds_on": name}), liveEdit), "a live one").harmless("live", name)
		s.moved(s.send("/designs/1/revisions/1/reopen", nil))
		s.page(422, s.upload("file", `{"format":"lossbook/1","`+strings.ReplaceAll(name, `"`, `\"`)+`":1}`), "a hostile file").harmless("file", name)
	}
}

// harmless fails if a page holds an element or attribute that could only have
// come out of a stored string.
func (p page) harmless(where, name string) {
	p.t.Helper()
	for n := range p.root.Descendants() {
		switch n.Data {
		case "script":
			if !strings.HasPrefix(attr(n, "src"), "/assets/") || n.FirstChild != nil {
				p.t.Errorf("%s: %q became a script", where, name)
			}
		case "svg":
			if !inside(n, "flow") { // which is drawn here
				p.t.Errorf("%s: %q became <svg>", where, name)
			}
		case "iframe", "img":
			p.t.Errorf("%s: %q became <%s>", where, name, n.Data)
		}
		for _, a := range n.Attr {
			if strings.HasPrefix(a.Key, "on") || a.Key == "style" || strings.HasPrefix(strings.ToLower(a.Val), "javascript:") && a.Key != "value" && a.Key != "aria-label" {
				p.t.Errorf("%s: %q became the attribute %s", where, name, a.Key)
			}
		}
	}
}

// A full disk: what was typed stays on the page, with the reason.
func TestFullDisk(t *testing.T) {
	s := seeded(t)
	server := &Server{store: s.store, log: discard(), errorPage: failurePage}
	kept, _ := s.store.Design(t.Context(), 1)
	draft, _ := readDraft(kept.Draft)
	draft["switch.rds_on"] = "8m5"
	sh, err := server.openSheet(t.Context(), kept, draft, sight{})
	if err != nil {
		t.Fatal(err)
	}
	full := fmt.Errorf("%w: no room", store.ErrFull)
	w := httptest.NewRecorder()
	if err := server.notTaken(w, httptest.NewRequest("POST", "/designs/1", nil), edit{version: 1}, sh, full); err != nil {
		t.Fatal(err)
	}
	p := s.page(507, w, "a full disk")
	if attr(p.one("f-switch.rds_on"), "value") != "8m5" || !strings.Contains(p.words(), "What you typed is still on this page.") {
		t.Error("the draft is not on the page")
	}
	r := httptest.NewRequest("POST", "/designs/1", nil)
	liveEdit(r)
	if err := server.notTaken(httptest.NewRecorder(), r, edit{}, sh, full); !errors.Is(err, store.ErrFull) {
		t.Fatalf("a live edit: %v", err)
	}
	w = httptest.NewRecorder()
	server.fail(w, r, full)
	if w.Code != 507 || !strings.Contains(w.Body.String(), `hx-target="#trouble"`) || !strings.Contains(w.Body.String(), "The disk is full") {
		t.Errorf("a live edit is told %d %s", w.Code, w.Body)
	}
}
