package web

import (
	"bytes"
	"mime/multipart"
	"net/http"
	"net/http/httptest"
	"net/url"
	"strings"
	"testing"

	"golang.org/x/net/html"

	"lossbook/assets"
	"lossbook/store"
)

// withSamples is a site as it is on a first start.
func withSamples(t *testing.T) *site {
	t.Helper()
	s := newSite(t)
	var samples []store.NewDesign
	for _, sample := range assets.Samples() {
		d := mustRead(t, sample.JSON)
		draft, complete, err := keptAs(d)
		if err != nil {
			t.Fatal(err)
		}
		samples = append(samples, store.NewDesign{Name: d.Name, Sample: true, Draft: draft, Complete: complete})
	}
	if err := s.store.Seed(t.Context(), samples); err != nil {
		t.Fatal(err)
	}
	return s
}

func TestListShowsSamples(t *testing.T) {
	p := withSamples(t).open(200, "/")
	if got := len(p.all(withClass("badge"))); got != 3 {
		t.Errorf("%d designs wear the badge, want 3", got)
	}
	for id, want := range map[string][]string{
		"design-1": {"buck, synchronous · 48 V → 12 V, 8 A", "94.92"},
		"design-2": {"boost, diode · 12 V → 24 V, 2 A", "95.41"},
		"design-3": {"inverting buck-boost, diode · 24 V → −15 V, 1.5 A", "91.76"},
	} {
		got := words(p.one(id))
		for _, w := range append(want, "remove", "rename", "copy", "not yet") {
			if !strings.Contains(got, w) {
				t.Errorf("%s: %q lacks %q", id, got, w)
			}
		}
		if len(find(p.one(id), withClass("level"))) != 1 {
			t.Errorf("%s: no finding", id)
		}
	}
}

// find returns the elements within a node.
func find(n *html.Node, holds func(*html.Node) bool) []*html.Node {
	var found []*html.Node
	for d := range n.Descendants() {
		if d.Type == html.ElementNode && holds(d) {
			found = append(found, d)
		}
	}
	return found
}

func TestEmptyList(t *testing.T) {
	p := newSite(t).open(200, "/")
	if len(p.all(tag("table"))) != 0 || !strings.Contains(p.words(), "No designs yet") {
		t.Error("an empty list does not say so")
	}
	if p.has("start-copy") {
		t.Error("it offers to copy a design")
	}
}

func TestDeleteAndUndo(t *testing.T) {
	s := withSamples(t)
	where := s.moved(s.send("/designs/2/delete", nil))
	p := s.open(200, where)
	notice := p.all(withClass("notice"))
	if len(notice) != 1 || !strings.Contains(words(notice[0]), "Removed “Night-frost mast, siren and strobe rail”. Undo") {
		t.Fatalf("no way back is offered")
	}
	if p.has("design-2") {
		t.Error("the design is still listed")
	}
	if p := s.open(200, "/?deleted=1"); len(p.all(withClass("notice"))) != 0 {
		t.Error("an address claims a deletion that was not")
	}
	s.page(404, s.ask("GET", "/designs/2", ""), "the sheet of a deleted design")
	s.page(404, s.send("/designs/2/delete", nil), "a second delete")
	undo := find(notice[0], tag("form"))[0]
	where = s.moved(s.send(attr(undo, "action"), nil))
	if p := s.open(200, strings.Split(where, "#")[0]); !p.has("design-2") {
		t.Error("the design did not come back")
	}
	s.page(404, s.send("/designs/2/restore", nil), "a second undo")
	if p := s.open(200, "/?deleted=2"); len(p.all(withClass("notice"))) != 0 {
		t.Error("an old address claims a deletion")
	}
}

