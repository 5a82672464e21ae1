package web

import (
	"bytes"
	"encoding/csv"
	"fmt"
	"net/http/httptest"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"golang.org/x/net/html"

	"lossbook/assets"
	"lossbook/budget"
	"lossbook/store"
)

// revise changes the first design and keeps it as its next revision.
func (s *site) revise(note string, change func(*budget.Design)) {
	s.t.Helper()
	now := read[designResource](s.t, s.want(200, "GET", "/api/v1/designs/1", ""))
	change(now.Design)
	s.want(200, "PUT", "/api/v1/designs/1", text(s.t, changeRequest{now.Design, &now.Version}))
	s.want(201, "POST", "/api/v1/designs/1/revisions", text(s.t, revisionRequest{note}))
}

// compared is a site with five revisions of one design, and one of another.
func compared(t *testing.T) *site {
	s := seeded(t)
	s.revise("lower resistance", func(d *budget.Design) {
		d.Switch.RdsOn, d.Switch.QGD = budget.N(6.8e-3), budget.N(9e-9)
		d.Sources = map[string]string{"switch.rds_on": "page 2"}
	})
	s.revise("slower", func(d *budget.Design) { d.Frequency = budget.N(200e3) })
	s.revise("one shunt less", func(d *budget.Design) { d.Series = d.Series[:len(d.Series)-1] })
	s.revise("warmer", func(d *budget.Design) { d.Ambient = budget.N(95) })
	s.want(201, "POST", "/api/v1/designs", text(t, designRequest{sample(t, "radar")}))
	s.want(201, "POST", "/api/v1/designs/2/revisions", `{"note":"another"}`)
	return s
}

const five = "/compare?r=1.1&r=1.2&r=1.3&r=1.4&r=1.5"

func (p page) lacks(texts ...string) {
	p.t.Helper()
	for _, text := range texts {
		if !strings.Contains(p.words(), text) {
			p.t.Errorf("the page lacks %q", text)
		}
	}
}

func TestCompareConditionsFirst(t *testing.T) {
	s := compared(t)
	p := s.open(200, "/compare?r=1.1&r=1.2")
	p.lacks("The conditions are the same: topology boost, input range 10.5 V / 12 V / 14.4 V", "those that were saved with the revisions", "mW, at 12 V in, 2 A (100 %), 45 °C")
	if strings.Contains(p.words(), "all under those") {
		t.Error("the same conditions are offered although they don't differ")
	}
	p = s.open(200, "/compare?r=1.2&r=1.5")
	p.lacks("The conditions differ: ambient and switching frequency.", "each under its own", "all under those of rev. 2", "the switching frequency belongs to each design",
		"each at its own nominal input, 100 % of its full load and its own ambient", "those that were saved")
	if got := p.row("Ambient"); !slices.Equal(got, []string{"45 °C", "95 °C"}) {
		t.Errorf("ambient %q", got)
	}
	own := p.row("Loss, mW")[1]
	p = s.open(200, "/compare?r=1.2&r=1.5&under=1")
	p.lacks("computed anew with today’s model, version "+budget.ModelVersion, "at the same points, because not every revision was saved with these points", "at 12 V in, 2 A (100 %), 45 °C")
	if got := p.row("Loss, mW")[1]; got == own {
		t.Errorf("at 45 °C it loses %s mW, as at 95 °C", got)
	}
	s.open(200, "/compare?r=1.1&r=2.1").lacks("The conditions differ: topology, input range, output voltage, full load, ambient and switching frequency.")
	s.open(200, "/compare?r=1.1&r=2.1&under=1").lacks("r1 has no figures at every load: a buck stage gives only less than its input")
	s.open(200, "/compare?r=1.1&r=1.2&vin=13.2+V").lacks("at 13.2 V in", "computed anew")
}

func TestCompareChangedEntries(t *testing.T) {
	s := seeded(t)
	typed := func(value, note string) {
		form := s.open(200, "/designs/1").form("entries", map[string]string{"drive.r_source": value, "note.revision": note})
		s.moved(s.send("/designs/1/revisions", form))
	}
	typed("4k7", "as a code")
	typed("4700", "in full")
	p := s.open(200, "/compare?r=1.2&r=1.3")
	p.lacks("No differences.")
	if p.has("entries") || len(p.all(withClass("other"))) > 0 {
		t.Error("4k7 and 4700 are told apart")
	}
	p = s.open(200, "/compare?r=1.1&r=1.2")
	if got := p.row("R src Gate drive: Driver, sourcing"); len(got) != 2 || got[1] != "4.7 kΩ" {
		t.Errorf("%q", got)
	}
	changed := p.all(func(n *html.Node) bool { return attr(n, "aria-labelledby") == "changed-title" })[0]
	if got := len((page{t, changed, 200}).all(withClass("other"))); got != 1 {
		t.Errorf("%d entries differ, want that one", got)
	}
	p.lacks("entries are unchanged. show all")
	all := s.open(200, "/compare?r=1.1&r=1.2&all=1")
	all.lacks("show only what changed")
	if len(all.row("Topology")) != 2 || len(all.row("L Inductor: Inductance")) != 2 {
		t.Error("not all entries are shown")
	}
	s.revise("with a source", func(d *budget.Design) { d.Sources = map[string]string{"inductor.dcr": "page 9"} })
	if got := s.open(200, "/compare?r=1.3&r=1.4").row("Source of Inductor: Winding resistance"); !slices.Equal(got, []string{"not given", "page 9"}) {
		t.Errorf("%q", got)
	}
}

