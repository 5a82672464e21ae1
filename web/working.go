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
	f, known := figureOf(itemsOf(p.design, p.columns), p.spot.working)
	q := p.chosen()
	if known {
		w.Title = f.title
	}
	switch {
	case !known:
		w.Unlike = "The ledger has no figure of that name."
	case q == nil:
		w.Unlike = "This point was not kept."
	case !q.Settled():
		w.Unlike = q.Reason
	default:
		p.explain(w, q, f)
		if !strings.HasPrefix(base, sharePrefix) {
			w.Checked = checkedAt(p.spot.working)
		}
	}
	return w
}

// explain works the figure out anew from the design. Where that gives another than
// the one shown, as an older model's may be, or the same from other cells, it says so
// instead: no term is shown that does not lead to the figure.
func (p *picture) explain(w *view.Working, q *Point, f figure) {
	shown := f.shown(q.Figures)
	found, b, known := f.workedOut(p.design, q)
	switch kept := "Kept as " + showing(shown, f.unit) + ". Model " + budget.ModelVersion + ", which runs now, "; {
	case !known:
		w.Unlike = kept + "has no working of it."
	case far(found.Value(), shown):
		w.Unlike = kept + "gives " + showing(found.Value(), f.unit) + ", so its working would not be that of the figure kept."
	case f.alike != nil && !f.alike(q.Figures, figuresOf(b)):
		w.Unlike = kept + "gives the same, but not from the figures kept beside it; so its working would not be that of the figure kept."
	default:
		w.Anew = p.anew()
		fillWorking(w, p.design, found)
		w.Solved = f.solved(b)
	}
}

// anew says that a working is of another model than the figure, where it is.
func (p *picture) anew() string {
	if p.model == "" || p.model == budget.ModelVersion {
		return ""
	}
	return "Kept with model " + p.model + ". Model " + budget.ModelVersion + ", which runs now, gives the same figure; this is its working."
}

// workedOut asks the model how the figure came about at a point.
func (f figure) workedOut(d *budget.Design, q *Point) (w budget.Working, b *budget.Budget, known bool) {
	model, err := budget.Prepare(d)
	if err != nil {
		return w, nil, false
	}
	b = new(budget.Budget)
	model.At(budget.Point{Vin: q.Vin, Iout: q.Iout, Ambient: q.Ambient}, b)
	w, known = f.ask(model, b)
	return w, b, known
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
