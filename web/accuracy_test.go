package web

import (
	"fmt"
	"io/fs"
	"math"
	"os"
	"slices"
	"strconv"
	"strings"
	"testing"
	"testing/fstest"

	"github.com/google/go-cmp/cmp"
	"golang.org/x/net/html"

	"lossbook/budget"
	"lossbook/budget/proof"
	"lossbook/web/view"
)

func proven(t *testing.T) *evidence {
	t.Helper()
	e, err := gather(os.DirFS("../testdata"))
	if err != nil {
		t.Fatal(err)
	}
	return e
}

// TestPublished holds everything against every figure of the data, and counts: each
// check is there, each of its figures is reached or named as unreached.
func TestPublished(t *testing.T) {
	e := proven(t)
	const last = 30
	reached, unreached := 0, 0
	for id := 1; id <= last; id++ {
		i := slices.IndexFunc(e.results, func(r proof.Result) bool { return r.ID == id })
		if i < 0 {
			t.Errorf("check %d is gone", id)
			continue
		}
		r := e.results[i]
		t.Logf("%d %s: %s, %s (%s)", r.ID, r.Title, r.Document, r.Place, r.Known)
		for _, o := range r.Outcomes {
			reached++
			t.Logf("   %-44s expected %-16s got %-12.7g %4.1f correct digits", o.Name, o.Expected(), o.Got, o.Digits)
			if !o.Holds {
				t.Errorf("check %d, %s: got %.7g, expected %s within %.2g", r.ID, o.Name, o.Got, o.Expected(), o.Allowed)
			}
		}
		for _, u := range r.Unreached {
			unreached++
			t.Logf("   %-44s not reached: %s", u.Name, u.Reason)
		}
		if len(r.Outcomes) != len(r.Figures) || len(r.Outcomes)+len(r.Unreached) == 0 {
			t.Errorf("check %d: %d of %d figures reached, %d named as unreached", r.ID, len(r.Outcomes), len(r.Figures), len(r.Unreached))
		}
	}
	if len(e.results) != last || reached != 174 || unreached != 7 {
		t.Errorf("%d checks, %d figures reached and %d not; 30, 174 and 7 were there", len(e.results), reached, unreached)
	}
}

// TestWeightsCheckCanFail asks for weights that are not there.
func TestWeightsCheckCanFail(t *testing.T) {
	text, err := fs.ReadFile(os.DirFS("../testdata"), checksFile)
	if err != nil {
		t.Fatal(err)
	}
	for old, wrong := range map[string]string{`"CEC at 75 %", "at": [["load", "75 %"]], "printed": "0.53"`: `"CEC at 75 %", "at": [["load", "75 %"]], "printed": "0.54"`,
		`"European at 50 %", "at": [["load", "50 %"]]`: `"European at 50 %", "at": [["load", "51 %"]]`} {
		if !strings.Contains(string(text), old) {
			t.Fatalf("there is no %s", old)
		}
		e, err := gather(fstest.MapFS{checksFile: {Data: []byte(strings.Replace(string(text), old, wrong, 1))}, coreFile: file(t, coreFile), casesFile: file(t, casesFile), boundsFile: file(t, boundsFile)})
		if err != nil {
			t.Fatal(err)
		}
		missed := 0
		for _, r := range e.results {
			for _, o := range r.Outcomes {
				if !o.Holds {
					missed++
				}
			}
		}
		if missed != 1 {
			t.Errorf("%s: %d figures missed, want 1", wrong, missed)
		}
	}
}

func file(t *testing.T, name string) *fstest.MapFile {
	t.Helper()
	text, err := os.ReadFile("../testdata/" + name)
	if err != nil {
		t.Fatal(err)
	}
	return &fstest.MapFile{Data: text}
}

// accuracy opens the page as a person meets it.
func accuracy(t *testing.T) page { t.Helper(); return newSite(t).open(200, accuracyAddress) }