func TestCompareIsPinned(t *testing.T) {
	s := compared(t)
	before := s.want(200, "GET", five, "").Body.String()
	s.revise("later", func(d *budget.Design) { d.Name, d.Switch.RdsOn, d.Ambient = "Renamed", budget.N(0.1), budget.N(10) })
	if after := s.want(200, "GET", five, "").Body.String(); after != before {
		t.Error("a comparison changed with a later edit")
	}
}

func TestCompareOtherModels(t *testing.T) {
	s := seeded(t)
	points := computed(t, sample(t, "frost")).Points
	for i := range points {
		points[i].Loss *= 2
	}
	s.another("0.9", points)
	p := s.open(200, "/compare?r=1.1&r=1.2")
	p.lacks("The conditions differ: model version.", "computed anew with today’s model, version "+budget.ModelVersion+", each revision at the same points, because the revisions were saved with different versions of the model")
	if got := p.row("Loss, mW"); got[2] != "0" {
		t.Errorf("the same design differs by %s under one model", got[2])
	}
	p = s.open(200, "/compare?r=1.2&r=1.2")
	p.lacks("No differences.", "saved with the revisions")
	if got := p.row("Loss, mW"); got[0] == "2"+thin+"308.9" {
		t.Error("shown are other figures than the saved ones")
	}
}

func TestCompareBaseline(t *testing.T) {
	s := compared(t)
	there, back := s.open(200, "/compare?r=1.1&r=1.2"), s.open(200, "/compare?r=1.1&r=1.2&base=2")
	for _, head := range []string{"Switch", "conduction", "Loss, mW", "Efficiency, %", "Switch, °C"} {
		a, b := there.row(head), back.row(head)
		if a[0] != b[1] || a[1] != b[0] {
			t.Errorf("%s: %q and %q", head, a, b)
		}
		if flipped := strings.NewReplacer("+", minus, minus, "+").Replace(a[2]); flipped != b[2] || a[2] == "0" {
			t.Errorf("%s differs by %s, and by %s the other way", head, a[2], b[2])
		}
	}
	back.lacks("rev. 1 against rev. 2: more efficient at", "less efficient at", "A difference is the revision minus the baseline")
	if got := back.all(withClass("sides")); len(got) != 1 || !strings.Contains(words(got[0]), "make it the baseline") {
		t.Error("the baseline can't be chosen")
	}
}

func TestCompareFindings(t *testing.T) {
	p := compared(t).open(200, "/compare?r=1.1&r=1.5")
	p.lacks("Findings gained and lost", "gained")
	if p := compared(t).open(200, "/compare?r=1.5&r=1.1"); !strings.Contains(p.words(), "lost") {
		t.Error("what is gained one way is not lost the other")
	}
}

func TestCompareBadAddresses(t *testing.T) {
	s := compared(t)
	for address, want := range map[string]string{
		"/compare": "names 0 revisions: a comparison holds 2 to 5", "/compare?r=1.1": "names 1 revision", five + "&r=2.1": "names 6 revisions",
		"/compare?r=1.1&r=x": "“x” names no revision", "/compare?r=1.1&r=1.2&vin=1e99": "vin", "/compare.csv?r=1.1": "names 1 revision",
	} {
		if p := s.open(422, address); !strings.Contains(p.words(), want) || !strings.HasPrefix(p.title(), "Error: ") {
			t.Errorf("%s: %s", address, p.words())
		}
	}
	for _, address := range []string{"/compare?r=1.1&r=1.9", "/compare?r=1.1&r=7.1", "/compare.csv?r=1.9&r=1.1"} {
		if p := s.open(404, address); !strings.Contains(p.words(), "There is no revision") {
			t.Errorf("%s: %s", address, p.words())
		}
	}
}

