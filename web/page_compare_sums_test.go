package web

import (
	"math"
	"regexp"
	"slices"
	"strconv"
	"strings"
	"testing"

	"golang.org/x/net/html"

	"lossbook/budget"
	"lossbook/web/quantity"
)

// besideRow is a row of the comparison's table of losses, as it is shown.
type besideRow struct {
	head, class string
	cells       []string
}

// besideTable reads the first table of losses: the revisions of its columns, and its
// rows.
func (p page) besideTable() (revisions []int, rows []besideRow) {
	p.t.Helper()
	table := page{p.t, p.all(func(n *html.Node) bool { return attr(n, "class") == "ledger beside" })[0], 200}
	for _, th := range table.all(func(n *html.Node) bool { return n.Data == "th" && attr(n, "scope") == "colgroup" }) {
		found := regexp.MustCompile(`rev\. (\d)`).FindStringSubmatch(words(th))
		if found == nil {
			p.t.Fatalf("a column is headed %q", words(th))
		}
		n, _ := strconv.Atoi(found[1])
		revisions = append(revisions, n)
	}
	for _, tr := range table.all(func(n *html.Node) bool { return n.Data == "tr" && n.Parent.Data == "tbody" }) {
		row := besideRow{class: attr(tr, "class")}
		for cell := range tr.ChildNodes() {
			switch cell.Data {
			case "th":
				row.head = words(cell)
			case "td":
				row.cells = append(row.cells, words(cell))
			}
		}
		rows = append(rows, row)
	}
	return revisions, rows
}

// steps reads a shown number in units of its last digit, which has so many decimals.
func steps(t *testing.T, shown string, places int) int {
	t.Helper()
	text := machine(shown)
	whole, fraction, _ := strings.Cut(text, ".")
	n, err := strconv.Atoi(whole + fraction + strings.Repeat("0", places-len(fraction)))
	if err != nil {
		t.Fatalf("%q is no number", shown)
	}
	return n
}

// TestCompareShownNumbers holds every loss that is shown against the revision's own
// file: values in their columns, differences that add up to the shown total, shares of
// the baseline, at every load and from every baseline.
func TestCompareShownNumbers(t *testing.T) {
	s := compared(t)
	files := map[int][]map[string]string{}
	for n := 1; n <= 5; n++ {
		_, files[n] = table(t, s.want(200, "GET", revisionAddress(1, n)+"/efficiency.csv", "").Body.Bytes())
	}
	ledger := budget.Ledger(sample(t, "frost"))
	values, shares, gaps, unnumbered := 0, 0, 0, map[string]int{}
	for base := 1; base <= 5; base++ {
		for load, part := range budget.LoadGrid() {
			p := s.open(200, five+"&base="+strconv.Itoa(base)+"&load="+loadShare(part))
			if text := p.words(); strings.Contains(text, "∞") || strings.Contains(text, "NaN") || strings.Contains(text, "Inf") {
				t.Error("something is shown as infinite")
			}
			revisions, rows := p.besideTable()
			if len(revisions) != 5 || revisions[0] != base {
				t.Fatalf("the columns are %v, from the baseline %d", revisions, base)
			}
			total := slices.IndexFunc(rows, func(r besideRow) bool { return r.class == "sum" })
			_, fraction, _ := strings.Cut(machine(rows[total].cells[0]), ".")
			places := len(fraction)
			all, within := make([]int, 5), make([]int, 5)
			current := group{}
			for i, r := range rows[:total] {
				if at := slices.IndexFunc(groups, isGroup(r.class)); at >= 0 {
					if i > 0 {
						wantChanges(t, rows, current.title, within, places)
					}
					current, within = groups[at], make([]int, 5)
					continue
				}
				item := slices.IndexFunc(ledger, func(l budget.Row) bool {
					return slices.Contains(current.parts, l.Part) && itemWords(Item{Part: l.Part, Kind: l.Kind}) == r.head
				})
				if item < 0 {
					t.Fatalf("no loss is called %s, %s", current.title, r.head)
				}
				column := ledger[item].Part + "." + ledger[item].Kind + "_W"
				watts := make([]float64, 5)
				for side, n := range revisions {
					cell := max(0, 3*side-2)
					row := files[n][8+load]
					if row["state"] != "settled" || files[base][8+load]["state"] != "settled" {
						gaps++
						if row["state"] != "settled" && r.cells[cell] != quantity.NoFigure || side > 0 && strings.ContainsAny(r.cells[cell+1]+r.cells[cell+2], "0123456789") {
							t.Errorf("%s of revision %d at %s %% is shown without a figure to show: %q", column, n, loadShare(part), r.cells)
						}
						continue
					}
					text := row[column]
					if text == "" { // of a resistance that this revision doesn't have
						text = "0"
					}
					v, err := strconv.ParseFloat(text, 64)
					if err != nil {
						t.Fatal(err)
					}
					watts[side] = v
					shown := r.cells[cell]
					if shown == "·" {
						shown = "0"
					}
					if got := float64(steps(t, shown, places)); math.Abs(got-v*1e3*math.Pow10(places)) > 0.5001 {
						t.Errorf("%s of revision %d at %s %%: shown %s mW, kept %v W", column, n, loadShare(part), shown, v)
					}
					values++
					if side == 0 {
						continue
					}
					change, share := r.cells[cell+1], r.cells[cell+2]
					step := steps(t, change, places)
					all[side], within[side] = all[side]+step, within[side]+step
					if was, is := watts[0], v; step*int(math.Copysign(1, is-was)) < -1 {
						t.Errorf("%s from %v to %v W differs by %s", column, was, is, change)
					}
					shares++
					switch want := 100 * (v - watts[0]) / watts[0]; {
					case watts[0] == 0 && v == 0 || v == watts[0]:
						if share != "0" {
							unnumbered[share]++
						}
					case watts[0] == 0, v == 0:
						unnumbered[share]++
					case math.Abs(want) > 999:
						if share != "> 999" {
							t.Errorf("%s from %v to %v W is %s %%", column, watts[0], v, share)
						}
					default:
						if got, err := strconv.ParseFloat(machine(share), 64); err != nil || math.Abs(got-want) > 0.0501 {
							t.Errorf("%s from %v to %v W is %s %%, want %.2f", column, watts[0], v, share, want)
						}
					}
				}
			}
			wantChanges(t, rows, current.title, within, places)
			wantChanges(t, rows, rows[total].head, all, places)
		}
	}
	t.Logf("%d values, %d differences, %d without a figure", values, shares, gaps)
	if values < 3000 || shares < 2500 || len(unnumbered) != 2 || unnumbered["new"] < 8 || unnumbered["gone"] < 8 {
		t.Errorf("%d values, %d shares, without a number %v", values, shares, unnumbered)
	}
}