// TestAccuracyShowsEveryFigure compares the page with the results, cell by cell.
func TestAccuracyShowsEveryFigure(t *testing.T) {
	p, shown := accuracy(t), 0
	for _, r := range proven(t).results {
		article := p.one("check-" + strconv.Itoa(r.ID))
		said := words(article)
		for _, part := range []string{r.Title, r.Document, r.Place, string(r.Known), r.How, r.Slip} {
			if !strings.Contains(said, part) {
				t.Errorf("check %d doesn't say %q: %s", r.ID, part, said)
			}
		}
		rows := rowsOf(article)
		if len(rows) != len(r.Outcomes) {
			t.Errorf("check %d: %d rows, want %d", r.ID, len(rows), len(r.Outcomes))
			continue
		}
		for i, o := range r.Outcomes {
			f := figureView(o)
			if want := []string{f.Expected, f.Got, f.Digits}; strings.Join(rows[i][1:4], "|") != strings.Join(strings.Fields(strings.Join(want, "|")), " ") || !strings.HasPrefix(rows[i][0], o.Name) {
				t.Errorf("check %d: row %q, want %s %q", r.ID, rows[i], o.Name, want)
			}
			shown++
		}
	}
	if shown < 170 {
		t.Errorf("only %d figures", shown)
	}
}

// TestAccuracyLinks wants every place that is led to, of items, findings and checks.
func TestAccuracyLinks(t *testing.T) {
	p, led := accuracy(t), 0
	for _, a := range p.all(tag("a")) {
		if id, within := strings.CutPrefix(attr(a, "href"), "#"); within {
			led++
			if !p.has(id) {
				t.Errorf("#%s leads nowhere", id)
			}
		}
	}
	for _, row := range budget.Ledger(&budget.Design{}) {
		led++
		if at := checkedAt(row.Part + "." + row.Kind); !p.has(strings.TrimPrefix(at, accuracyAddress+"#")) {
			t.Errorf("%s leads nowhere", at)
		}
	}
	if led < 90 || checkedAt("layout.fuse") != "/accuracy#item-layout" || checkedAt("budget.loss") != "/accuracy" || checkedAt("subtotal.switch") != "/accuracy" {
		t.Errorf("%d links", led)
	}
}

// TestAccuracySaysAMiss shows a figure that is not met as one.
func TestAccuracySaysAMiss(t *testing.T) {
	e := proven(t)
	e.results[0].Outcomes[0].Holds = false
	if s := e.summary()[0]; !strings.Contains(s, "1 is missed.") || strings.Contains(s, "All are met") {
		t.Error(s)
	}
	if !figureView(e.results[0].Outcomes[0]).Missed || !strings.Contains(proven(t).summary()[0], "All are met") {
		t.Error("a miss and a hit look alike")
	}
}

func TestCorrectDigits(t *testing.T) {
	for digits, want := range map[float64]string{15: "≥\u202f15", 14.99: "14.9", 2.999: "2.9", 0.04: "0.0", -1: "0.0", math.Inf(-1): "0.0"} {
		if got := correctDigits(digits); got != want {
			t.Errorf("%g: %q, want %q", digits, got, want)
		}
	}
	for _, c := range []struct {
		v        float64
		expected string
		want     string
	}{{0.62438123, "0.623", "0.62438"}, {1048.84331, "1049", "1048.84"}, {20, "20.0", "20"}, {0.0017523, "0.0018", "0.001752"}, {-3.14159, "3", "−3.142"}} {
		if got := beside(c.v, c.expected); got != c.want {
			t.Errorf("%g beside %s: %q, want %q", c.v, c.expected, got, c.want)
		}
	}
}

// TestEvidenceRefused leaves something out or breaks it.
func TestEvidenceRefused(t *testing.T) {
	whole := func() fstest.MapFS {
		return fstest.MapFS{checksFile: file(t, checksFile), coreFile: file(t, coreFile), casesFile: file(t, casesFile), boundsFile: file(t, boundsFile)}
	}
	for _, name := range []string{checksFile, coreFile, casesFile, boundsFile} {
		lacking, broken := whole(), whole()
		delete(lacking, name)
		broken[name] = &fstest.MapFile{Data: []byte("{")}
		for what, data := range map[string]fs.FS{"without": lacking, "with a broken": broken} {
			if _, err := gather(data); err == nil {
				t.Errorf("%s %s the evidence was gathered", what, name)
			}
		}
	}
}

