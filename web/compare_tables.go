package web

import (
	"math"
	"strings"

	"lossbook/budget"
	"lossbook/web/quantity"
	"lossbook/web/view"
)

// heads head the columns, baseline first.
func (c *comparison) heads() []view.CompareHead {
	var heads []view.CompareHead
	for _, i := range c.order() {
		heads = append(heads, view.CompareHead{Label: c.labels[i], Name: nameOf(c.sides[i].design.Name), Base: i == c.base-1})
	}
	return heads
}

// texts draws one row of words: what each revision has.
func (c *comparison) texts(head string, texts []string) view.CompareLine {
	l := view.CompareLine{Head: head}
	for _, i := range c.order() {
		l.Cells = append(l.Cells, view.CompareCell{Value: texts[i], Base: i == c.base-1, Same: texts[i] == texts[c.base-1]})
	}
	return l
}

// conditionTable lists the conditions that differ, or all of them.
func (c *comparison) conditionTable() view.CompareTable {
	t := view.CompareTable{Heads: c.heads()}
	for _, condition := range conditionsAmong(c.sides) {
		if condition.differ || c.all {
			t.Lines = append(t.Lines, c.texts(strings.ToUpper(condition.name[:1])+condition.name[1:], condition.texts))
		}
	}
	return t
}

// entryTable lists the other entries that differ, or all of them, and counts
// both kinds.
func (c *comparison) entryTable() (t view.CompareTable, changed, unchanged int) {
	t.Heads = c.heads()
	for _, e := range c.entries {
		switch {
		case ofConditions(e.path) || !e.stated():
			continue
		case e.alike():
			unchanged++
			if !c.all {
				continue
			}
		default:
			changed++
		}
		t.Lines = append(t.Lines, c.entryLine(e))
	}
	return t, changed, unchanged
}

func (c *comparison) entryLine(e sheetEntry) view.CompareLine {
	texts := make([]string, len(e.texts))
	for i, text := range e.texts {
		texts[i] = given(worded(e.field, text))
		if e.field.Kind == budget.Rows {
			texts[i] = c.sides[i].entries.curveWords(e.path)
		}
	}
	l := c.texts(labelOf(e.path), texts)
	for n, i := range c.order() {
		if cell := &l.Cells[n]; e.texts[i] != e.texts[c.base-1] && cell.Same { // a long curve, told in short
			cell.Value, cell.Same = cell.Value+", other values", false
		}
	}
	if e.field.Path != "" {
		l.Symbol = symbolOf(e.field.Symbol)
	}
	return l
}

// shownRows of a curve are told in full up to this many.
const toldRows = 6

func (t Draft) curveWords(path string) string {
	n := t.shownRows(path)
	var rows []string
	for i := range n {
		rows = append(rows, t[cellPath(path, i, 0)]+" "+t[cellPath(path, i, 1)])
	}
	switch {
	case n == 0:
		return "not given"
	case n <= toldRows:
		return strings.Join(rows, "; ")
	}
	return plural(n, "row", "rows") + ", " + rows[0] + " to " + rows[n-1]
}

// lossTable draws the losses at one load with their differences.
func (c *comparison) lossTable(load int) view.CompareTable {
	t := view.CompareTable{Heads: c.heads()}
	s := c.losses[load]
	for n, g := range groups {
		var members []lossRow
		for i, r := range s.items {
			if groupOf(r.item.Part) == n && !c.idle(i) {
				members = append(members, r)
			}
		}
		if len(members) == 0 {
			continue
		}
		subtotal := c.lossLine(g.title, "part "+g.class, sum(members))
		subtotal.Square = true
		t.Lines = append(t.Lines, subtotal)
		for _, r := range members {
			t.Lines = append(t.Lines, c.lossLine(itemWords(r.item), g.class, r))
		}
	}
	t.Lines = append(t.Lines, c.lossLine("Loss, "+c.grain.unit, "sum", s.total))
	for _, m := range measures {
		t.Lines = append(t.Lines, c.measureLine(m, load))
	}
	return t
}

// idle reports whether an item is 0 in all revisions, wherever there are figures.
func (c *comparison) idle(item int) bool {
	for _, s := range c.losses {
		for _, f := range s.items[item].figures {
			if f.value != 0 {
				return false
			}
		}
	}
	return true
}

// sum adds rows up: the figures, and the differences as they are shown.
func sum(rows []lossRow) lossRow {
	total := lossRow{figures: make([]datum, len(rows[0].figures)), changes: make([]float64, len(rows[0].figures))}
	for _, r := range rows {
		for i, f := range r.figures {
			total.figures[i].value += f.value
			total.figures[i].none = f.none
			total.changes[i] += r.changes[i]
		}
	}
	return total
}

