package web

import (
	"cmp"
	"slices"
	"strings"
	"unicode"

	"lossbook/budget"
	"lossbook/web/view"
)

// sought is an entry that can be found on a sheet by what it is called.
type sought struct {
	field budget.Field
	part  string // its title
	path  string // of a field: without row numbers
	id    string // of what to go to
	away  string // why that is not the entry itself
}

// soughtOn lists every entry of a sheet in its order, those included that are
// folded away, have no row yet, or belong to the kind of rectifier not in use.
func soughtOn(v view.Sheet, t Draft) []sought {
	var list []sought
	for _, p := range budget.Parts() {
		for _, f := range p.Fields {
			s := sought{field: f, part: p.Name, path: f.Path}
			s.id, s.away = wayTo(v, t, p, f)
			list = append(list, s)
		}
	}
	ripple := rippleField()
	list = append(list, sought{field: ripple, part: stageTitle, path: rippleRatio, id: "f-" + rippleRatio})
	for _, c := range profileColumns {
		s := sought{field: budget.Field{Key: c.key, Name: c.head}, part: "Load profile", path: below(profilePath, c.key), id: "add-" + profilePath}
		if t.shownRows(profilePath) > 0 {
			s.id = "f-" + below(rowPath(profilePath, 0), c.key)
		}
		list = append(list, s)
	}
	return list
}

// wayTo is the id of a field's entry: of its first row, if it has rows, else of the
// button that adds one. What a sheet shows only with the other rectifier is reached
// by choosing that.
func wayTo(v view.Sheet, t Draft, p budget.Part, f budget.Field) (id, away string) {
	switch {
	case p.List && t.shownRows(p.Path) > 0:
		return "f-" + below(rowPath(p.Path, 0), f.Key), ""
	case p.List:
		return "add-" + p.Path, ""
	case !reveal(v, "f-"+f.Path, false) && p.Path == "diode":
		return "f-rectifier", "with a diode as rectifier"
	case !reveal(v, "f-"+f.Path, false):
		return "f-rectifier", "with a synchronous rectifier"
	case f.Kind == budget.Rows && t.shownRows(f.Path) > 0:
		return "f-" + cellPath(f.Path, 0, 0), ""
	case f.Kind == budget.Rows:
		return "add-" + f.Path, ""
	}
	return "f-" + f.Path, ""
}

// search picks the entries that a text may mean, the likeliest first. A blank text
// means all of them.
func search(list []sought, text string) []sought {
	if blank(text) {
		return list
	}
	type match struct {
		sought
		rank int
	}
	var matches []match
	for _, s := range list {
		if rank := s.rank(text); rank > 0 {
			matches = append(matches, match{s, rank})
		}
	}
	slices.SortStableFunc(matches, func(a, b match) int { return cmp.Compare(a.rank, b.rank) })
	found := make([]sought, len(matches))
	for i, m := range matches {
		found[i] = m.sought
	}
	return found
}

// rank tells how well a text names the entry: 1 is its symbol or key itself, 0 is
// not at all.
func (s sought) rank(text string) int {
	text = strings.ToLower(strings.TrimSpace(text))
	terms := strings.Fields(text)
	called := strings.ToLower(s.part + " " + s.field.Name)
	named := called + " " + strings.ToLower(s.path) + " " + strings.ToLower(s.field.Symbol) + " " + squeezed(s.field.Symbol)
	short := squeezed(text)
	switch symbol, key := squeezed(s.field.Symbol), squeezed(s.field.Key); {
	case short != "" && (short == symbol || short == key || text == strings.ToLower(s.path)):
		return 1
	case short != "" && (strings.HasPrefix(symbol, short) || strings.HasPrefix(key, short)):
		return 2
	case strings.HasPrefix(strings.ToLower(s.field.Name), text):
		return 3
	case all(terms, func(term string) bool { return strings.Contains(" "+called, " "+term) }):
		return 4
	case all(terms, func(term string) bool { return strings.Contains(named, term) }):
		return 5
	case all(terms, func(term string) bool {
		return strings.Contains(named+" "+strings.ToLower(s.field.Where), term)
	}):
		return 6
	}
	return 0
}

func all(terms []string, holds func(string) bool) bool {
	return !slices.ContainsFunc(terms, func(term string) bool { return !holds(term) })
}

// squeezed is a text in small letters without marks between them, as symbols are
// typed: R_DS(on) is rdson.
func squeezed(text string) string {
	return strings.Map(func(r rune) rune {
		if unicode.IsLetter(r) || unicode.IsDigit(r) {
			return unicode.ToLower(r)
		}
		return -1
	}, text)
}
