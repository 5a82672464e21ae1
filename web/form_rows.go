package web

import (
	"fmt"
	"regexp"
	"slices"
	"strconv"
	"strings"

	"lossbook/budget"
	"lossbook/web/view"
)

// addedRows is how many rows of a curve one press of its button adds.
const addedRows = 4

// curve draws an entry of two columns.
func (b form) curve(f budget.Field, path string) *view.Curve {
	c := &view.Curve{Send: b.send, X: heading(f.XName, f.XUnit), Y: heading(f.YName, f.Unit), Add: "add:" + path,
		Pattern: b.curveRow(f, path, rowMark)}
	for i := range b.draft.shownRows(path) {
		c.Rows = append(c.Rows, b.curveRow(f, path, strconv.Itoa(i)))
	}
	return c
}

// rowMark stands for the number of a row in the one that a script copies.
const rowMark = "__row__"

func (b form) curveRow(f budget.Field, path, row string) view.CurveRow {
	at := path + "[" + row + "]"
	cell := func(column, name string) view.Cell {
		name = rowLabel(row) + ", " + name
		return view.Cell{Name: at + column, Label: name, Value: b.draft[at+column], Error: b.wrong[at+column]}
	}
	r := view.CurveRow{X: cell("[0]", f.XName), Y: cell("[1]", f.YName), Remove: "remove:" + at, Label: "Remove " + strings.ToLower(rowLabel(row))}
	if r.X.Error == "" {
		r.X.Error = b.wrong[at] // said of the row as a whole
	}
	return r
}

// rowLabel counts from 1, as people do; the row that a script copies has no
// number before it is there.
func rowLabel(row string) string {
	if i, err := strconv.Atoi(row); err == nil {
		return "Row " + strconv.Itoa(i+1)
	}
	return "Added row"
}

func heading(name, unit string) string {
	if unit == "" {
		return name
	}
	return name + ", " + unit
}

// list draws the entries of a list of parts, one a row.
func (b form) list(p budget.Part) *view.Rows {
	l := &view.Rows{Of: p.Path, Send: b.send, Add: "add:" + p.Path, Word: "add a row"}
	for _, f := range p.Fields {
		if f.Kind != budget.Text {
			l.Heads = append(l.Heads, heading(f.Name, f.Unit))
		}
	}
	l.Width = strconv.Itoa(len(l.Heads) + 1)
	for i := range b.draft.shownRows(p.Path) {
		l.Rows = append(l.Rows, b.listRow(p, i))
	}
	return l
}

func (b form) listRow(p budget.Part, i int) view.Row {
	at, label := rowPath(p.Path, i), "Row "+strconv.Itoa(i+1)
	r := view.Row{Remove: "remove:" + at, Label: "Remove " + strings.ToLower(label)}
	for _, f := range p.Fields {
		path := below(at, f.Key)
		c := view.Cell{Name: path, Label: label + ", " + f.Name, Value: b.draft[path], Error: b.wrong[path]}
		if f.Kind == budget.Choice {
			c.Options = choices(f, c.Value)
		}
		if f.Kind == budget.Number {
			source := sources + path
			r.Source = view.Cell{Name: source, Label: label, Value: b.draft[source]}
		}
		if f.Kind == budget.Text {
			r.Title = c
			continue
		}
		r.Cells = append(r.Cells, c)
	}
	return r
}

// shownRows is how many rows a sheet shows under a path, blank ones included.
func (t Draft) shownRows(path string) int {
	rows := 0
	for key := range t {
		if i, ok := indexUnder(key, path); ok {
			rows = max(rows, i+1)
		}
	}
	return rows
}

// indexUnder returns the number of the row that a key under a path is in.
func indexUnder(key, path string) (int, bool) {
	rest, ok := strings.CutPrefix(key, path+"[")
	if !ok {
		return 0, false
	}
	digits, _, _ := strings.Cut(rest, "]")
	i, err := strconv.Atoi(digits)
	return i, err == nil && i >= 0 && i < budget.MaxRows
}

var command = regexp.MustCompile(`^(add|remove):([a-z_.]+)(?:\[(\d{1,3})\])?$`)

// act adds or removes rows as a button of the sheet asks. It says whether it
// did; what it does not know it leaves alone.
func (t Draft) act(do string) bool {
	parts := command.FindStringSubmatch(do)
	if parts == nil {
		return false
	}
	cells, most := cellsOf(parts[2])
	if cells == nil {
		return false
	}
	if parts[1] == "add" {
		for i := 0; i < most && t.shownRows(parts[2]) < budget.MaxRows; i++ {
			t.addRow(rowPath(parts[2], t.shownRows(parts[2])), cells)
		}
		return true
	}
	if i, err := strconv.Atoi(parts[3]); err == nil {
		t.removeRow(parts[2], i)
	}
	return true
}

// cellsOf returns what stands behind the row's path in its entries' names, and
// how many rows are added at once; nothing for a path that has no rows.
func cellsOf(path string) (cells []string, most int) {
	if path == profilePath {
		for _, c := range profileColumns {
			cells = append(cells, "."+c.key)
		}
		return cells, 1
	}
	if f, ok := budget.FieldAt(path); ok && f.Kind == budget.Rows {
		return []string{"[0]", "[1]"}, addedRows
	}
	for _, p := range budget.Parts() {
		if p.List && p.Path == path {
			for _, f := range p.Fields {
				cells = append(cells, "."+f.Key)
			}
		}
	}
	return cells, 1
}

func (t Draft) addRow(at string, cells []string) {
	for _, c := range cells {
		t[at+c] = ""
	}
}

// removeRow drops a row and moves those behind it up, sources and all.
func (t Draft) removeRow(path string, gone int) {
	for _, root := range []string{path, sources + path} {
		var keys []string
		for key := range t {
			if i, ok := indexUnder(key, root); ok && i >= gone {
				keys = append(keys, key)
			}
		}
		slices.SortFunc(keys, func(a, b string) int {
			i, _ := indexUnder(a, root)
			j, _ := indexUnder(b, root)
			return i - j
		})
		t.moveUp(keys, root, gone)
	}
}

func (t Draft) moveUp(keys []string, root string, gone int) {
	for _, key := range keys {
		text := t[key]
		delete(t, key)
		if i, _ := indexUnder(key, root); i > gone {
			t[strings.Replace(key, rowPath(root, i), rowPath(root, i-1), 1)] = text
		}
	}
}

// structure names which entries a sheet has: a live answer leaves the inputs
// alone as long as it stays the same.
func (t Draft) structure() string {
	parts := []string{t["rectifier"], strconv.Itoa(t.shownRows(profilePath))}
	for _, p := range budget.Parts() {
		if p.List {
			parts = append(parts, strconv.Itoa(t.shownRows(p.Path)))
		}
		for _, f := range p.Fields {
			if f.Kind == budget.Rows {
				parts = append(parts, fmt.Sprint(t.shownRows(f.Path)))
			}
		}
	}
	return strings.Join(parts, " ")
}
