package web

import (
	"slices"
	"strings"
	"testing"

	"golang.org/x/net/html"

	"lossbook/budget"
)

// An entry is found by what people call it: name, symbol, path, or a word of where
// a data sheet gives it.
func TestFindByWhatItIsCalled(t *testing.T) {
	s := seeded(t)
	for text, want := range map[string][]string{
		"rds":                {"f-switch.rds_on"},
		"RDS(on)":            {"f-switch.rds_on"},
		"r_ds on":            {"f-switch.rds_on"},
		"switch.rds_on":      {"f-switch.rds_on"},
		"Qg":                 {"f-switch.q_g"},
		"q_gd":               {"f-switch.q_gd"},
		"gate charge":        {"f-switch.q_g"},
		"dcr":                {"f-inductor.dcr"},
		"miller":             {"f-switch.q_gd"},
		"winding res":        {"f-inductor.dcr"},
		"inductor theta":     {"f-inductor.theta_ja"},
		"plateau":            {"f-switch.v_plateau", "f-switch.v_plateau_current"},
		"ripple ratio":       {"f-" + rippleRatio},
		"saturation":         {"f-inductor.i_sat"},
		"dead time":          {"f-drive.dead_time_on", "f-drive.dead_time_off"},
		"esr output":         {"f-output_capacitor.esr"},
		"hours":              {"add-profile"},
		"shunt resistance":   {"f-series_resistances[0].resistance"},
		"l_curve":            {"add-inductor.l_curve"},
		"sync_switch.rds_on": {"f-rectifier"},
		"at light load":      {"f-rectifier"},
		"steinmetz α":        {"f-inductor.core.alpha"},
		"θJA":                {"f-switch.theta_ja", "f-diode.theta_ja"},
	} {
		p := s.open(200, "/designs/1/find?q="+strings.ReplaceAll(strings.ReplaceAll(text, " ", "+"), "(", "%28"))
		var got []string
		for _, a := range p.all(func(n *html.Node) bool { return n.Data == "a" && strings.Contains(attr(n, "href"), "show=") }) {
			_, id, _ := strings.Cut(attr(a, "href"), "#")
			got = append(got, id)
		}
		if len(got) < len(want) || !slices.Equal(got[:len(want)], want) {
			t.Errorf("%q finds %q, want %q first", text, got[:min(len(got), 6)], want)
		}
	}
}

// Every field of the table is found by its path, and what it leads to is on the
// sheet and not folded away.
func TestEveryEntryIsFound(t *testing.T) {
	s := seeded(t)
	p := s.open(200, "/designs/1/find?q=")
	links := p.all(func(n *html.Node) bool { return n.Data == "a" && strings.Contains(attr(n, "href"), "show=") })
	fields := 0
	for _, part := range budget.Parts() {
		fields += len(part.Fields)
	}
	if want := fields + 1 + len(profileColumns); len(links) != want || !strings.Contains(p.words(), plural(want, "entry", "entries")) {
		t.Errorf("%d entries are listed, want %d", len(links), want)
	}
	if got := p.all(withClass("found"))[0]; !strings.Contains(words(got), "Synchronous rectifier, with a synchronous rectifier") {
		t.Error("it is not said how the other rectifier's entries are reached")
	}
	seen := map[string]bool{}
	for _, a := range links {
		address, id, _ := strings.Cut(attr(a, "href"), "#")
		if seen[id] {
			continue
		}
		seen[id] = true
		if len(seen)%7 > 0 && !strings.Contains(id, "winding") { // each page takes its time to be drawn
			continue
		}
		sheet := s.open(200, address)
		for n := sheet.one(id); n != nil; n = n.Parent {
			if n.Data == "details" && !hasAttr(n, "open") {
				t.Errorf("%s is folded away at %s", id, address)
			}
		}
	}
	if len(seen) < 80 {
		t.Errorf("only %d places are led to", len(seen))
	}
}

func TestFindKeepsTheView(t *testing.T) {
	s := seeded(t)
	p := s.open(200, "/designs/1?vin=11&load=50&chart=map")
	q := p.form("find", map[string]string{"q": "dcr"})
	p = s.open(200, attr(p.one("find"), "action")+"?"+q.Encode())
	links := p.all(func(n *html.Node) bool { return n.Data == "a" && strings.Contains(attr(n, "href"), "#f-inductor.dcr") })
	if len(links) != 1 || !strings.HasPrefix(attr(links[0], "href"), "/designs/1?chart=map&load=50&vin=11&show=") {
		t.Errorf("%d links to the entry", len(links))
	}
	if got := attr(p.one("find-q"), "value"); got != "dcr" {
		t.Errorf("the box holds %q", got)
	}
}

func TestFindNothing(t *testing.T) {
	s := seeded(t)
	for _, text := range []string{"xyzzy", "%3Cimg+src%3Dx%3E", "%27%22%00", "++%28%29"} {
		p := s.open(200, "/designs/1/find?q="+text)
		if text != "++%28%29" && !strings.Contains(p.words(), "No entry is called that.") || len(p.all(tag("img"))) > 0 {
			t.Errorf("%s: %.200s", text, p.words())
		}
	}
	s.open(404, "/designs/9/find?q=x")
}

func TestLiveFind(t *testing.T) {
	s := seeded(t)
	body := s.ask("GET", "/designs/1/find?q=r", "", liveEdit).Body.String()
	if got := strings.Count(body, `data-to=`); got != mostFound || strings.Contains(body, "<html") {
		t.Errorf("%d are offered, want %d", got, mostFound)
	}
	if !strings.Contains(body, `data-for="r"`) || !strings.Contains(body, "entries, the first 10 listed") {
		t.Error("it does not say what it is for, or that there are more")
	}
	if body := s.ask("GET", "/designs/1/find?q=xyzzy", "", liveEdit).Body.String(); strings.Contains(body, `data-to=`) || !strings.Contains(body, "No entry is called that.") {
		t.Error("nothing found is not said as such")
	}
}
