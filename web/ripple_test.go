package web

import (
	"net/url"
	"strings"
	"testing"

	"golang.org/x/net/html"
)

// A wrong ripple ratio is marked where it is typed: where a design is started, on a
// sheet without a budget, and on one that has a budget.
func TestWrongRippleRatio(t *testing.T) {
	s := seeded(t)
	marked := func(p page) {
		t.Helper()
		f := p.one("f-" + rippleRatio)
		told := ""
		for _, id := range strings.Fields(attr(f, "aria-describedby")) {
			told += words(p.one(id)) + " "
		}
		if attr(f, "aria-invalid") != "true" || attr(f, "value") != "3" || !strings.Contains(told, "must be above 0 and at most 2") {
			t.Errorf("the field holds %q and says %q", attr(f, "value"), told)
		}
		if folds := p.all(func(n *html.Node) bool { return n.Data == "details" && holds(n, f) && !unfolded(n) }); len(folds) > 0 {
			t.Error("the field is folded away")
		}
		summary := p.all(withClass("errors"))
		if len(summary) != 1 || !strings.Contains(words(summary[0]), "Ripple ratio wanted : must be above 0") || !strings.HasPrefix(p.title(), "Error: ") {
			t.Errorf("%d summaries, title %q", len(summary), p.title())
		}
	}
	form := url.Values{"start": {"specification"}, "name": {"Bench"}, "topology": {"buck"}, "rectifier": {"diode"}, "input.min": {"20"},
		"input.nominal": {"24"}, "input.max": {"28"}, "output.voltage": {"5"}, "output.current": {"3"}, "frequency": {"400k"}, rippleRatio: {"3"}}
	marked(s.page(422, s.send("/designs", form), "a new design"))
	form.Set(rippleRatio, "0.4")
	at := s.moved(s.send("/designs", form))
	for _, sheet := range []string{at, "/designs/1"} {
		entries := s.open(200, sheet).form("entries", map[string]string{rippleRatio: "3"})
		marked(s.page(422, s.send(sheet, entries), "an edit"))
		live := s.page(422, s.send(sheet, entries, liveEdit), "a live edit")
		if attr(live.one("f-"+rippleRatio), "aria-invalid") != "true" {
			t.Error("a live edit does not mark it")
		}
	}
	if got := s.open(200, "/designs/1"); !strings.Contains(words(got.all(withClass("head"))[0]), "95.41 %") || len(got.all(withClass("stale"))) > 0 {
		t.Error("a budget that does not need it is held back")
	} else if changes := got.changed(); changes != "Ripple ratio wanted not given 3" {
		t.Errorf("changes: %q", changes)
	}
	s.moved(s.send("/designs/1/revisions", s.open(200, "/designs/1").form("entries", map[string]string{rippleRatio: "0.5"})))
}

func holds(n, below *html.Node) bool {
	for p := below.Parent; p != nil; p = p.Parent {
		if p == n {
			return true
		}
	}
	return false
}

func unfolded(n *html.Node) bool {
	for _, a := range n.Attr {
		if a.Key == "open" {
			return true
		}
	}
	return false
}
