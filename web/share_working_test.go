package web

import (
	"slices"
	"strings"
	"testing"

	"golang.org/x/net/html"
)

// Whoever has a link sees how each of its figures came about, as on the revision's
// own page, with where the entries come from.
func TestWorkingsBehindALink(t *testing.T) {
	s := newSite(t)
	d := sample(t, "frost")
	d.Sources = map[string]string{"switch.q_gd": "data sheet, p. 3, figure 7"}
	s.want(201, "POST", "/api/v1/designs", text(t, designRequest{d}))
	s.want(201, "POST", "/api/v1/designs/1/revisions", `{"note":"first"}`)
	at := s.shared("for Ada")
	own := func(address string) string {
		return "/designs/1/revisions/1" + strings.TrimPrefix(address, at)
	}
	link := s.open(200, at)
	figures := link.all(withClass("figure"))
	zero := link.all(func(n *html.Node) bool {
		return n.Data == "a" && strings.HasSuffix(attr(n, "href"), "#working") && !withClass("figure")(n)
	})
	set, sourced := 0, 0
	for _, a := range slices.Concat(figures, zero) {
		address := attr(a, "hx-get")
		if attr(a, "href") != address+"#working" || !strings.HasPrefix(address, at+"?") {
			t.Fatalf("a figure leads to %s", attr(a, "href"))
		}
		behind, before := s.open(200, address), s.open(200, own(address))
		panel := behind.one("working")
		const checked = " How far this was checked" // a page of the owner's
		if got := words(panel); got != strings.TrimSuffix(words(before.one("working")), checked) || !strings.Contains(got, "=") {
			t.Errorf("%s: %s", address, got)
		} else if strings.Contains(got, "data sheet, p. 3, figure 7") {
			sourced++
		}
		set += len(page{t, panel, 200}.all(tag("math")))
		if back := attr(page{t, panel, 200}.all(withClass("close"))[0], "href"); !strings.HasPrefix(back, at) {
			t.Errorf("%s closes to %s", address, back)
		}
	}
	if len(figures) < 150 || len(zero) < 3 || set < 1000 || sourced < 8 {
		t.Errorf("%d figures, %d that are 0, %d formulas, %d panels with the source of an entry", len(figures), len(zero), set, sourced)
	}
}
