package web

import (
	"net/url"
	"strings"
	"testing"

	"golang.org/x/net/html"
)

const sharePath = "/designs/1/revisions/1/share"

// makes sends the form for a link, as it stands on the revision's page.
func (s *site) makes(note string) page {
	s.t.Helper()
	p := s.open(200, "/designs/1/revisions/1")
	forms := p.all(func(n *html.Node) bool { return n.Data == "form" && attr(n, "action") == sharePath })
	if len(forms) != 1 || attr(forms[0], "method") != "post" || attr(p.one("f-share.note"), "name") != "note" {
		s.t.Fatalf("%d forms for a link", len(forms))
	}
	return s.page(201, s.send(sharePath, url.Values{"note": {note}}), "a new link")
}

func TestMakeLink(t *testing.T) {
	s := seeded(t)
	p := s.makes("  for Ada ")
	input := p.one("link")
	at, ours := strings.CutPrefix(attr(input, "value"), "http://"+testHost)
	if !ours {
		t.Fatalf("the link is %q", attr(input, "value"))
	}
	has := map[string]bool{}
	for _, a := range input.Attr {
		has[a.Key] = true
	}
	if !has["readonly"] || !has["autofocus"] || !has["data-link"] || attr(input, "type") != "text" {
		t.Errorf("its input is %v", input.Attr)
	}
	s.open(200, at)
	links := words(p.one("links"))
	for _, want := range []string{"on this machine only", "shown this once", "for Ada", "Revoke"} {
		if !strings.Contains(links, want) {
			t.Errorf("%q is not said: %s", want, links)
		}
	}
	again := s.open(200, "/designs/1/revisions/1")
	if again.has("link") || strings.Contains(again.words(), at) || !strings.Contains(words(again.one("links")), "for Ada") {
		t.Error("the link is shown again, or not listed")
	}
	if where := s.moved(s.ask("GET", sharePath, "")); where != "/designs/1/revisions/1#links" {
		t.Errorf("the address that made it leads to %s", where)
	}
}

// The way to the links stands with the ways to take the table along.
func TestTakeAlongLeadsToTheLinks(t *testing.T) {
	s := seeded(t)
	take := s.open(200, "/designs/1/revisions/1").all(withClass("take"))
	if len(take) != 1 || !strings.Contains(words(take[0]), "CSV · workbook · design.json · paper · link for a colleague") {
		t.Errorf("%d places to take along", len(take))
	}
	for _, path := range []string{"/designs/1", s.shared("")} {
		p := s.open(200, path)
		if p.has("links") || strings.Contains(p.words(), "link for a colleague") {
			t.Errorf("%s offers a link", path)
		}
	}
}

// A script that asks for another point gets the links too: they stay.
func TestLinksStayWhileLooking(t *testing.T) {
	s := seeded(t)
	s.shared("for Ada")
	p := s.open(200, "/designs/1/revisions/1?vin=14.4+V", liveEdit)
	made := p.one("link-made")
	kept := false
	for _, a := range made.Attr {
		kept = kept || a.Key == "hx-morph-skip-children"
	}
	if !kept || !strings.Contains(words(p.one("links")), "for Ada") {
		t.Errorf("links: %s", words(p.one("links")))
	}
}

func TestRevokeLink(t *testing.T) {
	s := seeded(t)
	gone, kept := s.shared("gone"), s.shared("kept")
	p := s.open(200, "/designs/1/revisions/1")
	buttons := p.all(func(n *html.Node) bool { return strings.HasPrefix(attr(n, "aria-label"), "Revoke the link ") })
	if len(buttons) != 2 || !strings.HasPrefix(attr(buttons[1], "aria-label"), "Revoke the link gone, ") {
		t.Fatalf("%d buttons", len(buttons))
	}
	where := s.moved(s.send(attr(buttons[1].Parent, "action"), nil))
	if where != "/designs/1/revisions/1#links" {
		t.Errorf("sent on to %s", where)
	}
	s.want(404, "GET", gone, "")
	s.want(200, "GET", kept, "")
	p = s.open(200, "/designs/1/revisions/1")
	if got := words(p.one("links")); strings.Count(got, "Revoke") != 1 || !strings.Contains(got, "revoked ") {
		t.Errorf("links: %s", got)
	}
	s.page(404, s.send(sharePath+"/9/revoke", nil), "no such link")
	s.page(404, s.send("/designs/1/revisions/2/share/2/revoke", nil), "no such revision")
	s.page(404, s.send("/designs/1/revisions/2/share", nil), "a link to no revision")
	s.want(200, "GET", kept, "")
}

func TestLinkWithTooLongANote(t *testing.T) {
	s := seeded(t)
	long := strings.Repeat("ß", maxShareNote+1)
	p := s.page(422, s.send(sharePath, url.Values{"note": {long}}), "a long note")
	field := p.one("f-share.note")
	if attr(field, "value") != long || attr(field, "aria-invalid") != "true" || !strings.HasPrefix(p.title(), "Error: ") {
		t.Error("the note is lost or not marked")
	}
	if got := words(p.one("links")); !strings.Contains(got, "can’t be made yet") || !strings.Contains(got, "at most 200") {
		t.Errorf("said: %s", got)
	}
	list, err := s.store.Shares(t.Context(), 1, 1)
	if err != nil || len(list) != 0 {
		t.Errorf("%d links were made (%v)", len(list), err)
	}
}

func TestHostileNotesOfLinks(t *testing.T) {
	s := seeded(t)
	for _, note := range append(hostile, payloads...) {
		if len([]rune(note)) > maxShareNote {
			continue
		}
		p := s.makes(note)
		p.harmless("links", note)
		s.open(200, strings.TrimPrefix(attr(p.one("link"), "value"), "http://"+testHost)).harmless("a link", note)
	}
	list, err := s.store.Shares(t.Context(), 1, 1)
	if err != nil || len(list) < 15 {
		t.Errorf("only %d notes were tried (%v)", len(list), err)
	}
}