func TestRename(t *testing.T) {
	s := seeded(t)
	p := s.page(422, s.send("/designs/1/rename", url.Values{"name": {"  "}}), "no name")
	if !strings.HasPrefix(p.title(), "Error: ") || len(p.all(withClass("errors"))) != 1 {
		t.Error("an empty name is not refused clearly")
	}
	s.page(422, s.send("/designs/1/rename", url.Values{"name": {strings.Repeat("n", maxName+1)}}), "a long name")
	s.moved(s.send("/designs/1/rename", url.Values{"name": {"Mast"}}))
	if got := words(s.open(200, "/").one("design-1")); !strings.HasPrefix(got, "Mast") {
		t.Errorf("listed as %s", got)
	}
	if p := s.open(200, "/designs/1"); !strings.HasPrefix(p.title(), "Mast") || attr(p.one("f-name"), "value") != "Mast" {
		t.Error("the sheet has another name")
	}
	s.page(404, s.ask("GET", "/designs/9/rename", ""), "no such design")
	s.page(404, s.send("/designs/9/rename", url.Values{"name": {"x"}}), "no such design")
}

func TestCopy(t *testing.T) {
	s := seeded(t)
	where := s.moved(s.send("/designs/1/copy", nil))
	p := s.open(200, where)
	if !strings.HasPrefix(p.title(), "Copy of Night-frost mast") || !strings.Contains(p.words(), "95.41 %") {
		t.Errorf("the copy: %s", p.title())
	}
	if strings.Contains(p.words(), "Since revision") {
		t.Error("revisions were copied")
	}
	if where := s.moved(s.send("/designs", url.Values{"start": {"copy"}, "from": {"1"}})); where != "/designs/3" {
		t.Errorf("a copy from the list is at %s", where)
	}
	s.page(404, s.send("/designs/9/copy", nil), "no such design")
}

func TestStartFromSample(t *testing.T) {
	s := newSite(t)
	name := assets.Samples()[0].Name
	p := s.open(200, s.moved(s.send("/designs", url.Values{"start": {"sample"}, "from": {name}})))
	if got := words(p.all(withClass("head"))[0]); !strings.Contains(got, "efficiency") {
		t.Errorf("no budget: %s", got)
	}
	if len(s.open(200, "/").all(withClass("badge"))) != 0 {
		t.Error("a design of one's own wears the samples' badge")
	}
	s.page(404, s.send("/designs", url.Values{"start": {"sample"}, "from": {"../secret"}}), "no such sample")
	s.page(422, s.send("/designs", url.Values{"start": {"nothing"}}), "no such start")
}

func TestStartFromSpecification(t *testing.T) {
	s := newSite(t)
	form := url.Values{"start": {"specification"}, "name": {"Bench"}, "topology": {"buck"}, "rectifier": {"diode"}, "input.min": {"20"},
		"input.nominal": {"24x"}, "input.max": {"28"}, "output.voltage": {"5"}, "output.current": {"3"}, "frequency": {""}, rippleRatio: {"0.4"}}
	p := s.page(422, s.send("/designs", form), "a wrong specification")
	for _, path := range []string{"input.nominal", "frequency"} {
		if attr(p.one("f-"+path), "aria-invalid") != "true" {
			t.Errorf("%s is not refused", path)
		}
	}
	if attr(p.one("f-input.nominal"), "value") != "24x" || attr(p.one("f-input.min"), "aria-invalid") == "true" {
		t.Error("what was typed is lost, or what is right is refused")
	}
	form.Set("input.nominal", "24")
	form.Set("frequency", "400k")
	p = s.open(200, s.moved(s.send("/designs", form)))
	got := words(p.one("answers"))
	for _, want := range []string{"inductance for a ripple ratio of 0.4", "What the parts must stand", "Still missing for a budget", "On-resistance", "Miller charge"} {
		if !strings.Contains(got, want) {
			t.Errorf("the sheet lacks %q: %s", want, got)
		}
	}
	if strings.HasPrefix(p.title(), "Error") || len(p.all(withClass("errors"))) > 0 || len(p.all(withClass("bad"))) > 0 {
		t.Error("an unfinished design counts as wrong")
	}
	if got := words(s.open(200, "/").one("design-1")); !strings.Contains(got, "parts missing") {
		t.Errorf("listed as %s", got)
	}
}