func (c *comparison) lossLine(head, class string, r lossRow) view.CompareLine {
	l := view.CompareLine{Head: head, Class: class, Unit: c.grain.unit}
	for _, i := range c.order() {
		cell := view.CompareCell{Base: i == c.base-1, Marked: r.figures[i].outside, Value: quantity.NoFigure}
		if f := r.figures[i]; !f.none {
			cell.Value = "0"
			if f.value != 0 {
				cell.Value = decimals(f.value*c.grain.factor, c.grain.places)
			}
		}
		if !cell.Base {
			cell.Change, cell.Share = c.changeText(r, i, c.grain.places), c.shareText(r, i)
			cell.Same = r.changes[i] == 0
		}
		l.Cells = append(l.Cells, cell)
	}
	return l
}

// changeText writes a difference; figures that are the same have none.
func (c *comparison) changeText(r lossRow, i, places int) string {
	switch {
	case !r.comparable(c.base-1, i):
		return quantity.NoFigure
	case r.equal(c.base-1, i) && r.changes[i] == 0:
		return "0"
	}
	return signed(r.changes[i]/math.Pow10(places), func(v float64) string { return decimals(v, places) })
}

// mostPercent is where a share stops to say anything.
const mostPercent = 999

func (c *comparison) shareText(r lossRow, i int) string {
	if !r.comparable(c.base-1, i) {
		return quantity.NoFigure
	}
	switch q := r.ratioTo(c.base-1, i); {
	case q.new:
		return "new"
	case q.gone:
		return "gone"
	case q.percent == 0:
		return "0"
	case math.Abs(q.percent) > mostPercent:
		return "> 999"
	default:
		return signed(q.percent, func(v float64) string { return decimals(v, 1) })
	}
}

// measure is a figure below the losses.
type measure struct {
	head, class, unit string
	factor            float64
	places            int
	of                func(*Figures) float64
}

var measures = []measure{
	{"Efficiency, %", "eta", "%", 100, 2, func(f *Figures) float64 { return f.Efficiency }},
	{"Switch, °C", "", "°C", 1, 1, func(f *Figures) float64 { return f.Temperatures.Switch }},
	{"Rectifier, °C", "", "°C", 1, 1, func(f *Figures) float64 { return f.Temperatures.Rectifier }},
	{"Inductor, °C", "", "°C", 1, 1, func(f *Figures) float64 { return f.Temperatures.Inductor }},
}

// measured lays a measure beside each other: the differences are those of the
// figures shown.
func (c *comparison) measured(m measure, load int) lossRow {
	r := rowOf(Item{}, c.sides, func(s *side) datum {
		return datumOf(s.at(load), func(f *Figures) float64 { return m.factor * m.of(f) })
	})
	steps := func(v float64) float64 { return math.Round(v * math.Pow10(m.places)) }
	for i := range c.sides {
		if r.comparable(c.base-1, i) {
			r.changes[i] = steps(r.figures[i].value) - steps(r.figures[c.base-1].value)
		}
	}
	return r
}

func (c *comparison) measureLine(m measure, load int) view.CompareLine {
	r := c.measured(m, load)
	l := view.CompareLine{Head: m.head, Class: m.class, Unit: m.unit}
	for _, i := range c.order() {
		cell := view.CompareCell{Base: i == c.base-1, Value: quantity.NoFigure}
		if !r.figures[i].none {
			cell.Value = decimals(r.figures[i].value, m.places)
		}
		if !cell.Base {
			cell.Change, cell.Same = c.changeText(r, i, m.places), r.changes[i] == 0
		}
		l.Cells = append(l.Cells, cell)
	}
	return l
}

// findingTable lists the findings that not all revisions have, and counts those
// that they do.
func (c *comparison) findingTable() (t view.CompareTable, common int) {
	t.Heads = c.heads()
	for _, f := range findingsAmong(c.sides) {
		if f.common() {
			common++
			continue
		}
		t.Lines = append(t.Lines, c.findingLine(f))
	}
	return t, common
}

func (c *comparison) findingLine(f saidFinding) view.CompareLine {
	l := view.CompareLine{Head: findingHead(f.Finding)}
	for _, i := range c.order() {
		cell := view.CompareCell{Base: i == c.base-1, Value: "no"}
		switch {
		case f.unknown[i]:
			cell.Value = quantity.NoFigure
		case f.by[i] != nil:
			cell.Value = findingWords(*f.by[i])
		}
		cell.Change = f.change(c.base-1, i)
		cell.Same = cell.Change == ""
		l.Cells = append(l.Cells, cell)
	}
	return l
}

func findingHead(f Finding) string {
	if f.Part == "" {
		return f.Message
	}
	return partWords[f.Part] + ": " + f.Message
}

func findingWords(f Finding) string {
	if f.Value == 0 && f.Limit == 0 {
		return f.Level
	}
	return f.Level + ", " + quantityOf(f.Value, quantity.Unit(f.Unit), 3) + " (limit " + quantityOf(f.Limit, quantity.Unit(f.Unit), 3) + ")"
}
