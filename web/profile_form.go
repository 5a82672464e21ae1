package web

import (
	"strconv"
	"strings"

	"lossbook/web/view"
)

// rowNo counts from 1, as people do.
func rowNo(i int) string { return strconv.Itoa(i + 1) }

// profileLabel names an entry of the profile.
func profileLabel(path string) (string, bool) {
	for _, c := range profileColumns {
		if i, ok := indexUnder(path, profilePath); ok && path == below(rowPath(profilePath, i), c.key) {
			return "Load profile, row " + rowNo(i) + ", " + c.name, true
		}
	}
	return "", false
}

// profile draws the entries of the load profile.
func (b form) profile() view.Profile {
	p := view.Profile{Send: b.send, Add: "add:" + profilePath}
	for _, c := range profileColumns {
		p.Heads = append(p.Heads, c.head)
	}
	for i := range b.draft.shownRows(profilePath) {
		at := rowPath(profilePath, i)
		row := view.ProfileRow{Remove: "remove:" + at, Label: "Remove row " + rowNo(i) + " of the load profile"}
		for _, c := range profileColumns {
			path := below(at, c.key)
			label, _ := profileLabel(path)
			row.Cells = append(row.Cells, view.Cell{Name: path, Label: label, Value: b.draft[path], Error: b.wrong[path]})
		}
		p.Rows = append(p.Rows, row)
	}
	return p
}

// profileText is the profile as one text, to tell whether it changed.
func (t Draft) profileText() string {
	var text strings.Builder
	for _, i := range t.rows(profilePath) {
		for _, c := range profileColumns {
			text.WriteString(strings.TrimSpace(t[below(rowPath(profilePath, i), c.key)]) + "|")
		}
	}
	return text.String()
}

// besides are the entries that only a draft has.
func (t Draft) besides() Draft {
	kept := Draft{}
	for path, text := range t {
		if path == rippleRatio || isProfileEntry(path) {
			kept[path] = text
		}
	}
	return kept
}
