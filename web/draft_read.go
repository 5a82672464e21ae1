package web

import (
	"fmt"
	"maps"
	"slices"
	"strconv"
	"strings"

	"lossbook/budget"
	"lossbook/web/quantity"
)

// design reads every entry by its field's unit. It returns the design as far as
// it can be read, and everything that keeps it from a budget, at the paths as
// typed; without errors the design is complete and valid.
func (t Draft) design() (*budget.Design, []budget.FieldError) {
	r := reading{draft: t, design: &budget.Design{Format: budget.Format}, typed: map[string]string{}}
	for _, part := range budget.Parts() {
		if part.List {
			r.list(part)
			continue
		}
		for _, f := range part.Fields {
			r.field(f, f.Path, f.Path)
		}
	}
	r.sources()
	r.errs = r.withoutUnused(r.errs)
	for _, e := range budget.Validate(r.design) {
		r.add(budget.FieldError{Path: r.asTyped(e.Path), Message: e.Message, Missing: e.Missing})
	}
	return r.design, r.errs
}

// reading is a draft on its way to a design.
type reading struct {
	draft  Draft
	design *budget.Design
	errs   []budget.FieldError
	typed  map[string]string // path of a row in the design → path of the row as typed
}

func (r *reading) add(e budget.FieldError) {
	known := slices.ContainsFunc(r.errs, func(have budget.FieldError) bool { return have.Path == e.Path })
	if !known {
		r.errs = append(r.errs, e)
	}
}

// field reads the entry typed at one path into the design at another: they
// differ where rows before it are empty.
func (r *reading) field(f budget.Field, typed, path string) {
	if f.Kind == budget.Rows {
		r.curve(f, typed)
		return
	}
	text := r.draft[typed]
	if blank(text) {
		return
	}
	slot, ok := r.design.Slot(path, true)
	if !ok {
		return
	}
	switch v := slot.(type) {
	case *string:
		*v = text
	case *budget.Num:
		if value, ok := r.number(typed, text, f.Unit); ok {
			*v = budget.N(value)
		}
	}
}

func (r *reading) number(path, text, unit string) (float64, bool) {
	v, err := quantity.Parse(text, quantity.Unit(unit))
	if err != nil {
		r.add(budget.FieldError{Path: path, Message: err.Error()})
		return 0, false
	}
	return v, true
}

// curve reads the rows of a curve. One with a row that cannot be read is left
// out as a whole, so that its neighbours are not blamed for the gap.
func (r *reading) curve(f budget.Field, path string) {
	var rows budget.Curve
	bad := false
	for _, i := range r.rows(path) {
		row, ok := r.curveRow(f, path, i)
		if !ok {
			bad = true
			continue
		}
		r.typed[rowPath(path, len(rows))] = rowPath(path, i)
		rows = append(rows, row)
	}
	if bad || len(rows) == 0 {
		return
	}
	if slot, ok := r.design.Slot(path, true); ok {
		*slot.(*budget.Curve) = rows
	}
}

func (r *reading) curveRow(f budget.Field, path string, i int) (row [2]float64, ok bool) {
	ok = true
	for column, unit := range []string{f.XUnit, f.Unit} {
		at := cellPath(path, i, column)
		text := r.draft[at]
		if blank(text) {
			r.add(budget.FieldError{Path: at, Message: "is empty: a row has both values, or none", Missing: true})
			ok = false
			continue
		}
		v, read := r.number(at, text, unit)
		row[column], ok = v, ok && read
	}
	return row, ok
}

// list reads a list of objects; rows without an entry are dropped.
func (r *reading) list(part budget.Part) {
	for place, i := range r.rows(part.Path) {
		typed, path := rowPath(part.Path, i), rowPath(part.Path, place)
		r.typed[path] = typed
		for _, f := range part.Fields {
			r.field(f, below(typed, f.Key), below(path, f.Key))
		}
	}
}

func (r *reading) sources() {
	for path, text := range r.draft {
		if field, ok := strings.CutPrefix(path, sources); ok && !blank(text) {
			if r.design.Sources == nil {
				r.design.Sources = map[string]string{}
			}
			r.design.Sources[field] = text
		}
	}
}

// withoutUnused forgives the part that the rectifier's kind does not need: it
// is kept as typed and not validated.
func (r *reading) withoutUnused(errs []budget.FieldError) []budget.FieldError {
	unused := map[string]string{"diode": "sync_switch.", "synchronous": "diode."}[r.design.Rectifier]
	return slices.DeleteFunc(errs, func(e budget.FieldError) bool {
		return unused != "" && strings.HasPrefix(e.Path, unused)
	})
}

// asTyped finds where the entry behind a path of the design stands on the sheet.
func (r *reading) asTyped(path string) string {
	for end := strings.LastIndexByte(path, ']'); end >= 0; end = strings.LastIndexByte(path[:end], ']') {
		if typed, ok := r.typed[path[:end+1]]; ok {
			return typed + path[end+1:]
		}
	}
	return path
}

// rows returns, in order, the indices under a path that hold an entry.
func (t Draft) rows(path string) []int {
	found := map[int]bool{}
	for key, text := range t {
		rest, ok := strings.CutPrefix(key, path+"[")
		if !ok || blank(text) {
			continue
		}
		digits, _, _ := strings.Cut(rest, "]")
		if i, err := strconv.Atoi(digits); err == nil && i >= 0 {
			found[i] = true
		}
	}
	return slices.Sorted(maps.Keys(found))
}

// rows returns those of the draft, and refuses more than a design holds.
func (r *reading) rows(path string) []int {
	rows := r.draft.rows(path)
	if len(rows) > budget.MaxRows {
		r.add(budget.FieldError{Path: path, Message: fmt.Sprintf("has %d rows; at most %d are taken", len(rows), budget.MaxRows)})
		rows = rows[:budget.MaxRows]
	}
	return rows
}
