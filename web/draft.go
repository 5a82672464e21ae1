package web

import (
	"encoding/json"
	"fmt"
	"maps"
	"slices"
	"strconv"
	"strings"

	"lossbook/budget"
	"lossbook/web/quantity"
)

// Draft is what is typed on a sheet: entries as text by their JSON path, kept
// as typed, complete or not, wrong or not. Rows of lists and curves carry their
// index ("series_resistances[1].name", "switch.rds_on_curve[0][1]"), and the
// source of a value stands under its path ("sources.switch.rds_on").
type Draft map[string]string

// rippleRatio is the one entry that only a draft has: the ripple wanted of an
// inductor that is not chosen yet.
const rippleRatio = "specification.ripple_ratio"

// defaultRipple is the ratio assumed until one is entered: the middle of the
// usual 0.2 to 0.4 (common practice).
const defaultRipple = 0.3

const sources = "sources."

// draftOf writes a design as entries that read back as the same design.
func draftOf(d *budget.Design) Draft {
	t := Draft{}
	for _, part := range budget.Parts() {
		if !part.List {
			t.take(d, part, part.Path)
			continue
		}
		for i := 0; t.take(d, part, rowPath(part.Path, i)); i++ {
		}
	}
	for path, text := range d.Sources {
		t[sources+path] = text
	}
	return t
}

// take copies the fields of the part at the path; it says whether there is one.
func (t Draft) take(d *budget.Design, part budget.Part, path string) bool {
	found := false
	for _, f := range part.Fields {
		at := below(path, f.Key)
		slot, ok := d.Slot(at, false)
		if !ok {
			continue
		}
		found = true
		t.put(at, f, slot)
	}
	return found
}

func (t Draft) put(path string, f budget.Field, slot any) {
	switch v := slot.(type) {
	case *string:
		if *v != "" {
			t[path] = *v
		}
	case *budget.Num:
		if v.Stated {
			t[path] = quantity.Format(v.V, quantity.Unit(f.Unit))
		}
	case *budget.Curve:
		for i, row := range *v {
			t[cellPath(path, i, 0)] = quantity.Format(row[0], quantity.Unit(f.XUnit))
			t[cellPath(path, i, 1)] = quantity.Format(row[1], quantity.Unit(f.Unit))
		}
	}
}

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

// ripple returns the wanted ripple ratio, and what is wrong with the entry.
func (t Draft) ripple() (float64, []budget.FieldError) {
	text := t[rippleRatio]
	if blank(text) {
		return defaultRipple, nil
	}
	v, err := quantity.Parse(text, "")
	if err != nil {
		return defaultRipple, []budget.FieldError{{Path: rippleRatio, Message: err.Error()}}
	}
	if v <= 0 || v > 2 {
		return defaultRipple, []budget.FieldError{{Path: rippleRatio, Message: "must be above 0 and at most 2, the ratio at which the current touches zero"}}
	}
	return v, nil
}

// stored returns the draft as it is kept, and the design beside it if the draft
// is complete.
func (t Draft) stored() (draft, complete []byte, err error) {
	if draft, err = json.Marshal(t); err != nil {
		return nil, nil, err
	}
	if d, wrong := t.design(); len(wrong) == 0 {
		complete, err = json.Marshal(d)
	}
	return draft, complete, err
}

// readDraft reads a draft as it was kept.
func readDraft(stored []byte) (Draft, error) {
	t := Draft{}
	if err := json.Unmarshal(stored, &t); err != nil {
		return nil, fmt.Errorf("stored draft: %w", err)
	}
	return t, nil
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

func blank(text string) bool { return strings.TrimSpace(text) == "" }

func below(part, key string) string {
	if part == "" {
		return key
	}
	return part + "." + key
}

func rowPath(path string, i int) string { return path + "[" + strconv.Itoa(i) + "]" }

func cellPath(path string, i, column int) string { return rowPath(rowPath(path, i), column) }
