package web

import (
	"encoding/json"
	"fmt"
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

func blank(text string) bool { return strings.TrimSpace(text) == "" }

func below(part, key string) string {
	if part == "" {
		return key
	}
	return part + "." + key
}

func rowPath(path string, i int) string { return path + "[" + strconv.Itoa(i) + "]" }

func cellPath(path string, i, column int) string { return rowPath(rowPath(path, i), column) }
