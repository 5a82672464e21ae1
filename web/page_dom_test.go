package web

import (
	"net/http"
	"net/http/httptest"
	"net/url"
	"strings"
	"testing"

	"golang.org/x/net/html"
)

// page is an answer read as a browser reads it.
type page struct {
	t    *testing.T
	root *html.Node
	code int
}

// open reads the page at an address and checks its status.
func (s *site) open(status int, path string, changes ...func(*http.Request)) page {
	s.t.Helper()
	return s.page(status, s.ask("GET", path, "", changes...), path)
}

// send posts a form.
func (s *site) send(path string, form url.Values, changes ...func(*http.Request)) *httptest.ResponseRecorder {
	s.t.Helper()
	changes = append([]func(*http.Request){header("Content-Type", "application/x-www-form-urlencoded")}, changes...)
	return s.ask("POST", path, form.Encode(), changes...)
}

func (s *site) page(status int, w *httptest.ResponseRecorder, what string) page {
	s.t.Helper()
	if w.Code != status {
		s.t.Fatalf("%s: status %d, want %d\n%.2000s", what, w.Code, status, w.Body)
	}
	root, err := html.Parse(w.Body)
	if err != nil {
		s.t.Fatal(err)
	}
	return page{s.t, root, w.Code}
}

// moved follows a redirect after a form.
func (s *site) moved(w *httptest.ResponseRecorder) string {
	s.t.Helper()
	if w.Code != http.StatusSeeOther {
		s.t.Fatalf("status %d, want a redirect\n%.2000s", w.Code, w.Body)
	}
	return w.Header().Get("Location")
}

// all returns the elements that a condition holds for, in document order.
func (p page) all(holds func(*html.Node) bool) []*html.Node {
	var found []*html.Node
	for n := range p.root.Descendants() {
		if n.Type == html.ElementNode && holds(n) && !inTemplate(n) {
			found = append(found, n)
		}
	}
	return found
}

func tag(name string) func(*html.Node) bool { return func(n *html.Node) bool { return n.Data == name } }

func withID(id string) func(*html.Node) bool {
	return func(n *html.Node) bool { return attr(n, "id") == id }
}

func withClass(class string) func(*html.Node) bool {
	return func(n *html.Node) bool {
		for _, c := range strings.Fields(attr(n, "class")) {
			if c == class {
				return true
			}
		}
		return false
	}
}

// one returns the element with the id.
func (p page) one(id string) *html.Node {
	p.t.Helper()
	found := p.all(withID(id))
	if len(found) != 1 {
		p.t.Fatalf("%d elements have the id %q", len(found), id)
	}
	return found[0]
}

func (p page) has(id string) bool { return len(p.all(withID(id))) > 0 }

func attr(n *html.Node, name string) string {
	for _, a := range n.Attr {
		if a.Key == name {
			return a.Val
		}
	}
	return ""
}

// words is the text of an element, blanks folded.
func words(n *html.Node) string {
	var b strings.Builder
	for d := range n.Descendants() {
		if d.Type == html.TextNode {
			b.WriteString(d.Data + " ")
		}
	}
	return strings.Join(strings.Fields(strings.ReplaceAll(b.String(), "\u00a0", " ")), " ")
}

func (p page) words() string { return words(p.root) }

func (p page) title() string { return words(p.all(tag("title"))[0]) }

// row returns the cells of the ledger's row with that heading.
func (p page) row(heading string) []string {
	p.t.Helper()
	for _, tr := range p.all(tag("tr")) {
		if within(tr, withClass("flow")) {
			continue
		}
		var cells []string
		match := false
		for c := range tr.ChildNodes() {
			switch c.Data {
			case "th":
				match = words(c) == heading
			case "td":
				cells = append(cells, words(c))
			}
		}
		if match {
			return cells
		}
	}
	p.t.Fatalf("no row %q", heading)
	return nil
}

// form returns what a browser would send of the form with the id, changed.
func (p page) form(id string, changes map[string]string) url.Values {
	p.t.Helper()
	v := url.Values{}
	for n := range p.one(id).Descendants() {
		name := attr(n, "name")
		switch {
		case n.Type != html.ElementNode || name == "" || inTemplate(n):
		case n.Data == "input":
			v.Add(name, attr(n, "value"))
		case n.Data == "select":
			v.Add(name, selected(n))
		}
	}
	for name, value := range changes {
		v.Set(name, value)
	}
	return v
}

func inTemplate(n *html.Node) bool { return within(n, tag("template")) }

func within(n *html.Node, holds func(*html.Node) bool) bool {
	for p := n.Parent; p != nil; p = p.Parent {
		if holds(p) {
			return true
		}
	}
	return false
}

func selected(n *html.Node) string {
	value, first := "", true
	for o := range n.Descendants() {
		if o.Data != "option" {
			continue
		}
		chosen := false
		for _, a := range o.Attr {
			chosen = chosen || a.Key == "selected"
		}
		if first || chosen {
			value, first = attr(o, "value"), false
		}
	}
	return value
}

// liveEdit marks a request as one of the script's.
func liveEdit(r *http.Request) { r.Header.Set("HX-Request", "true") }
