package view

// Compare is the page of revisions laid beside each other.
type Compare struct {
	File       string // what names of its files begin with
	Page       Page
	Title      string
	Foot       string // of every printed page
	Sides      []CompareSide
	Choose     Link   // where others are chosen
	Nothing    string // said when nothing differs
	Basis      string // whose figures these are
	Differ     string // "The conditions differ: ambient, full load."
	Same       string // the conditions that don't
	Offers     []Link // to take all at the same conditions, or each at its own
	Stays      string // what of the conditions can't be made the same
	Conditions CompareTable
	Changed    CompareTable
	Folded     string // of many entries: how many they are
	Unchanged  string
	All        Link // to show the unchanged entries, or to hide them
	Views      CompareViews
	Verdicts   []string // at which loads each is more efficient
	Losses     CompareTable
	Rule       []string // how signs and sums are to be read
	Gaps       []string // why figures are missing
	Outside    bool     // some figure is marked
	Zero       string   // items that are 0 in all revisions
	Loads      []CompareLoads
	Charts     []Chart
	Findings   CompareTable
	Kept       string // how many findings they have in common
	CSV        string
}

// CompareSide is one of the revisions: what it is, and what to do with it.
type CompareSide struct {
	Label, Name, Note, Model string
	When, Stamp              string
	Href                     string
	Base                     bool
	MakeBase, Leave          Link
}

// CompareViews choose the point, kept in the address.
type CompareViews struct {
	Vins   []Link
	Loads  []Link
	Carry  []Option // what else the address holds: name and value
	Vin    Field
	Action string
}

// CompareTable has a row a figure, and for each revision a cell.
type CompareTable struct {
	Caption string
	Heads   []CompareHead
	Lines   []CompareLine
}

// CompareHead heads what belongs to one revision.
type CompareHead struct {
	Label, Name string
	Base        bool
}

// CompareLine is one row.
type CompareLine struct {
	Head, Class, Unit string
	Symbol            Symbol
	Square            bool // the part's colour stands before it
	Cells             []CompareCell
}

// CompareCell is one revision's value, and how it differs from the baseline's.
type CompareCell struct {
	Value, Change, Share string
	Base, Marked, Same   bool
}

// class tells a value that differs from the baseline's from one that doesn't.
func (c CompareCell) class() string {
	switch {
	case c.Base:
		return ""
	case c.Same:
		return "same"
	}
	return "other"
}

// CompareLoads are the differences of one revision over the loads.
type CompareLoads struct {
	Title, Caption string
	Columns        []Link
	Lines          []LedgerLine
}

// Chooser is the page on which revisions are chosen to be compared.
type Chooser struct {
	Page    Page
	Designs []ChooserDesign
}

// ChooserDesign is a design with its revisions, the oldest first.
type ChooserDesign struct {
	Name, ID  string
	Revisions []ChooserRevision
}

// ChooserRevision is one that can be chosen.
type ChooserRevision struct {
	Value, Name, Note, When, Stamp string
	Chosen                         bool
}
