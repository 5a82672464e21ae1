package web

import (
	"strings"

	"lossbook/web/view"
)

// spotOf is the id on the sheet that is nearest to an entry: its own, its row's
// or curve's, its part's; the rectifier's choice for a kind that is not in use.
func spotOf(v view.Sheet, key string) string {
	place := placeOf(key)
	part := place
	if i := strings.LastIndexByte(place, '.'); i >= 0 {
		part = place[:i]
	}
	for _, id := range []string{"f-" + key, "f-" + place, "part-" + place, "part-" + part} {
		if reveal(v, id, false) {
			return id
		}
	}
	return "f-rectifier"
}

// reveal reports whether the entries of a sheet hold an id; the groups around it
// are opened if that is asked for.
func reveal(v view.Sheet, id string, open bool) bool {
	for i := range v.Sections {
		if revealWithin(&v.Sections[i], id, open) {
			return true
		}
	}
	found := id == "part-profile"
	for _, r := range v.Profile.Rows {
		found = found || anyCell(id, r.Cells...)
	}
	return found
}

func revealWithin(s *view.Section, id string, open bool) bool {
	if s.ID == id {
		return true
	}
	for i := range s.Fields {
		if revealField(&s.Fields[i], id, open) {
			return true
		}
	}
	if s.List != nil && revealRow(s.List, id, open) {
		return true
	}
	for i := range s.More {
		if revealWithin(&s.More[i], id, open) {
			s.More[i].Open = s.More[i].Open || open
			return true
		}
	}
	return false
}

func revealField(f *view.Field, id string, open bool) bool {
	if f.Curve != nil {
		for _, r := range f.Curve.Rows {
			if anyCell(id, r.X, r.Y) {
				return true
			}
		}
	}
	if f.Source != nil && "f-"+f.Source.Name == id {
		f.Unfolded = f.Unfolded || open
		return true
	}
	return f.ID() == id
}

func revealRow(l *view.Rows, id string, open bool) bool {
	for _, r := range l.Rows {
		if anyCell(id, append(r.Cells, r.Title)...) {
			return true
		}
		if r.Source.Name != "" && r.Source.ID() == id {
			l.Unfolded = l.Unfolded || open
			return true
		}
	}
	return false
}

func anyCell(id string, cells ...view.Cell) bool {
	for _, c := range cells {
		if c.ID() == id {
			return true
		}
	}
	return false
}
