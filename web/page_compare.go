package web

import (
	"fmt"
	"net/http"
	"slices"
	"strconv"
	"time"

	"lossbook/budget"
	"lossbook/web/quantity"
	"lossbook/web/view"
)

// comparePage lays the revisions that the address names beside each other.
func (s *Server) comparePage(w http.ResponseWriter, r *http.Request) error {
	c, err := s.compare(r.Context(), r.URL.Query())
	if err != nil {
		return err
	}
	page, err := c.model()
	if err != nil {
		return err
	}
	if live(r) {
		return show(w, r, http.StatusOK, view.CompareAnswer(page))
	}
	return show(w, r, http.StatusOK, view.ComparePage(page))
}

// foldedFrom is the number of entries beyond which they open on demand: other
// designs differ in nearly all of them, and the losses would be far below.
const foldedFrom = 20

// model draws the whole page.
func (c *comparison) model() (view.Compare, error) {
	v := view.Compare{Title: c.title(), File: slug(c.title()), Sides: c.sideViews(), Basis: c.basis(), Views: c.views(), Rule: c.rules(), Gaps: c.gaps(),
		Losses: c.lossTable(c.load), Loads: c.overLoads(), Zero: c.idleWords(), Outside: c.outside(), CSV: "/compare.csv" + c.query()}
	v.Page, v.Foot = frame(v.Title), v.Title+" · "+keptWhen(v.Sides)
	v.Choose = view.Link{Text: "choose others", Href: chooserAddress(c.pins)}
	conditions := conditionsAmong(c.sides)
	v.Differ, v.Same = conditionWords(conditions)
	v.Offers, v.Stays = c.offers(conditions)
	v.Conditions = c.conditionTable()
	entries, changed, unchanged := c.entryTable()
	v.Changed = entries
	if len(entries.Lines) > foldedFrom && !c.all {
		v.Folded = plural(changed, "entry differs", "entries differ")
	}
	v.Unchanged, v.All = c.unchangedWords(unchanged)
	findings, common := c.findingTable()
	v.Findings, v.Kept = findings, keptFindings(len(findings.Lines), common)
	v.Nothing = c.nothing(changed, len(findings.Lines), v.Differ)
	for _, i := range c.order()[1:] {
		v.Verdicts = append(v.Verdicts, c.verdict(i))
	}
	v.Losses.Caption = c.grain.unit + ", " + c.point()
	var err error
	v.Charts, err = c.charts()
	return v, err
}

// keptWhen says when the revisions were kept, each moment once.
func keptWhen(sides []view.CompareSide) string {
	var list []string
	for _, s := range sides {
		if !slices.Contains(list, s.When) {
			list = append(list, s.When)
		}
	}
	return listed(list)
}

func (c *comparison) title() string {
	if oneDesign(c.pins) {
		words := make([]string, len(c.pins))
		for i, p := range c.pins {
			words[i] = strconv.Itoa(p.number)
		}
		return nameOf(c.sides[0].design.Name) + ": revisions " + listed(words)
	}
	return listed(c.labels)
}

func (c *comparison) unchangedWords(n int) (string, view.Link) {
	words := plural(n, "entry is", "entries are") + " unchanged."
	if n == 0 {
		return "", view.Link{}
	}
	if c.all {
		return words, view.Link{Text: "show only what changed", Href: c.with(func(l *lineup) { l.all = false })}
	}
	return words, view.Link{Text: "show all", Href: c.with(func(l *lineup) { l.all = true })}
}

func keptFindings(changed, common int) string {
	switch {
	case changed == 0 && common == 0:
		return "None of them has any."
	case changed == 0:
		return "None: " + plural(common, "finding is", "findings are") + " the same in all of them."
	case common == 0:
		return "No finding is the same in all of them."
	}
	return plural(common, "more finding is", "more findings are") + " the same in all of them."
}

// sideViews tell what each revision is.
func (c *comparison) sideViews() []view.CompareSide {
	var list []view.CompareSide
	for i, r := range c.saved {
		s := view.CompareSide{Label: c.labels[i], Note: r.Note, Model: r.Model,
			When: moment(r.CreatedAt), Stamp: r.CreatedAt.Format(time.RFC3339), Href: revisionAddress(r.Design, r.Number), Base: i == c.base-1}
		if name := nameOf(c.sides[i].design.Name); !oneDesign(c.pins) || name != nameOf(c.sides[0].design.Name) {
			s.Name = name
		}
		s.MakeBase = view.Link{Text: "make it the baseline", Href: c.with(func(l *lineup) { l.base = i + 1 })}
		if len(c.pins) > leastSides {
			s.Leave = view.Link{Text: "leave out", Href: c.without(i)}
		}
		list = append(list, s)
	}
	return list
}

