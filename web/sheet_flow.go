package web

import (
	"math"
	"slices"
	"strconv"
	"strings"

	"lossbook/web/quantity"
	"lossbook/web/view"
)

// stretch is a part or an item on its way to the strip: where it begins and how wide
// it is, as shares of the loss.
type stretch struct {
	from, width float64
	words       string
	class       string // of a part
	power       float64
}

func (s stretch) middle() float64 { return s.from + s.width/2 }

// flow draws the watts at the point looked at.
func (p *picture) flow() *view.Flow {
	q := p.chosen()
	switch {
	case q == nil:
		return &view.Flow{Reason: "it was not kept"}
	case !q.Settled():
		return &view.Flow{Reason: q.Reason}
	case !(q.Loss > 0):
		return &view.Flow{Reason: "nothing is lost"}
	}
	unit := wattsOf(q.Loss)
	f := &view.Flow{Unit: unit.unit, Column: view.Link{Text: "ledger", Href: "#ledger-title"}}
	f.In, f.Out, f.Lost = ends(q.Figures)
	share := q.Loss / q.Pin
	f.LossWidth, f.Wedge = along(share), "0,0 "+strconv.FormatFloat(100*share, 'f', 3, 64)+",0 100,100 0,100"
	parts, items := partsOf(q.Figures)
	for i, part := range parts {
		f.Parts = append(f.Parts, flowPart(part, items[i], unit, q.Loss))
	}
	setFlowNames(f, parts, items, q.Loss)
	f.Told, f.Rows = told(f), flowRows(parts, items, unit, q.Figures)
	return f
}

// wattsOf is the unit of the strip: W from one on.
func wattsOf(loss float64) watts {
	if loss >= 1 {
		return watts{"W", 1, 3}
	}
	return watts{"mW", 1e3, 2}
}

// ends words input, output and loss with so many decimals that the difference of the
// first two shows the third.
func ends(f *Figures) (in, out, lost string) {
	scale := quantity.ScaleFor(f.Pin, "W")
	places := max(0, min(2-int(math.Floor(math.Log10(f.Loss/scale.Factor))), 4))
	write := func(power float64) string { return decimals(power/scale.Factor, places) + "\u00a0" + scale.Unit }
	share := f.Loss / f.Pin
	return write(f.Pin) + " in", write(f.Pout) + " out, " + percent(f.Efficiency) + "\u00a0%",
		write(f.Loss) + " lost, " + percent(share) + "\u00a0% of the input, by part:"
}

// partsOf lays the parts that lose something end to end, and their items within.
func partsOf(f *Figures) (parts []stretch, items [][]stretch) {
	at := 0.0
	for _, g := range groups {
		part := stretch{from: at, words: g.title, class: g.class}
		var inside []stretch
		for _, it := range f.Items {
			if it.Power > 0 && slices.Contains(g.parts, it.Part) {
				one := stretch{from: at, width: it.Power / f.Loss, words: itemWords(it), power: it.Power}
				inside = append(inside, one)
				at += one.width
				part.power += it.Power
			}
		}
		if part.width = at - part.from; len(inside) > 0 {
			parts, items = append(parts, part), append(items, inside)
		}
	}
	return parts, items
}

func flowPart(part stretch, items []stretch, unit watts, loss float64) view.FlowPart {
	v := view.FlowPart{Name: part.words, Class: part.class, Figures: flowFigures(part.power, unit, loss)}
	if part.from > 0 {
		v.Edge = along(part.from)
	}
	for i, it := range items {
		one := view.FlowItem{X: along(it.from), Width: along(it.width),
			Told: part.words + ", " + it.words + ": " + flowFigures(it.power, unit, loss)}
		if i > 0 {
			one.Edge = one.X
		}
		v.Items = append(v.Items, one)
	}
	return v
}

// flowFigures are what a part or an item loses, and its share of the loss.
func flowFigures(power float64, unit watts, loss float64) string {
	return unit.write(power) + "\u00a0" + unit.unit + " · " + shareWords(power, loss)
}

func shareWords(power, loss float64) string { return shareNumber(power, loss) + "\u00a0%" }

func shareNumber(power, loss float64) string {
	switch share := 100 * power / loss; {
	case share >= 9.95:
		return decimals(share, 0)
	case share >= 0.05 || share == 0:
		return decimals(share, 1)
	}
	return "< 0.1"
}

// along writes a share of the strip's width.
func along(share float64) string {
	return strconv.FormatFloat(math.Round(share*1e5)/1e3, 'f', -1, 64) + "%"
}

// told says the strip in words.
func told(f *view.Flow) string {
	parts := make([]string, len(f.Parts))
	for i, p := range f.Parts {
		parts[i] = p.Name + " " + p.Figures
	}
	return f.In + ", " + f.Out + ", " + f.Lost + " " + strings.Join(parts, ", ")
}

// flowRows is the table of the strip.
func flowRows(parts []stretch, items [][]stretch, unit watts, f *Figures) []view.FlowRow {
	rows := []view.FlowRow{{Head: "Input", Power: unit.write(f.Pin)}}
	for i, part := range parts {
		rows = append(rows, view.FlowRow{Class: "part", Head: part.words, Power: unit.write(part.power), Share: shareNumber(part.power, f.Loss)})
		for _, it := range items[i] {
			rows = append(rows, view.FlowRow{Head: it.words, Power: unit.write(it.power), Share: shareNumber(it.power, f.Loss)})
		}
	}
	return append(rows, view.FlowRow{Class: "part", Head: "Loss", Power: unit.write(f.Loss), Share: shareNumber(1, 1)},
		view.FlowRow{Class: "part", Head: "Output", Power: unit.write(f.Pout)})
}
