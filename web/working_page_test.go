package web

import (
	"slices"
	"strings"
	"testing"

	"golang.org/x/net/html"

	"lossbook/budget"
)

func TestWorkingPanel(t *testing.T) {
	s := seeded(t)
	if s.open(200, "/designs/1").has("working") {
		t.Error("a working is open that nobody asked for")
	}
	form := s.open(200, "/designs/1").form("entries", map[string]string{"sources.switch.q_gd": "data sheet, p. 3, figure 7"})
	s.moved(s.send("/designs/1", form))
	p := s.open(200, "/designs/1?load=50&working=switch.turn_on")
	panel := words(p.one("working"))
	for _, want := range []string{"Switch, turn-on", "(50 %)", "44.16", "SLUA618", "Switch: Miller charge", "data sheet, p. 3, figure 7", "no source noted"} {
		if !strings.Contains(panel, want) {
			t.Errorf("the panel lacks %q: %s", want, panel)
		}
	}
	if n := len(p.all(tag("mfrac"))); n < 4 {
		t.Errorf("%d fractions: the formulas are not set as mathematics", n)
	}
	current := p.all(func(n *html.Node) bool {
		return withClass("figure")(n) && attr(n, "aria-current") == "true"
	})
	if len(current) != 1 || words(current[0]) != "44.2" || !strings.Contains(attr(current[0], "aria-label"), "44.2 mW") {
		t.Errorf("%d cells are marked as the one that is opened", len(current))
	}
	if attr(current[0], "hx-get") != attr(p.one("working"), "data-cell") {
		t.Error("the panel does not name its cell")
	}
	closed := attr(p.all(withClass("close"))[0], "href")
	if s.open(200, strings.TrimSuffix(closed, "#ledger-title")).has("working") || !p.has("ledger-title") {
		t.Errorf("%s does not close it", closed)
	}
}

// What is open stays open over an edit and over the choice of another point.
func TestWorkingStaysOpen(t *testing.T) {
	s := seeded(t)
	p := s.open(200, "/designs/1?load=50&working=switch.conduction")
	before := words(p.one("working"))
	edited := s.page(200, s.send("/designs/1", p.form("entries", map[string]string{"switch.rds_on": "22m"}), liveEdit), "edit")
	if after := words(edited.one("working")); after == before || !strings.Contains(after, "22 mΩ") {
		t.Errorf("after an edit: %s", after)
	}
	for _, a := range p.all(func(n *html.Node) bool { return attr(n, "hx-get") != "" && n.Parent.Data == "th" }) {
		if other := s.open(200, attr(a, "hx-get"), liveEdit); !strings.Contains(words(other.one("working")), "Switch, conduction") {
			t.Errorf("%s closes it", attr(a, "hx-get"))
		}
	}
}

// Every figure leads to a working, those that are 0 to the reason; and each cell says
// what its working comes to.
func TestEveryFigureIsExplained(t *testing.T) {
	s := seeded(t)
	p := s.open(200, "/designs/1")
	cells := p.all(func(n *html.Node) bool { return n.Data == "td" && words(n) != "" && attr(n, "rowspan") == "" })
	bare := slices.DeleteFunc(cells, func(n *html.Node) bool {
		return n.FirstChild.Data == "a" || !inside(n, "ledger")
	})
	for _, n := range bare {
		t.Errorf("the figure %q leads nowhere", words(n))
	}
	stops := p.all(func(n *html.Node) bool { return withClass("figure")(n) && attr(n, "tabindex") == "" })
	if all := p.all(withClass("figure")); len(stops)*len(budget.LoadGrid()) != len(all) || len(stops) < 20 {
		t.Errorf("%d of %d figures are stops of the Tab key, want those of one load", len(stops), len(all))
	}
	zero := p.all(func(n *html.Node) bool {
		return n.Data == "a" && strings.Contains(attr(n, "hx-get"), "working=") && !withClass("figure")(n)
	})
	if len(zero) < 3 {
		t.Fatalf("%d losses that are 0 lead to a reason", len(zero))
	}
	for _, a := range zero {
		if got := words(s.open(200, attr(a, "hx-get")).one("working")); !strings.Contains(got, "= 0 W") || len(got) < 60 {
			t.Errorf("%s: %s", attr(a, "hx-get"), got)
		}
	}
}

func inside(n *html.Node, class string) bool {
	for p := n.Parent; p != nil; p = p.Parent {
		if withClass(class)(p) {
			return true
		}
	}
	return false
}