// views offer other points.
func (c *comparison) views() view.CompareViews {
	v := view.CompareViews{Vins: c.vinLinks(), Loads: c.loadLinks(), Action: "/compare"}
	for _, o := range c.carried() {
		if o[0] == "vin" { // the form asks for it
			continue
		}
		v.Carry = append(v.Carry, view.Option{Label: o[0], Value: o[1]})
	}
	v.Vin = view.Field{Name: "vin", Key: "view.vin", Label: "Input", Symbol: symbolOf("V_in"), Numeric: true, Unit: "V",
		Assumed: quantity.Format(c.place.under[c.base-1].nominal, "V")}
	if c.place.in.end == "" {
		v.Vin.Value, v.Vin.Unit = c.vin, ""
	}
	return v
}

// overLoads draws, for each revision but the baseline, how it differs over the
// load: the same differences that the table at each load shows.
func (c *comparison) overLoads() []view.CompareLoads {
	tables := make([]view.CompareTable, len(budget.LoadGrid()))
	for load := range tables {
		tables[load] = c.lossTable(load)
	}
	var list []view.CompareLoads
	for n, i := range c.order()[1:] {
		l := view.CompareLoads{Title: c.labels[i] + " against " + c.labels[c.base-1],
			Caption: "differences in " + c.grain.unit + ", points and K, over the load" + c.overWords(), Columns: c.loadColumns()}
		for row, line := range tables[0].Lines {
			drawn := view.LedgerLine{Head: differenceHead(line), Class: line.Class, Square: line.Square}
			for load := range tables {
				cell := tables[load].Lines[row].Cells[n+1]
				drawn.Cells = append(drawn.Cells, view.LedgerCell{Text: cell.Change, Class: quiet(cell.Same)})
			}
			l.Lines = append(l.Lines, drawn)
		}
		list = append(list, l)
	}
	return list
}

// quiet is the class of a difference that is none.
func quiet(same bool) string {
	if same {
		return "dim"
	}
	return ""
}

// differenceHead names a row of differences with the unit of a difference.
func differenceHead(l view.CompareLine) string {
	switch l.Unit {
	case "%":
		return "Efficiency, points"
	case "°C":
		return l.Head[:len(l.Head)-len("°C")] + "K"
	}
	return l.Head
}

func (c *comparison) overWords() string {
	if oneOf(c.place.under) {
		return " at " + quantityOf(c.place.under[0].vin(c.place.in), "V", 4) + " in"
	}
	return ""
}

func (c *comparison) loadColumns() []view.Link {
	links := c.loadLinks()
	for i, part := range budget.LoadGrid() {
		links[i].Text = loadShare(part)
	}
	return links
}

// outside reports whether any figure shown is marked.
func (c *comparison) outside() bool {
	for _, r := range c.losses[c.load].items {
		for _, f := range r.figures {
			if f.outside {
				return true
			}
		}
	}
	return false
}

// chooserPage offers the revisions of all designs.
func (s *Server) chooserPage(w http.ResponseWriter, r *http.Request) error {
	chosen := map[string]bool{}
	for _, text := range r.URL.Query()["r"] {
		chosen[text] = true
	}
	designs, err := s.store.Designs(r.Context())
	if err != nil {
		return err
	}
	page := view.Chooser{Page: frame("Lay revisions side by side")}
	for _, d := range designs {
		heads, err := s.store.Revisions(r.Context(), d.ID)
		if err != nil {
			return err
		}
		group := view.ChooserDesign{Name: nameOf(d.Name), ID: strconv.FormatInt(d.ID, 10)}
		for _, h := range slices.Backward(heads) { // the oldest first, so that it is the baseline
			p := pin{d.ID, h.Number}.String()
			group.Revisions = append(group.Revisions, view.ChooserRevision{Value: p, Name: fmt.Sprintf("Revision %d", h.Number), Note: h.Note,
				When: moment(h.CreatedAt), Stamp: h.CreatedAt.Format(time.RFC3339), Chosen: chosen[p]})
		}
		if len(heads) > 0 {
			page.Designs = append(page.Designs, group)
		}
	}
	return show(w, r, http.StatusOK, view.ChooserPage(page))
}

func chooserAddress(pins []pin) string { return "/compare/choose" + lineup{pins: pins}.query() }

// besideBefore leads to a revision laid beside an earlier one, the baseline.
func besideBefore(id int64, before, n int) view.Link {
	l := lineup{pins: []pin{{id, before}, {id, n}}}
	return view.Link{Text: fmt.Sprintf("lay beside revision %d", before), Href: l.address()}
}

// besideLink leads to where others are chosen to be laid beside a revision.
func besideLink(p pin) view.Link {
	return view.Link{Text: "lay beside others…", Href: chooserAddress([]pin{p})}
}