// TestBounds gathers them by hand.
func TestBounds(t *testing.T) {
	v := boundsView([]bound{
		{Quantity: "peak", Topology: "boost", Domain: "small", N: 1200, Worst: 0.003, Median: 1e-4},
		{Quantity: "rms", Topology: "boost", Domain: "small", N: 1200, Worst: 0, Median: 0},
		{Quantity: "peak", Topology: "boost", Domain: "large", N: 2, Worst: 0.2101, Median: 0.1},
		{Quantity: "peak", Topology: "buck", Domain: "small", N: 34, Worst: 0.00201, Median: 2.01e-4},
	})
	want := view.BoundTable{Heads: []view.BoundHead{{Domain: "small", Stages: "1234 stages"}, {Domain: "large", Stages: "2 stages"}},
		Lines: []view.BoundLine{{Quantity: "peak", Cells: []view.BoundCell{{Worst: "0.3", Half: "0.021"}, {Worst: "22", Half: "10"}}}, {Quantity: "rms", Cells: []view.BoundCell{{Worst: "0", Half: "0"}, {Worst: "0", Half: "0"}}}}}
	if d := cmp.Diff(want, v); d != "" {
		t.Error(d)
	}
	measured := proven(t).bounds
	shown, cells := boundsView(measured), map[string]bool{}
	for _, b := range measured {
		cells[b.Quantity+" of "+b.Domain] = true
	}
	if n := len(shown.Heads) * len(shown.Lines); n != len(cells) || n < 48 || shown.Heads[0].Stages != "612 stages" {
		t.Errorf("%d cells of %d: %+v", n, len(cells), shown.Heads)
	}
}

// TestPagesLeadToAccuracy wants the way from pages and from the working of a figure,
// and none for those who have a link and nothing else.
func TestPagesLeadToAccuracy(t *testing.T) {
	s := seeded(t)
	for path, want := range map[string]string{
		"/": "/accuracy", "/designs/1": "/accuracy", "/designs/1/revisions/1": "/accuracy", "/designs/1/revisions/1/report": "/accuracy",
		"/designs/1?working=switch.conduction": "/accuracy#item-switch.conduction", "/designs/1?working=budget.loss": "/accuracy",
	} {
		found := false
		for _, a := range s.open(200, path).all(tag("a")) {
			found = found || attr(a, "href") == want
		}
		if !found {
			t.Errorf("%s doesn't lead to %s", path, want)
		}
	}
}

// rowsOf returns the cells of the tables' bodies below an element, in words.
func rowsOf(n *html.Node) (rows [][]string) {
	for tr := range n.Descendants() {
		if tr.Type != html.ElementNode || tr.Data != "tr" || tr.Parent.Data != "tbody" {
			continue
		}
		var cells []string
		for c := range tr.ChildNodes() {
			if c.Type == html.ElementNode {
				cells = append(cells, words(c))
			}
		}
		rows = append(rows, cells)
	}
	return rows
}

// TestReadmeSaysWhatWasFound holds the README against the evidence.
func TestReadmeSaysWhatWasFound(t *testing.T) {
	text, err := os.ReadFile("../README.md")
	if err != nil {
		t.Fatal(err)
	}
	e, readme := proven(t), strings.Join(strings.Fields(string(text)), " ")
	figures, checks := 0, 0
	for _, r := range e.results {
		figures += len(r.Outcomes)
		if len(r.Outcomes) > 0 {
			checks++
		}
	}
	low := map[float64]string{}
	worst := 0.0
	for _, d := range e.core.Duties {
		low[d.Duty] = decimals(-100*d.Mean, 0)
		worst = max(worst, math.Abs(d.Worst))
	}
	for _, words := range []string{
		fmt.Sprintf("%d figures of %d documents", figures, checks),
		fmt.Sprintf("on average %s %% too low at duty 0.3, %s %% at 0.7, %s %% at 0.1 and %s %% at 0.9; single points are up to %s %% off", low[0.3], low[0.7], low[0.1], low[0.9], decimals(math.Ceil(100*worst), 0)),
		fmt.Sprintf("%d figures of the %d case files in `testdata/cases` agree within %g of each figure", e.cases.Figures, e.cases.Files, e.cases.Worst),
	} {
		if !strings.Contains(readme, words) {
			t.Errorf("the README doesn't say %q", words)
		}
	}
}
