package web

import (
	"strings"

	"lossbook/budget"
)

// sheetEntry is one place of the sheet, with what each of several designs has there.
// A curve is one entry, and so is the source of a value.
type sheetEntry struct {
	field budget.Field
	path  string
	texts []string
}

// alike reports whether all designs have the same there.
func (e sheetEntry) alike() bool {
	for _, text := range e.texts {
		if text != e.texts[0] {
			return false
		}
	}
	return true
}

// stated reports whether any of the designs has something there.
func (e sheetEntry) stated() bool {
	for _, text := range e.texts {
		if !blank(text) {
			return true
		}
	}
	return false
}

// entriesAmong lists every place in the order of the sheet, sources behind their
// values. Drafts written by draftOf compare by value, however it was typed.
func entriesAmong(drafts ...Draft) []sheetEntry {
	var list []sheetEntry
	add := func(f budget.Field, path string, text func(Draft) string) {
		e := sheetEntry{field: f, path: path}
		for _, t := range drafts {
			e.texts = append(e.texts, text(t))
		}
		list = append(list, e)
	}
	single := func(f budget.Field, path string) {
		if f.Kind == budget.Rows {
			add(f, path, func(t Draft) string { return t.curveText(path) })
		} else {
			add(f, path, func(t Draft) string { return t[path] })
		}
		source := budget.Field{Name: "Source of " + labelOf(path)}
		add(source, sources+path, func(t Draft) string { return t[sources+path] })
	}
	for _, p := range budget.Parts() {
		for _, path := range pathsOf(p, drafts) {
			for _, f := range p.Fields {
				single(f, below(path, f.Key))
			}
		}
	}
	return list
}

// pathsOf are the paths of a part: one, or one a row of the longest list.
func pathsOf(p budget.Part, drafts []Draft) []string {
	if !p.List {
		return []string{p.Path}
	}
	rows := 0
	for _, t := range drafts {
		rows = max(rows, t.shownRows(p.Path))
	}
	var paths []string
	for i := range rows {
		paths = append(paths, rowPath(p.Path, i))
	}
	return paths
}

// curveText is a curve in one text, a row a line.
func (t Draft) curveText(path string) string {
	var text strings.Builder
	for i := range t.shownRows(path) {
		text.WriteString(t[cellPath(path, i, 0)] + "|" + t[cellPath(path, i, 1)] + "\n")
	}
	return text.String()
}