// tables reads the rows of the page's tables that the file holds too: heading,
// figures, and which of them are marked.
func (p page) tables(class string) (rows [][]string) {
	for _, t := range p.all(func(n *html.Node) bool { return n.Data == "table" && attr(n, "class") == class }) {
		for tr := range t.Descendants() {
			if tr.Data != "tr" || tr.Parent.Data != "tbody" {
				continue
			}
			var row []string
			for cell := range tr.ChildNodes() {
				if cell.Type == html.ElementNode {
					row = append(row, words(cell))
				}
			}
			rows = append(rows, row)
		}
	}
	return rows
}

// machine is how a file writes what a page shows; words has folded the blanks
// between digits.
func machine(shown string) string {
	if shown != "" && strings.Trim(shown, " 0123456789.+±"+minus) == "" {
		return strings.NewReplacer(" ", "", "+", "", "±", "", minus, "-").Replace(shown)
	}
	return strings.TrimLeft(shown, "'")
}

func TestCompareFileEqualsPage(t *testing.T) {
	s := compared(t)
	checked := 0
	for _, query := range []string{"?r=1.1&r=1.2", "?r=1.1&r=1.2&r=1.3&r=1.4&r=1.5&base=3", "?r=1.5&r=2.1", "?r=1.4&r=1.1&all=1&under=2&vin=highest"} {
		w := s.want(200, "GET", "/compare.csv"+query, "")
		records, err := csv.NewReader(bytes.NewReader(w.Body.Bytes())).ReadAll()
		if err != nil {
			t.Fatal(err)
		}
		for _, part := range budget.LoadGrid() {
			p := s.open(200, "/compare"+query+"&load="+loadShare(part))
			checked += samePage(t, p, records, loadShare(part))
		}
	}
	if checked < 5000 {
		t.Errorf("only %d cells were compared", checked)
	}
}

// samePage compares the page at one load with the file's rows of it, in order.
func samePage(t *testing.T, p page, records [][]string, load string) (checked int) {
	t.Helper()
	sides := 1 + (len(records[0])-6)/3
	var losses, entries [][]string
	for _, record := range records[1:] {
		switch {
		case record[1] == load:
			losses = append(losses, record)
		case record[1] == "":
			entries = append(entries, record)
		}
	}
	shown := p.tables("ledger beside")
	if want := len(losses) * sides; len(shown) != want { // one table of this load, and one over the load for each other side
		t.Fatalf("the page has %d rows of figures, the file %d", len(shown), want)
	}
	for i, record := range losses {
		if got := shown[i][0]; !strings.HasSuffix(record[2], got) {
			t.Errorf("row %q of the page is %q in the file", got, record[2])
		}
		if len(shown[i]) != 2+3*(sides-1) {
			t.Fatalf("%s has %d cells", record[2], len(shown[i]))
		}
		for n, cell := range shown[i][1:] {
			if checked++; machine(cell) != record[4+n] {
				t.Errorf("%s at %s %%: the page has %q, the file %q", record[2], load, cell, record[4+n])
			}
		}
		for side := 1; side < sides; side++ {
			column := 1 + slices.IndexFunc(budget.LoadGrid(), func(part float64) bool { return loadShare(part) == load })
			over := shown[side*len(losses)+i][column]
			if checked++; machine(over) != record[4+3*side-1] {
				t.Errorf("%s over the load at %s %%: the page has %q, the file %q", record[2], load, over, record[4+3*side-1])
			}
		}
	}
	listed := p.tables("beside entries")
	if len(listed) != len(entries) {
		t.Fatalf("the page has %d rows of entries, the file %d", len(listed), len(entries))
	}
	for i, record := range entries {
		for side, cell := range listed[i][1:] {
			column := max(4, 4+3*side-2)
			want := strings.TrimLeft(strings.TrimSpace(record[column]), "'")
			if side > 0 {
				want = strings.TrimSpace(want + " " + record[column+1])
			}
			if checked++; machine(cell) != strings.Join(strings.Fields(want), " ") {
				t.Errorf("%s: the page has %q, the file %q", record[2], cell, want)
			}
		}
	}
	return checked
}

func TestCompareMarksReachTheFile(t *testing.T) {
	s := seeded(t)
	s.revise("a short curve", func(d *budget.Design) {
		d.Inductor.ISat, d.Inductor.SatDrop = budget.Num{}, budget.Num{}
		d.Inductor.LCurve = budget.Curve{{0, 22e-6}, {1, 21e-6}}
	})
	p := s.open(200, "/compare?r=1.1&r=1.2")
	marked := len(p.all(withClass("mark")))
	if marked == 0 || !strings.Contains(p.words(), "† outside a curve") {
		t.Fatal("nothing is marked")
	}
	_, rows := table(t, s.want(200, "GET", "/compare.csv?r=1.1&r=1.2", "").Body.Bytes())
	found := 0
	for _, row := range rows {
		if row["load_%"] == "100" && row["marks"] == "rev. 2" {
			found++
		}
	}
	if found != marked {
		t.Errorf("%d marks on the page, %d in the file", marked, found)
	}
}

