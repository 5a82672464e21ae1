package web

import (
	"cmp"
	"fmt"
	"slices"
	"strings"

	"lossbook/budget"
	"lossbook/web/view"
)

// drift is one place of the sheet in which two drafts differ: an entry, or the
// rows of a curve, a list or the load profile, which are one place.
type drift struct {
	place string
	keys  []string // of the entries that differ
}

// drifts are the places in which two drafts differ, as typed, in the order of
// the sheet.
func drifts(was, now Draft) []drift {
	var list []drift
	note := func(key string) {
		place := placeOf(key)
		i := slices.IndexFunc(list, func(d drift) bool { return d.place == place })
		if i < 0 {
			list, i = append(list, drift{place: place}), len(list)
		}
		list[i].keys = append(list[i].keys, key)
	}
	for key, text := range was {
		if other, ok := now[key]; !ok || other != text {
			note(key)
		}
	}
	for key := range now {
		if _, ok := was[key]; !ok {
			note(key)
		}
	}
	order := sheetOrder()
	slices.SortFunc(list, func(a, b drift) int {
		return cmp.Or(cmp.Compare(order[a.place], order[b.place]), strings.Compare(a.place, b.place))
	})
	for _, d := range list {
		slices.Sort(d.keys)
	}
	return list
}

// placeOf is where on the sheet an entry stands: rows stand together, with their
// sources.
func placeOf(key string) string {
	field, isSource := strings.CutPrefix(key, sources)
	place, _, isRow := strings.Cut(field, "[")
	if isSource && !isRow {
		return key
	}
	return place
}

// sheetOrder numbers the places of a sheet from above.
func sheetOrder() map[string]int {
	order := map[string]int{}
	add := func(place string) { order[place] = len(order) + 1 }
	for _, p := range budget.Parts() {
		if p.List {
			add(p.Path)
			continue
		}
		for _, f := range p.Fields {
			add(f.Path)
			add(sources + f.Path)
		}
	}
	add(rippleRatio)
	add(profilePath)
	return order
}

// first is the entry to be looked at: of several rows the beginning of the first.
func (d drift) first() string {
	if len(d.keys) == 1 || !rowed(d.place) {
		return d.keys[0]
	}
	row := budget.MaxRows
	for _, key := range d.keys {
		if i, ok := indexUnder(strings.TrimPrefix(key, sources), d.place); ok {
			row = min(row, i)
		}
	}
	cells, _ := cellsOf(d.place)
	return rowPath(d.place, row) + cells[0]
}

// turn words what leads from one draft to another; without a label it is nothing.
func turn(now, next Draft) view.Step {
	list := drifts(now, next)
	if len(list) == 0 {
		return view.Step{}
	}
	s := list[0].words(now, next)
	if more := len(list) - 1; more > 0 {
		s.More = fmt.Sprintf("and %d more", more)
	}
	return s
}

func (d drift) words(now, next Draft) view.Step {
	if len(d.keys) == 1 && now.has(d.keys[0]) && next.has(d.keys[0]) || !rowed(d.place) {
		return d.entry(now, next)
	}
	s := view.Step{Label: placeLabel(d.place), To: "other values"}
	if was, is := now.shownRows(d.place), next.shownRows(d.place); was != is {
		s.From, s.To = plural(was, "row", "rows"), plural(is, "row", "rows")
	}
	return s
}

// entry is the one entry that differs.
func (d drift) entry(now, next Draft) view.Step {
	key := d.keys[0]
	f, _ := budget.FieldAt(key)
	shown := func(text string) string {
		if blank(text) {
			return "blank"
		}
		return clipped(worded(f, strings.TrimSpace(text)))
	}
	s := view.Step{Label: labelOf(key), From: shown(now[key]), To: shown(next[key])}
	if !rowed(d.place) {
		s.Symbol = symbolOf(f.Symbol)
	}
	return s
}

func (t Draft) has(key string) bool { _, ok := t[key]; return ok }

// rowed reports whether a place has rows.
func rowed(place string) bool {
	cells, _ := cellsOf(place)
	return cells != nil
}

func placeLabel(place string) string {
	if place == profilePath {
		return "Load profile"
	}
	for _, p := range budget.Parts() {
		if p.List && p.Path == place {
			return p.Name
		}
	}
	return labelOf(place)
}

// run names what is being typed, if the difference is the text of one entry.
func run(was, now Draft) string {
	list := drifts(was, now)
	if len(list) != 1 || len(list[0].keys) != 1 {
		return ""
	}
	return list[0].keys[0]
}
