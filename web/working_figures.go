package web

import (
	"slices"
	"strings"

	"lossbook/budget"
	"lossbook/web/quantity"
	"lossbook/web/view"
)

// figure is a row of the ledger as an address names it: what its cells show, and how
// the model explains them.
type figure struct {
	title string
	unit  quantity.Unit
	shown func(f *Figures) float64
	// Of a figure that is made of other cells: whether these are the same in both.
	alike func(kept, now *Figures) bool
	ask   func(m *budget.Model, b *budget.Budget) (budget.Working, bool)
	left  func(b *budget.Budget) float64 // how far it may be from the solution, of a figure that a point is solved for
}

// The rows that are no items are named by these, before a point.
const (
	subtotalKey    = "subtotal"
	budgetKey      = "budget"
	temperatureKey = "temperature"
)

// figureOf finds the row that an address names, among a table's losses:
// "switch.conduction" is an item, "subtotal.switch" a part's sum, "temperature.switch"
// and "budget.loss" a line of the foot.
func figureOf(items []Item, key string) (figure, bool) {
	kind, name, _ := strings.Cut(key, ".")
	switch kind {
	case subtotalKey:
		return subtotalFigure(name)
	case budgetKey:
		f, known := budgetFigures[name]
		return f, known
	case temperatureKey:
		return temperatureFigure(name)
	}
	return itemFigure(items, kind, name)
}

// itemFigure is found by its names: the losses of a revision are those it was saved
// with, which needn't be today's.
func itemFigure(items []Item, part, kind string) (figure, bool) {
	i := slices.IndexFunc(items, func(it Item) bool { return it.Part == part && it.Kind == kind })
	return figure{
		title: workingTitle(Item{Part: part, Kind: kind}), unit: "W",
		shown: func(f *Figures) float64 { return f.Items[i].Power },
		ask: func(m *budget.Model, b *budget.Budget) (budget.Working, bool) {
			return m.Working(b, part, kind)
		},
	}, i >= 0
}

func subtotalFigure(name string) (figure, bool) {
	i := slices.IndexFunc(groups, func(g group) bool { return g.key() == name })
	if i < 0 {
		return figure{}, false
	}
	g := groups[i]
	return figure{
		title: g.title + ", all losses", unit: "W",
		shown: func(f *Figures) (sum float64) {
			for _, it := range summands(f.Items, g.parts...) {
				sum += it.Power
			}
			return sum
		},
		alike: func(kept, now *Figures) bool {
			return !itemsDiffer(summands(kept.Items, g.parts...), summands(now.Items, g.parts...))
		},
		ask: func(m *budget.Model, b *budget.Budget) (budget.Working, bool) { return m.Subtotal(b, g.parts...) },
	}, true
}

// summands are the losses that a sum is made of: those of the parts, or of all where
// none is named, without those that are 0.
func summands(items []Item, parts ...string) (list []Item) {
	for _, it := range items {
		if it.Power != 0 && (len(parts) == 0 || slices.Contains(parts, it.Part)) {
			list = append(list, it)
		}
	}
	return list
}

var budgetFigures = map[string]figure{
	"loss": {
		title: "Loss", unit: "W", shown: func(f *Figures) float64 { return f.Loss }, ask: (*budget.Model).Loss,
		alike: func(kept, now *Figures) bool { return !itemsDiffer(summands(kept.Items), summands(now.Items)) },
		left:  func(b *budget.Budget) float64 { return b.LossError },
	},
	"efficiency": {
		title: "Efficiency", shown: func(f *Figures) float64 { return f.Efficiency }, ask: (*budget.Model).EfficiencyWorking,
		alike: func(kept, now *Figures) bool { return !far(kept.Pout, now.Pout) && !far(kept.Loss, now.Loss) },
	},
}

func temperatureFigure(part string) (figure, bool) {
	of, known := map[string]func(t Temperatures) float64{
		"switch":    func(t Temperatures) float64 { return t.Switch },
		"rectifier": func(t Temperatures) float64 { return t.Rectifier },
		"inductor":  func(t Temperatures) float64 { return t.Inductor },
	}[part]
	return figure{
		title: capital(part) + ", temperature", unit: "°C",
		shown: func(f *Figures) float64 { return of(f.Temperatures) },
		ask: func(m *budget.Model, b *budget.Budget) (budget.Working, bool) {
			return m.TemperatureWorking(b, part)
		},
		left: func(b *budget.Budget) float64 { return of(Temperatures(b.HeatErrors)) },
	}, known
}

// solved says how the point was found whose figure it is, and how far that may still be
// from the solution.
func (f figure) solved(b *budget.Budget) string {
	if f.left == nil {
		return ""
	}
	unit := f.unit
	if unit == "°C" {
		unit = "K"
	}
	words := "Solved in " + plural(b.Iterations, "evaluation", "evaluations") + " of all losses"
	if left := f.left(b); left > 0 {
		return words + "; within about " + quantityOf(left, unit, 2) + " of the solution."
	}
	return words + "."
}

// key names the group in addresses.
func (g group) key() string { return strings.TrimPrefix(g.class, "p-") }

// openers lead from the cells of a row to how each figure came about.
func (p *picture) openers(cells []view.LedgerCell, key, unit, base string) {
	if p.paper {
		return
	}
	for i, q := range p.columns {
		if !q.Settled() {
			continue
		}
		text := cells[i].Text
		if text == "·" {
			text = "0"
		}
		sight := p.spot.atLoad(loadShare(q.Iout / p.design.Output.Current.V)).opened(key)
		cells[i].Working = view.Link{Text: text + " " + unit + ": how it came about", Href: sight.address(base),
			Here: i == p.spot.load && key == p.spot.working}
		cells[i].Aside = i != p.spot.load
	}
}

// zeroLinks lead to why losses are 0, at the load that is looked at.
func (p *picture) zeroLinks(zero []Item, base string) []view.Link {
	var links []view.Link
	for _, it := range zero {
		key := it.Part + "." + it.Kind
		links = append(links, view.Link{Text: zeroWords(it), Href: p.spot.opened(key).address(base), Here: key == p.spot.working})
	}
	return links
}
