package web

import (
	"math"
	"slices"
	"strconv"
	"strings"

	"lossbook/budget"
	"lossbook/web/quantity"
	"lossbook/web/view"
)

// group is a part of the ledger: the losses under one title, in one colour.
type group struct {
	title, class string
	parts        []string
}

var groups = []group{
	{"Switch", "p-switch", []string{"switch"}},
	{"Rectifier", "p-rectifier", []string{"rectifier"}},
	{"Inductor", "p-inductor", []string{"inductor"}},
	{"Capacitors", "p-capacitors", []string{"input_capacitor", "output_capacitor", "snubber"}},
	{"Drive and controller", "p-drive", []string{"drive", "controller"}},
	{"Copper and shunts", "p-layout", []string{"layout"}},
}

// watts is the unit of a ledger: one for all its cells.
type watts struct {
	unit   string
	factor float64
	fine   int // decimals of the smallest figures
}

// wattsFor takes mW while they keep the largest total under five digits.
func wattsFor(points []Point) watts {
	if mostLoss(points) < 10 {
		return watts{"mW", 1e3, 2}
	}
	return watts{"W", 1, 3}
}

// write writes a loss in three digits, with no more decimals than the unit's
// finest; one too small for them is said to be so, and none is a dot.
func (u watts) write(power float64) string {
	v := power * u.factor
	n := u.fine
	switch size := math.Abs(v); {
	case v == 0:
		return "·"
	case size < 0.5*math.Pow10(-u.fine):
		return "< " + decimals(math.Pow10(-u.fine), u.fine)
	case size >= 99.95:
		n = 0
	case size >= 9.995:
		n = 1
	case size >= 0.9995:
		n = 2
	}
	return decimals(v, n)
}

// ledger is the table of losses by load.
func (p *picture) ledger(base string, take []view.Link) *view.Ledger {
	unit := wattsFor(p.columns)
	l := &view.Ledger{Take: take, Caption: unit.unit + " at " + quantityOf(p.spot.vin, "V", 4) + " in, " +
		degreesCelsius(p.spot.ambient) + "; shade: share of the column’s loss"}
	if !p.paper {
		l.Opens = "a figure opens how it came about"
	}
	for i, q := range p.columns {
		share := loadShare(q.Iout / p.design.Output.Current.V)
		l.Columns = append(l.Columns, view.Link{Text: share, Href: p.spot.atLoad(share).address(base), Here: i == p.spot.load})
	}
	items := itemsOf(p.design, p.columns)
	var zero []Item
	for _, g := range groups {
		lines, nothing := p.groupLines(g, items, unit, base)
		l.Lines = append(l.Lines, lines...)
		zero = append(zero, nothing...)
	}
	if !slices.ContainsFunc(p.columns, func(q Point) bool { return q.Settled() }) {
		l.Lines = []view.LedgerLine{{Head: "no figures", Cells: make([]view.LedgerCell, len(p.columns))}}
	}
	l.Zero = p.zeroLinks(zero, base)
	p.explainGaps(l)
	l.Foot = p.foot(unit, base)
	l.Outside = slices.ContainsFunc(p.columns, outsideACurve)
	return l
}

func outsideACurve(q Point) bool {
	return q.Settled() && slices.ContainsFunc(q.Items, func(it Item) bool { return it.Outside })
}

// groupLines draws a part's subtotal and its items. Items that are 0 at every
// load are only named, so that the table holds what there is.
func (p *picture) groupLines(g group, items []Item, unit watts, base string) (lines []view.LedgerLine, zero []Item) {
	var members []int
	for i, it := range items {
		switch {
		case !slices.Contains(g.parts, it.Part):
		case p.nothing(i):
			zero = append(zero, it)
		default:
			members = append(members, i)
		}
	}
	if len(members) == 0 {
		return nil, zero
	}
	sums := p.cells(members, unit, false)
	p.openers(sums, subtotalKey+"."+g.key(), unit.unit, base)
	lines = append(lines, view.LedgerLine{Head: g.title, Class: "part " + g.class, Square: true, Cells: sums})
	for _, i := range members {
		cells := p.cells([]int{i}, unit, true)
		p.openers(cells, items[i].Part+"."+items[i].Kind, unit.unit, base)
		lines = append(lines, view.LedgerLine{Head: itemWords(items[i]), Class: g.class, Cells: cells})
	}
	return lines, zero
}

func zeroWords(it Item) string {
	switch it.Part {
	case "switch", "rectifier", "inductor":
		return partWords[it.Part] + " " + itemWords(it)
	}
	return itemWords(it)
}