func TestNoSuchWorking(t *testing.T) {
	s := seeded(t)
	for _, key := range []string{"switch", "switch.colour", ".", "subtotal.x", "budget.x", "temperature.x", "layout.<script>alert(1)</script>"} {
		p := s.open(200, sight{working: key}.address("/designs/1"))
		if got := words(p.one("working")); !strings.Contains(got, "No such figure") || strings.Contains(got, "alert") {
			t.Errorf("%s: %s", key, got)
		}
	}
}

// workingAt reads the panel of a figure of a revision at full load.
func (s *site) workingAt(revision int, key string) page {
	s.t.Helper()
	address := sight{load: "100", working: key}.address(revisionAddress(1, revision))
	return page{s.t, s.open(200, address).one("working"), 200}
}

// A revision shows the figures that were saved. Where the model of today gives others,
// their working would be that of something else.
func TestWorkingOfARevision(t *testing.T) {
	s := seeded(t)
	if got := s.workingAt(1, "switch.conduction").words(); !strings.Contains(got, "R DS") || strings.Contains(got, "would not be") || strings.Contains(got, "Kept with") {
		t.Errorf("revision 1: %s", got)
	}
	first, err := s.store.Revision(t.Context(), 1, 1)
	if err != nil {
		t.Fatal(err)
	}
	changed := func(change func(f *Figures)) {
		t.Helper()
		points, _, err := savedResults(first)
		if err != nil {
			t.Fatal(err)
		}
		for i := range points {
			change(points[i].Figures)
		}
		s.another("0", points)
	}
	changed(func(f *Figures) { f.Items[0].Power *= 1 + 1e-7 })
	changed(func(f *Figures) { // as much more here as less there: the sums stay
		f.Items[0].Power += 1e-3
		f.Items[1].Power -= 1e-3
	})
	changed(func(f *Figures) { f.Pout, f.Loss = 2*f.Pout, 2*f.Loss })
	changed(func(f *Figures) { // a model of fewer losses, and of one that is gone
		f.Items = append(slices.Clone(f.Items[2:]), Item{Part: "switch", Kind: "ageing", Power: 1e-3})
	})
	for _, want := range []struct {
		revision  int
		key, says string
	}{
		{2, "switch.conduction", "would not be that of the figure kept"}, {2, "subtotal.switch", "would not be that of the figure kept"},
		{2, "budget.loss", "gives the same, but not from the figures kept beside it"},
		{3, "switch.turn_on", "would not be that of the figure kept"},
		{3, "subtotal.switch", "gives the same, but not from the figures kept beside it"}, {3, "budget.loss", "gives the same, but not from the figures kept beside it"},
		{4, "budget.efficiency", "gives the same, but not from the figures kept beside it"}, {4, "budget.loss", "would not be that of the figure kept"},
		{5, "switch.ageing", "has no working of it"}, {5, "switch.conduction", "no figure of that name"}, {5, "subtotal.switch", "would not be that of the figure kept"},
	} {
		got := s.workingAt(want.revision, want.key)
		if !strings.Contains(got.words(), want.says) || len(got.all(tag("math"))) > 0 {
			t.Errorf("revision %d, %s: %s", want.revision, want.key, got.words())
		}
	}
	for _, same := range []struct {
		revision  int
		key, says string
	}{
		{2, "switch.turn_off", "SLUA618"}, {2, "budget.efficiency", "P out"}, {3, "subtotal.rectifier", "added up"}, {5, "switch.turn_off", "SLUA618"},
		{5, "temperature.switch", "T a"},
	} {
		got := s.workingAt(same.revision, same.key)
		if !strings.Contains(got.words(), same.says) || !strings.Contains(got.words(), "Kept with model 0. Model "+budget.ModelVersion) || len(got.all(tag("math"))) == 0 {
			t.Errorf("revision %d, %s, the same still: %s", same.revision, same.key, got.words())
		}
	}
}

// Everything that stands between the entries and the losses has a name in words.
func TestTermsHaveWords(t *testing.T) {
	named := map[string]bool{}
	for name, d := range everyDesign(t) {
		model, err := budget.Prepare(d)
		if err != nil {
			t.Fatal(err)
		}
		var b budget.Budget
		for _, p := range budget.Grid(d) {
			model.At(p, &b)
			for _, it := range b.Items {
				w, _ := model.Working(&b, it.Part, it.Kind)
				for _, step := range w.Steps {
					for _, term := range step.Terms {
						if term.Path == "" && termWords[term.Name] == "" {
							t.Errorf("%s: %s.%s: %s has no words", name, it.Part, it.Kind, term.Name)
						}
						named[term.Name] = true
					}
				}
			}
		}
	}
	for name := range termWords {
		if !named[name] && !strings.HasPrefix(name, "P_") {
			t.Logf("%s was not met", name)
		}
	}
	if len(named) < 60 {
		t.Errorf("only %d terms were met", len(named))
	}
}
