package web

import (
	"slices"
	"strings"

	"lossbook/budget"
	"lossbook/budget/formula"
	"lossbook/web/quantity"
	"lossbook/web/view"
)

// working draws how the figure came about that the address asks for; nil if it asks
// for none.
func (p *picture) working(base string) *view.Working {
	if p.spot.working == "" {
		return nil
	}
	w := &view.Working{Title: "No such figure", Close: p.spot.opened("").address(base), Cell: p.spot.address(base), At: p.spot.words(p.design)}
	part, kind, _ := strings.Cut(p.spot.working, ".")
	row := slices.Index(budget.Ledger(p.design), budget.Row{Part: part, Kind: kind})
	q := p.chosen()
	switch {
	case row < 0:
		w.Unlike = "The ledger has no loss of that name."
	case q == nil:
		w.Unlike = "This point was not kept."
	case !q.Settled():
		w.Unlike = q.Reason
	default:
		p.explain(w, q, part, kind)
	}
	return w
}

// explain works the figure out anew from the design. Where that gives another than
// the one shown, as an older model's may be, it says so instead.
func (p *picture) explain(w *view.Working, q *Point, part, kind string) {
	i := slices.IndexFunc(q.Items, func(it Item) bool { return it.Part == part && it.Kind == kind })
	if i < 0 {
		w.Unlike = "This loss was not kept."
		return
	}
	w.Title = workingTitle(q.Items[i])
	found, known := workedOut(p.design, q, part, kind)
	switch kept := showing(q.Items[i].Power, "W"); {
	case !known:
		w.Unlike = "Kept as " + kept + ". Model " + budget.ModelVersion + ", which runs now, has no figure here, so there is no working of it."
	case far(found.Power, q.Items[i].Power):
		w.Unlike = "Kept as " + kept + ". Model " + budget.ModelVersion + ", which runs now, gives " + showing(found.Power, "W") +
			", so its working would not be that of the figure kept."
	default:
		fillWorking(w, p.design, found)
	}
}

// workedOut asks the model how the loss at a point came about.
func workedOut(d *budget.Design, q *Point, part, kind string) (budget.Working, bool) {
	model, err := budget.Prepare(d)
	if err != nil {
		return budget.Working{}, false
	}
	var b budget.Budget
	model.At(budget.Point{Vin: q.Vin, Iout: q.Iout, Ambient: q.Ambient}, &b)
	return model.Working(&b, part, kind)
}

func fillWorking(w *view.Working, d *budget.Design, found budget.Working) {
	w.Outside = found.Outside
	main := stepOf(found.Steps[0])
	main.Words = ""
	w.Main = &main
	for _, step := range found.Steps[1:] {
		if slices.ContainsFunc(found.Steps[0].Terms, func(t budget.Term) bool { return t.Name == step.Name }) {
			w.Near = append(w.Near, stepOf(step))
		} else {
			w.Far = append(w.Far, stepOf(step))
		}
	}
	w.Behind = plural(len(w.Far), "quantity behind these", "quantities behind these")
	w.Entries = entriesOf(d, found.Steps)
}

// stepOf draws one quantity: in symbols, in numbers, and what it comes to.
func stepOf(step budget.Step) view.WorkingStep {
	v := view.WorkingStep{Words: termWords[step.Name], Name: symbolMath(step.Name), Result: valueMath(step.Value, step.Unit),
		Instead: sentence(step.Words), Source: sentence(step.Source)}
	if step.Solved {
		v.Balanced = feedsBack
	}
	if step.Formula == nil {
		return v
	}
	symbols := setter{}.set(step.Formula.Root, loose)
	v.Symbols = &symbols
	if len(step.Terms) == 0 || step.Formula.Root.Kind == formula.Name {
		return v // the result is all there is to put in
	}
	values := map[string]budget.Term{}
	for _, t := range step.Terms {
		values[t.Name] = t
	}
	numbers := setter{values}.set(step.Formula.Root, loose)
	v.Numbers = &numbers
	return v
}

// entriesOf lists what the steps rest on, each entry once, with where it comes from.
func entriesOf(d *budget.Design, steps []budget.Step) []view.WorkingEntry {
	entries := draftOf(d)
	var list []view.WorkingEntry
	seen := map[string]bool{}
	add := func(path, symbol string) {
		if path == "" || seen[path] {
			return
		}
		seen[path] = true
		list = append(list, entryOf(entries, path, symbol))
	}
	for _, step := range steps {
		for _, t := range step.Terms {
			add(t.Path, t.Name)
		}
		for _, path := range step.Inputs {
			f, _ := budget.FieldAt(path)
			add(path, f.Symbol)
		}
	}
	return list
}

func entryOf(entries Draft, path, symbol string) view.WorkingEntry {
	f, _ := budget.FieldAt(path)
	e := view.WorkingEntry{Symbol: symbolMath(symbol), Label: labelOf(path), Source: entries[sources+path], Unsupported: "no source noted"}
	switch text := worded(f, entries[path]); {
	case f.Kind == budget.Rows:
		e.Value = plural(entries.shownRows(path), "row", "rows")
	case !blank(text):
		e.Value = text
	case f.Kind == budget.Number:
		e.Value, e.Unsupported = quantity.Format(f.Default, quantity.Unit(f.Unit)), "not stated, so assumed"
	default:
		e.Value, e.Unsupported = f.Options[0].Label, "not stated, so assumed"
	}
	return e
}

// openers lead from the cells of an item to how each figure came about.
func (p *picture) openers(cells []view.LedgerCell, it Item, unit watts, base string) {
	for i, q := range p.columns {
		if !q.Settled() {
			continue
		}
		text := cells[i].Text
		if text == "·" {
			text = "0"
		}
		sight := p.spot.atLoad(loadShare(q.Iout / p.design.Output.Current.V)).opened(it.Part + "." + it.Kind)
		cells[i].Working = view.Link{Text: text + " " + unit.unit + ": how it came about", Href: sight.address(base),
			Here: i == p.spot.load && sight.working == p.spot.working}
	}
}

// zeroLinks lead to why losses are 0, at the load that is looked at.
func (p *picture) zeroLinks(zero []Item, base string) []view.Link {
	var links []view.Link
	for _, it := range zero {
		sight := p.spot.opened(it.Part + "." + it.Kind)
		links = append(links, view.Link{Text: zeroWords(it), Href: sight.address(base), Here: sight.working == p.spot.working})
	}
	return links
}