// nothing reports whether an item is 0 wherever there are figures; where there
// are none at all, nothing can be said.
func (p *picture) nothing(item int) bool {
	seen := false
	for _, q := range p.columns {
		if q.Settled() {
			seen = true
			if q.Items[item].Power != 0 {
				return false
			}
		}
	}
	return seen
}

// cells adds up the items named, column by column.
func (p *picture) cells(items []int, unit watts, shaded bool) []view.LedgerCell {
	var cells []view.LedgerCell
	for _, q := range p.columns {
		if !q.Settled() {
			cells = append(cells, view.LedgerCell{})
			continue
		}
		sum, outside := 0.0, false
		for _, i := range items {
			sum += q.Items[i].Power
			outside = outside || q.Items[i].Outside
		}
		c := view.LedgerCell{Text: unit.write(sum)}
		if shaded {
			c.Class = shade(sum, q.Loss)
		}
		if outside && shaded {
			c.Class = strings.TrimSpace(c.Class + " mark")
		}
		cells = append(cells, c)
	}
	return cells
}

// shade is the class of a cell by its tenth of the column's loss.
func shade(power, loss float64) string {
	tenth := 0
	if loss > 0 {
		tenth = int(math.Round(10 * power / loss))
	}
	return "s" + strconv.Itoa(max(0, min(tenth, 10)))
}

// explainGaps puts the reason in place of the figures of columns without any,
// across all rows; neighbours with the same reason share it.
func (p *picture) explainGaps(l *view.Ledger) {
	rows := strconv.Itoa(len(l.Lines))
	for n := range l.Lines {
		var cells []view.LedgerCell
		for i := 0; i < len(p.columns); i++ {
			if p.columns[i].Settled() {
				cells = append(cells, l.Lines[n].Cells[i])
				continue
			}
			from := i
			for i+1 < len(p.columns) && !p.columns[i+1].Settled() && p.columns[i+1].Reason == p.columns[from].Reason {
				i++
			}
			if n == 0 {
				cells = append(cells, view.LedgerCell{Text: p.columns[from].Reason, Rows: rows, Columns: strconv.Itoa(i - from + 1)})
			}
		}
		l.Lines[n].Cells = cells
	}
}

// foot draws total, efficiency and temperatures.
func (p *picture) foot(unit watts, base string) []view.LedgerLine {
	rows := []struct {
		head, unit, class, key string
		write                  func(f *Figures) string
	}{
		{"Loss, " + unit.unit, unit.unit, "sum", budgetKey + ".loss", func(f *Figures) string { return unit.write(f.Loss) }},
		{"Efficiency, %", "%", "eta", budgetKey + ".efficiency", func(f *Figures) string { return percent(f.Efficiency) }},
		{p.heated("Switch", "switch"), "°C", "", temperatureKey + ".switch", func(f *Figures) string { return degrees(f.Temperatures.Switch) }},
		{p.heated("Rectifier", rectifierOf(p.design)), "°C", "", temperatureKey + ".rectifier", func(f *Figures) string { return degrees(f.Temperatures.Rectifier) }},
		{p.heated("Inductor", "inductor"), "°C", "", temperatureKey + ".inductor", func(f *Figures) string { return degrees(f.Temperatures.Inductor) }},
	}
	var lines []view.LedgerLine
	for _, row := range rows {
		l := view.LedgerLine{Head: row.head, Class: row.class}
		for _, q := range p.columns {
			text := quantity.NoFigure
			if q.Settled() {
				text = row.write(q.Figures)
			}
			l.Cells = append(l.Cells, view.LedgerCell{Text: text})
		}
		p.openers(l.Cells, row.key, row.unit, base)
		lines = append(lines, l)
	}
	return lines
}

// heated heads a row of temperatures; without a thermal resistance they are no more
// than the air's.
func (p *picture) heated(name, part string) string {
	if slot, ok := p.design.Slot(below(part, "theta_ja"), false); ok {
		if n, ok := slot.(*budget.Num); ok && n.Stated {
			return name + ", °C"
		}
	}
	return name + ", °C, θ not stated"
}

func rectifierOf(d *budget.Design) string {
	if d.Rectifier == "synchronous" {
		return "sync_switch"
	}
	return "diode"
}

// limitOf is the temperature a part may reach, entered or assumed.
func limitOf(d *budget.Design, path string) float64 {
	f, _ := budget.FieldAt(path)
	if slot, ok := d.Slot(path, false); ok {
		if n, ok := slot.(*budget.Num); ok && n.Stated {
			return n.V
		}
	}
	return f.Default
}