// The inductance is V·D'·T/(r·I): 5 V · (1 − 5/24) / (0.4 · 3 A · 400 kHz).
func TestSizingOnTheSheet(t *testing.T) {
	s := newSite(t)
	form := url.Values{"start": {"specification"}, "name": {"Bench"}, "topology": {"buck"}, "rectifier": {"diode"}, "input.min": {"20"},
		"input.nominal": {"24"}, "input.max": {"28"}, "output.voltage": {"5"}, "output.current": {"3"}, "frequency": {"400k"}, rippleRatio: {"0.4"}}
	p := s.open(200, s.moved(s.send("/designs", form)))
	if got := words(p.one("answers")); !strings.Contains(got, "8.25 µH") {
		t.Errorf("the inductance is not 8.25 µH: %s", got)
	}
	if got := p.row("switch"); len(got) != 4 || got[0] != "28.0" {
		t.Errorf("the switch must stand %q", got)
	}
}

// upload sends a file as the form of the list does.
func (s *site) upload(field, content string) *httptest.ResponseRecorder {
	s.t.Helper()
	return s.uploadAs("<img src=x onerror=alert(1)>.json", field, content)
}

func (s *site) uploadAs(name, field, content string) *httptest.ResponseRecorder {
	s.t.Helper()
	var body bytes.Buffer
	form := multipart.NewWriter(&body)
	part, err := form.CreateFormFile(field, name)
	if err != nil {
		s.t.Fatal(err)
	}
	part.Write([]byte(content))
	form.Close()
	return s.ask("POST", "/designs/upload", body.String(), header("Content-Type", form.FormDataContentType()))
}

func TestUpload(t *testing.T) {
	s := newSite(t)
	frost := text(t, sample(t, "frost"))
	p := s.open(200, s.moved(s.upload("file", frost)))
	if !strings.Contains(p.words(), "95.41 %") {
		t.Error("the file's design has no budget")
	}
	for content, want := range map[string][]string{
		"":           {"empty"},
		"{":          {"ends before"},
		frost + "{}": {"second value"},
		`{"format":"lossbook/1","name":"x","Topology":"buck","frequency":"fast","switch":{"rds_on":-1}}`: {"Topology", "frequency", "switch.rds_on"},
		`{"name":"x"}`: {"format"},
	} {
		p := s.page(422, s.upload("file", content), content)
		for _, w := range want {
			if got := words(p.all(withClass("errors"))[0]); !strings.Contains(got, w) {
				t.Errorf("%.40q: %q does not name %q", content, got, w)
			}
		}
	}
	p = s.open(200, s.moved(s.upload("file", `{"format":"lossbook/1","name":"Half","topology":"boost","rectifier":"diode"}`)))
	if !strings.HasPrefix(p.title(), "Half") || strings.HasPrefix(p.title(), "Error") {
		t.Error("an unfinished file is refused")
	}
	s.page(422, s.upload("other", frost), "no file")
	if p := s.page(422, s.uploadAs("", "file", ""), "none chosen"); !strings.Contains(p.words(), "Choose a design file") {
		t.Error("choosing no file is not said as such")
	}
	s.page(415, s.send("/designs/upload", url.Values{"file": {"x"}}), "no multipart")
	s.page(413, s.upload("file", strings.Repeat(" ", maxFile+1)), "a large file")
	if list, _ := s.store.Designs(t.Context()); len(list) != 2 {
		t.Errorf("%d designs are kept, want 2", len(list))
	}
}

func TestErrorPages(t *testing.T) {
	s := seeded(t)
	for _, c := range []struct {
		status int
		w      *httptest.ResponseRecorder
	}{
		{404, s.ask("GET", "/nowhere", "")},
		{404, s.ask("GET", "/designs/1/revisions/7", "")},
		{405, s.ask("PUT", "/designs/1", "")},
		{403, s.ask("GET", "/", "", func(r *http.Request) { r.Host = "evil.test" })},
	} {
		p := s.page(c.status, c.w, "error")
		if !strings.HasPrefix(p.title(), "Error: ") || len(p.all(tag("main"))) != 1 || len(p.all(tag("h1"))) != 1 {
			t.Errorf("%d: %s", c.status, p.title())
		}
	}
	if body := s.ask("GET", "/designs/9", "", liveEdit).Body.String(); strings.Contains(body, "<html") || !strings.Contains(body, `hx-target="#trouble"`) {
		t.Error("a live request gets a page into a page")
	}
}