func TestCompareHostileNames(t *testing.T) {
	s := seeded(t)
	for i, name := range payloads {
		s.want(201, "POST", "/api/v1/designs", text(t, designRequest{sample(t, "radar")}))
		id := fmt.Sprint(i + 2)
		form := s.open(200, "/designs/"+id).form("entries", map[string]string{"name": name, "note": name, "switch.part": name,
			"series_resistances[0].name": name, "sources.switch.rds_on": name, "note.revision": name})
		s.moved(s.send("/designs/"+id+"/revisions", form))
		for _, path := range []string{"/compare?r=1.1&r=" + id + ".1", "/compare/choose?r=" + id + ".1"} {
			p := s.open(200, path)
			p.harmless(path, name)
			if !strings.Contains(p.words(), strings.Join(strings.Fields(name), " ")) {
				t.Errorf("%s: %q is not to be read", path, name)
			}
		}
		if w := s.ask("GET", "/compare?r=1.1&r="+strings.NewReplacer("+", "%2B", "&", "%26", "#", "%23", ";", "%3B").Replace(strings.ReplaceAll(name, " ", "%20")), ""); w.Code != 422 {
			t.Errorf("a hostile pin: %d", w.Code)
		} else {
			s.page(422, w, "a hostile pin").harmless("pin", name)
		}
	}
}

func TestCompareWays(t *testing.T) {
	s := compared(t)
	sheet := s.open(200, "/designs/1")
	var ways []string
	for _, a := range sheet.all(tag("a")) {
		if href := attr(a, "href"); strings.HasPrefix(href, "/compare") {
			ways = append(ways, href)
		}
	}
	if len(ways) != 5 || !slices.Contains(ways, "/compare?r=1.4&r=1.5") || !slices.Contains(ways, "/compare/choose?r=1.5") {
		t.Errorf("from the sheet lead %q", ways)
	}
	for _, way := range ways {
		s.open(200, way)
	}
	s.open(200, "/designs/1/revisions/3").lacks("lay beside revision 2", "lay beside others…")
	chooser := s.open(200, "/compare/choose?r=1.5")
	if boxes := chooser.all(func(n *html.Node) bool { return attr(n, "type") == "checkbox" }); len(boxes) != 6 {
		t.Errorf("%d revisions to choose from, want 6", len(boxes))
	}
	p := s.open(200, five+"&load=50")
	seen := 0
	for _, a := range p.all(tag("a")) {
		if href := attr(a, "href"); strings.HasPrefix(href, "/") && !strings.HasPrefix(href, "/assets") {
			seen++
			s.want(200, "GET", href, "")
		}
	}
	if seen < 40 {
		t.Errorf("only %d links were followed", seen)
	}
	if w := s.ask("GET", five, "", liveEdit); !strings.Contains(w.Body.String(), `hx-target="#comparison"`) || strings.Contains(w.Body.String(), "<html") {
		t.Error("a script gets the whole page")
	}
}

// BenchmarkCompareFive measures the answer with five revisions, as they were
// saved and computed anew.
func BenchmarkCompareFive(b *testing.B) {
	data, err := store.Open(b.Context(), filepath.Join(b.TempDir(), "data.db"))
	if err != nil {
		b.Fatal(err)
	}
	defer data.Close()
	server := &Server{store: data, log: discard(), errorPage: failurePage}
	keepFive(b, server)
	for name, address := range map[string]string{"saved": five, "anew": five + "&under=5"} {
		b.Run(name, func(b *testing.B) {
			for b.Loop() {
				w := httptest.NewRecorder()
				if err := server.comparePage(w, httptest.NewRequest("GET", address, nil)); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}

func keepFive(b *testing.B, server *Server) {
	b.Helper()
	design, _, err := decodeDesign(assets.Samples()[0].JSON)
	if err != nil {
		b.Fatal(err)
	}
	for n := range 5 {
		design.Ambient = budget.N(float64(25 + 10*n))
		draft, complete, err := draftOf(design).stored()
		if err != nil {
			b.Fatal(err)
		}
		kept, err := server.store.Create(b.Context(), store.NewDesign{Name: design.Name, Draft: draft, Complete: complete})
		if n > 0 {
			kept, err = server.keepDraft(b.Context(), 1, int64(n), draftOf(design), "")
		}
		if err == nil {
			_, err = server.saveRevision(b.Context(), kept, "")
		}
		if err != nil {
			b.Fatal(err)
		}
	}
}
