package view

// List is the page of all designs.
type List struct {
	Page     Page
	Designs  []Entry
	Samples  []Option // designs that come with the program
	Starts   []Option // designs to start a copy of
	Spec     []Field  // what a design has to do, to start one from
	Problems []Problem
	Hint     Hint
}

// Entry is one design of the list.
type Entry struct {
	ID, Name string
	Sample   bool
	What     string // "boost, diode · 12 → 24 V, 2 A"
	Budget   string // efficiency at full load; "" without a budget
	Missing  string // said in its place: "parts missing"
	Level    string // of the worst finding: "exceeded", "caution", "note" or ""
	Finding  string // its words
	Kept     string // "3 revisions"
	Updated  string
	Stamp    string // the same for a machine, RFC 3339
}

// Href is the address of the design's sheet.
func (e Entry) Href() string { return "/designs/" + e.ID }

// Nameplate is the page on which a design gets another name.
type Nameplate struct {
	Page     Page
	ID       string
	Field    Field
	Problems []Problem
	Hint     Hint
}
