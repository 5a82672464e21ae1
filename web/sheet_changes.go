package web

import (
	"context"
	"slices"
	"strconv"
	"strings"

	"lossbook/budget"
	"lossbook/web/view"
)

// changes lists what differs from the last revision, in the order of the sheet, each
// with the way to its entry.
func (s *sheet) changes(ctx context.Context) ([]view.Change, error) {
	list := changes(s.last.entries, draftOf(s.design), s.unread())
	for i := range list {
		list[i].Href = s.placeOf(strings.TrimPrefix(list[i].Href, "#f-"))
	}
	list = append(list, rippleChange(s.last.typed, s.draft)...)
	profile, err := s.profileChange(ctx)
	return append(list, profile...), err
}

// isKept reports whether the entries are those of the last revision.
func (s *sheet) isKept() bool {
	return s.last != nil && len(changes(s.last.entries, draftOf(s.design), s.unread())) == 0 && len(rippleChange(s.last.typed, s.draft)) == 0 &&
		s.last.typed.profileText() == s.draft.profileText()
}

// unread are the entries that are typed and can't be read, at the places that the
// design would have them. What the last revision was kept with as well, in a part that
// it did not need, is not among them.
func (s *sheet) unread() Draft {
	now, list := draftOf(s.design), Draft{}
	for path, text := range s.draft {
		at := s.draft.readAt(path)
		if !blank(text) && blank(now[at]) && (s.last.typed[path] != text || !blank(s.last.entries[at])) {
			list[at] = text
		}
	}
	return list
}

// firstRow parts a path at its first row: before it, its number, behind it.
func firstRow(path string) (list string, row int, rest string, ok bool) {
	list, rest, _ = strings.Cut(path, "[")
	digits, rest, ok := strings.Cut(rest, "]")
	row, err := strconv.Atoi(digits)
	return list, row, rest, ok && err == nil && !strings.HasPrefix(path, sources)
}

// readAt is where the design has the entry that is typed at a path: rows without an
// entry count for nothing there.
func (t Draft) readAt(path string) string {
	if list, row, rest, ok := firstRow(path); ok {
		if place := slices.Index(t.rows(list), row); place >= 0 {
			return rowPath(list, place) + rest
		}
	}
	return path
}

// placeOf leads to the entry that the design has at a path; where its row is gone, to
// the list; where the rectifier's kind hides it, to that choice.
func (s *sheet) placeOf(path string) string {
	if part, _, _ := strings.Cut(strings.TrimPrefix(path, sources), "."); unused(s.draft["rectifier"], part) || path == "light_load" && s.draft["rectifier"] != "synchronous" {
		return "#f-rectifier"
	}
	list, row, rest, ok := firstRow(path)
	if !ok {
		return "#f-" + path
	}
	rows := s.draft.rows(list)
	if row >= len(rows) {
		return "#part-" + list
	}
	return "#f-" + rowPath(list, rows[row]) + rest
}

// changes lists the entries in which two designs differ. A curve that changed is one
// change. An entry that is typed but can't be read differs from any.
func changes(was, now, unread Draft) []view.Change {
	var list []view.Change
	for _, e := range entriesAmong(was, now, unread) {
		from, to, typed := e.texts[0], e.texts[1], e.texts[2]
		switch {
		case e.field.Kind == budget.Rows && (typed != "" || from != to):
			list = append(list, curveChange(e.field, was, now, unread))
		case !blank(typed):
			c := changed(e.field, e.path, from, "")
			c.To = "“" + short(typed) + "”, not readable"
			list = append(list, c)
		case from != to:
			list = append(list, changed(e.field, e.path, from, to))
		}
	}
	return list
}

// short is a text that fits between others.
func short(text string) string {
	const most = 24
	if runes := []rune(strings.TrimSpace(text)); len(runes) > most {
		return string(runes[:most]) + "…"
	}
	return strings.TrimSpace(text)
}

func changed(f budget.Field, path, from, to string) view.Change {
	c := view.Change{Symbol: symbolOf(f.Symbol), Label: f.Name, From: given(worded(f, from)), To: given(worded(f, to)), Href: "#f-" + path}
	if c.Symbol.Base == "" && f.Path != "" {
		c.Label = labelOf(path)
	}
	return c
}

// given shows an entry, or that there is none.
func given(text string) string {
	if blank(text) {
		return "not given"
	}
	return text
}

func curveChange(f budget.Field, was, now, unread Draft) view.Change {
	before, after := was.shownRows(f.Path), now.shownRows(f.Path)
	c := view.Change{Label: labelOf(f.Path), Href: "#f-" + f.Path, From: rowsGiven(before), To: rowsGiven(after)}
	if n := unread.shownRows(f.Path); n > 0 {
		c.To = rowsGiven(n) + ", not all readable"
	} else if after == before {
		c.To += ", other values"
	}
	return c
}

// rowsGiven counts rows, or says that there are none.
func rowsGiven(n int) string {
	if n == 0 {
		return given("")
	}
	return plural(n, "row", "rows")
}

// rippleChange is the wanted ripple's difference, if there is one.
func rippleChange(was, now Draft) []view.Change {
	from, to := strings.TrimSpace(was[rippleRatio]), strings.TrimSpace(now[rippleRatio])
	if from == to {
		return nil
	}
	return []view.Change{{Label: labelOf(rippleRatio), Href: "#f-" + rippleRatio, From: given(from), To: given(short(to))}}
}

// profileChange is the load profile's difference, if there is one: its rows, and what
// is lost in its day.
func (s *sheet) profileChange(ctx context.Context) ([]view.Change, error) {
	if s.last.typed.profileText() == s.draft.profileText() {
		return nil, nil
	}
	c := view.Change{Label: "Load profile", Href: "#part-profile", From: rowsGiven(len(s.last.typed.rows(profilePath))), To: rowsGiven(len(s.draft.rows(profilePath)))}
	if len(s.wrong) > 0 || len(s.beside) > 0 {
		if len(s.beside) > 0 {
			c.To += ", not all readable"
		}
		return []view.Change{c}, nil
	}
	for _, side := range []struct {
		text   *string
		draft  Draft
		design *budget.Design
	}{{&c.From, s.last.typed, s.last.design}, {&c.To, s.draft, s.design}} {
		e, err := side.draft.energy(ctx, side.design)
		if err != nil {
			return nil, err
		}
		if e != nil && e.Reason == "" {
			*side.text += ", " + wattHours(e.Lost) + " lost a day"
		}
	}
	if c.From == c.To {
		c.To += ", other values"
	}
	return []view.Change{c}, nil
}
