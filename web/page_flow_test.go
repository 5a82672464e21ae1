package web

import (
	"math"
	"slices"
	"strconv"
	"strings"
	"testing"

	"golang.org/x/net/html"

	"lossbook/web/view"
)

// shareOf reads a place or a width of the strip.
func shareOf(t *testing.T, n *html.Node, name string) float64 {
	t.Helper()
	v, err := strconv.ParseFloat(strings.TrimSuffix(attr(n, name), "%"), 64)
	if err != nil || !strings.HasSuffix(attr(n, name), "%") {
		t.Fatalf("%s is %q", name, attr(n, name))
	}
	return v / 100
}

// point returns the figures of the first design at full load and the voltage.
func (s *site) point(vin float64) *Point {
	s.t.Helper()
	d, err := s.store.Design(s.t.Context(), 1)
	if err != nil {
		s.t.Fatal(err)
	}
	design, err := readDesign(d.Complete)
	if err != nil {
		s.t.Fatal(err)
	}
	p, err := paint(s.t.Context(), design, sight{vin: strconv.FormatFloat(vin, 'g', -1, 64)})
	if err != nil {
		s.t.Fatal(err)
	}
	return p.chosen()
}

// The strip is as wide as the losses are, on every page that draws it.
func TestFlowIsTrue(t *testing.T) {
	s := seeded(t)
	q := s.point(12)
	s.moved(s.send("/designs/1/revisions", s.open(200, "/designs/1").form("entries", nil)))
	for _, path := range []string{"/designs/1", "/designs/1/revisions/1", s.shared("")} {
		p := s.open(200, path)
		var powers, widths []float64
		for _, it := range q.Items {
			if it.Power > 0 {
				powers = append(powers, it.Power/q.Loss)
			}
		}
		end := 0.0
		for _, rect := range p.all(func(n *html.Node) bool { return n.Data == "rect" && attr(n, "height") == "32" }) {
			if from := shareOf(t, rect, "x"); math.Abs(from-end) > 2e-5 {
				t.Errorf("%s: an item begins at %g, the one before it ends at %g", path, from, end)
			}
			widths = append(widths, shareOf(t, rect, "width"))
			end = shareOf(t, rect, "x") + shareOf(t, rect, "width")
		}
		if !slices.EqualFunc(powers, widths, func(a, b float64) bool { return math.Abs(a-b) < 1e-5 }) || math.Abs(end-1) > 2e-5 {
			t.Errorf("%s: widths %v for shares %v, up to %g", path, widths, powers, end)
		}
		lost := p.all(withClass("lost"))
		if len(lost) != 1 || math.Abs(shareOf(t, lost[0], "width")-q.Loss/q.Pin) > 1e-5 {
			t.Errorf("%s: the loss is not drawn as wide as it is of the input", path)
		}
		strip := p.all(func(n *html.Node) bool { return attr(n, "role") == "img" })[0]
		for _, want := range []string{"50.31 W in, 48.00 W out, 95.41 %, 2.31 W lost, 4.59 % of the input", "Switch 0.408 W · 18 %", "Capacitors 0.053 W · 2.3 %", "Copper and shunts 0.302 W · 13 %"} {
			if got := strings.ReplaceAll(attr(strip, "aria-label"), "\u00a0", " "); !strings.Contains(got, want) {
				t.Errorf("%s: %q lacks %q", path, got, want)
			}
		}
	}
}

// Its table holds the same figures as the column of the ledger.
func TestFlowIsTheLedgersColumn(t *testing.T) {
	p := seeded(t).open(200, "/designs/1?load=50")
	compared := 0
	for n := range p.one("flow-numbers").Descendants() {
		if n.Data != "tr" {
			continue
		}
		cells := strings.Fields(strings.ReplaceAll(words(n), " · ", " "))
		for _, heading := range []string{"Switch", "conduction", "turn-off", "Inductor", "core", "battery lead and fuse", "gate regulator"} {
			first := strings.Fields(heading)
			if slices.Equal(cells[:min(len(first), len(cells))], first) && cells[len(first)] == p.row(heading)[5] {
				compared++
			}
		}
	}
	if compared != 7 { // conduction of the rectifier reads otherwise
		t.Errorf("%d rows agree with the ledger", compared)
	}
}

