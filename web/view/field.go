package view

import "strings"

// Field is one entry of a form.
type Field struct {
	Name     string // of the input: the JSON path
	Key      string // what its ids end in, where that is not its name
	Label    string
	Symbol   Symbol
	Value    string // as typed
	Unit     string // "" where there is none, or the typed text says it
	Assumed  string // what stands behind an empty entry
	Where    string // where a data sheet gives it
	Read     string // what was understood: "= 4.7 kΩ"
	Was      string // what the last revision has: "was 8.5 mΩ"
	Error    string
	Required bool
	Numeric  bool
	Wide     bool     // a text that wants room
	Options  []Option // of a choice
	Curve    *Curve   // of rows; Value is unused then
	Source   *Source  // where the value comes from
	Unfolded bool     // where it is found, and its source, are open
}

// Source is the entry beside a value that says where it comes from.
type Source struct{ Name, Value string }

// Curve is an entry of two columns.
type Curve struct {
	Send    string // where its buttons send the form
	X, Y    string // headings, with their units
	Rows    []CurveRow
	Pattern CurveRow // one more row, for a script to add
	Add     string   // what its button says to the server
}

// CurveRow is one row of a curve.
type CurveRow struct {
	X, Y   Cell
	Remove string // what its button says to the server
	Label  string // "Remove row 2"
}

// Cell is one input of a table of inputs.
type Cell struct {
	Name, Label, Value, Error string
	Options                   []Option
}

// ID is the id of the entry's input, which links to it end in.
func (f Field) ID() string { return "f-" + f.key() }

// key is what the ids around the entry end in.
func (f Field) key() string {
	if f.Key != "" {
		return f.Key
	}
	return f.Name
}

// class marks an entry that changed since the last revision or is wrong.
func (f Field) class() string {
	class := "f"
	if f.Was != "" {
		class += " chg"
	}
	if f.Error != "" {
		class += " bad"
	}
	if f.Wide {
		class += " wide"
	}
	return class
}

// describedBy names what is read aloud after the label: what is wrong, what was
// understood, where it is found.
func (f Field) describedBy() string {
	var ids []string
	if f.Error != "" {
		ids = append(ids, "e-"+f.key())
	}
	if f.Read != "" {
		ids = append(ids, "r-"+f.key())
	}
	if f.Where != "" {
		ids = append(ids, "w-"+f.key())
	}
	return strings.Join(ids, " ")
}

func (f Field) invalid() string { return invalid(f.Error) }

// ID is the id of the cell's input.
func (c Cell) ID() string { return "f-" + c.Name }

func (c Cell) invalid() string { return invalid(c.Error) }

func (c Cell) describedBy() string {
	if c.Error != "" {
		return "e-" + c.Name
	}
	return ""
}

// first is the id of what the curve's label leads to.
func (c Curve) first(f Field) string {
	if len(c.Rows) > 0 {
		return c.Rows[0].X.ID()
	}
	return "add-" + f.key()
}

// invalid is an aria-invalid; it is always written, since a swap that keeps the
// input must be able to take the mark back.
func invalid(message string) string {
	if message != "" {
		return "true"
	}
	return "false"
}

// Section is a part of the converter with its entries.
type Section struct {
	ID, Title string
	Class     string // of the part's colour, "" for none
	Folded    bool   // opens on demand
	Open      bool   // a folded one is open
	Fields    []Field
	More      []Section // groups within that open on demand: rarely needed entries, winding, core
	List      *Rows
}

// Rows is a list of entries of the same kind, one a row.
type Rows struct {
	Send  string // where its buttons send the form
	Of    string // path of the list
	Heads []string
	Width string // how many columns that makes, the one of its buttons included
	Rows  []Row
	Add   string // what its button says to the server
	Word  string // on the button

	Unfolded bool // the sources are open
}

// Row is one row of such a list: what it is called on a line of its own, which
// wants room, and the rest below.
type Row struct {
	Title  Cell
	Cells  []Cell
	Source Cell
	Remove string
	Label  string // "Remove row 2"
}