// entryRows counts the rows of the table of entries.
func (p page) entryRows() (n int) {
	for _, table := range p.all(func(n *html.Node) bool { return n.Data == "table" && attr(n, "class") == "beside entries" }) {
		if all := (page{p.t, table, 200}).all(tag("th")); len(all) > 0 && words(all[0]) == "Entry" {
			n += len((page{p.t, table, 200}).all(func(n *html.Node) bool { return n.Data == "tr" && n.Parent.Data == "tbody" }))
		}
	}
	return n
}

func isGroup(class string) func(group) bool {
	return func(g group) bool { return class == "part "+g.class }
}

// wantChanges compares a sum's shown differences with those of its rows.
func wantChanges(t *testing.T, rows []besideRow, head string, want []int, places int) {
	t.Helper()
	r := rows[slices.IndexFunc(rows, func(r besideRow) bool { return r.head == head })]
	for side := 1; side < 5; side++ {
		if r.cells[3*side-1] == quantity.NoFigure || r.cells[3*side-1] == "" {
			continue // told of each row already
		}
		if got := steps(t, r.cells[3*side-1], places); got != want[side] {
			t.Errorf("%s, column %d: differs by %d last digits, its rows by %d", head, side+1, got, want[side])
		}
	}
}

// The conditions stand before everything that is compared under them; what is unchanged
// is counted, and is what "show all" adds.
func TestCompareTellsConditionsFirst(t *testing.T) {
	s := compared(t)
	p := s.open(200, "/compare?r=1.2&r=1.5")
	order := []string{"The conditions differ: ambient and switching frequency.", "all under those of rev. 2", "those that were saved", "Losses at one point", "efficient at", "turn-on", "Findings"}
	text, at := words(p.one("comparison")), -1
	for _, want := range order {
		i := strings.Index(text, want)
		if i <= at {
			t.Errorf("%q is not where it belongs", want)
		}
		at = i
	}
	for _, address := range []string{"/compare?r=1.1&r=1.2", five} {
		few, all := s.open(200, address), s.open(200, address+"&all=1")
		found := regexp.MustCompile(`(\d+) entries are unchanged`).FindStringSubmatch(few.words())
		if found == nil {
			t.Fatalf("%s does not say how many entries are unchanged", address)
		}
		n, _ := strconv.Atoi(found[1])
		shown, every := few.entryRows(), all.entryRows()
		if n < 30 || every-shown != n {
			t.Errorf("%s: %d rows, %d with all, and %d are said to be unchanged", address, shown, every, n)
		}
	}
}