func TestFlowSaysWhyThereIsNone(t *testing.T) {
	s := seeded(t)
	for path, why := range map[string]string{
		"/designs/1?vin=30":                           "a boost stage gives only more than its input",
		"/designs/1/revisions/1?load=20&vin=10.5+V":   "",
		"/designs/1?vin=11&ambient=60&load=10":        "",
		"/designs/1?vin=12&load=100&ambient=200":      "no watt flow, whatever the state",
		"/designs/1?vin=1.5&ambient=25&load=100":      "no watt flow, whatever the state",
		"/designs/1?working=switch.conduction&vin=13": "",
	} {
		p := s.open(200, path)
		said := words(p.all(withClass("flow"))[0])
		drawn := len(p.all(func(n *html.Node) bool { return attr(n, "role") == "img" }))
		if why == "no watt flow, whatever the state" {
			why = words(p.all(withClass("none"))[0])
		}
		switch {
		case why == "" && drawn != 1, why != "" && drawn != 0:
			t.Errorf("%s: %d strips", path, drawn)
		case why != "" && !strings.Contains(said, "No watt flow at this point: "+why):
			t.Errorf("%s: %s", path, said)
		}
	}
}

// Names keep apart at the width that they are laid out for, however the losses fall.
func TestFlowNamesStayApart(t *testing.T) {
	titles := []string{"Switch", "Rectifier", "Inductor", "Capacitors", "Drive and controller", "Copper and shunts"}
	tried := 0
	for _, powers := range [][]float64{
		{1, 1, 1, 1, 1, 1}, {1e-9, 1e-9, 1e-9, 1e-9, 1e-9, 1}, {1, 1e-9, 1e-9, 1e-9, 1e-9, 1e-9}, {0, 0, 0, 0, 0, 3},
		{1, 0, 0, 1e-6, 0, 1}, {5000, 1, 1, 1, 1, 5000}, {1e-5, 2e-5, 3e-5, 1e-5, 1e-5, 1e-5}, {3, 1e-3, 3, 1e-3, 1e-3, 1e-3},
	} {
		loss := 0.0
		for _, v := range powers {
			loss += v
		}
		q := &Figures{Loss: loss, Pin: 10 * loss, Pout: 9 * loss}
		for i, g := range groups {
			q.Items = append(q.Items, Item{Part: g.parts[0], Kind: "conduction", Power: powers[i]})
		}
		p := picture{columns: make([]Point, 8), spot: spot{load: 7}}
		p.columns[7].Figures = q
		f := p.flow()
		for _, l := range f.Layouts {
			tried++
			width := map[string]float64{"mid": 640, "wide": 900}[l.Class]
			ends := map[string]float64{}
			for i, n := range l.Names {
				x, _ := strconv.ParseFloat(strings.TrimSuffix(n.X, "%"), 64)
				from := x / 100 * width
				if from < ends[n.NameY] || from+nameWide(n)-apart > width+1 || !slices.Contains(titles, n.Name) {
					t.Errorf("%v at %g px: %s stands from %g on, the one before ends at %g", powers, width, n.Name, from, ends[n.NameY])
				}
				ends[n.NameY] = from + nameWide(n) - apart
				if (len(n.Leader) == 0) != (partWidth(f, i)*width >= nameWide(n)) {
					t.Errorf("%v at %g px: %s has %d strokes", powers, width, n.Name, len(n.Leader))
				}
			}
		}
		if f.Listed {
			t.Errorf("%v: the names have no room", powers)
		}
	}
	if tried != 16 {
		t.Errorf("%d layouts", tried)
	}
}

// partWidth is the width of a part.
func partWidth(f *view.Flow, i int) (sum float64) {
	for _, it := range f.Parts[i].Items {
		w, _ := strconv.ParseFloat(strings.TrimSuffix(it.Width, "%"), 64)
		sum += w / 100
	}
	return sum
}
