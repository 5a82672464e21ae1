package view

// Sheet is the page on which a design is edited and its budget stands.
type Sheet struct {
	Page     Page
	ID, Name string
	State    string // "draft, 2 changes since revision 3"
	Foot     string // of every printed page
	Hidden   Hidden
	Heading  string // of the error summary
	Problems []Problem
	Since    Since
	Steps    Steps
	Find     FindBox
	Hint     Hint
	Sections []Section
	Profile  Profile
	Whole    bool // a live answer replaces all entries: rows came or went
	Stale    *Stale
	Answers  Answers
}

// Href is the address of the sheet.
func (s Sheet) Href() string { return "/designs/" + s.ID }

// Hidden is what the form carries along: the version it was made from, which
// entries it has, and the view that is shown.
type Hidden struct{ Version, Structure, Vin, Ambient, Load, Scale, Working, Chart string }

// Stale says that the design was changed elsewhere since the form was drawn.
type Stale struct{ Words, Theirs, Keep, Version string }

// Since says what changed since the last revision, and what it did.
type Since struct {
	Title     string // "Since revision 3"
	Changes   []Change
	Unchanged string // said when there are none
	Effect    string // "+0.11 points, −58 mW"
	EffectAt  string // "at full load, 12 V in"
	Note      string // typed beside the button
	Keep      string // "Keep as revision 4", "" when it can't be kept
	Why       string // why it can't
	Send      string // where the button sends the form
	Revisions []RevisionLine
	Compare   Link // to choose revisions to be laid side by side
}

// Change is one entry that differs from the last revision.
type Change struct {
	Symbol         Symbol
	Label          string
	From, To, Href string
}

// RevisionLine is one saved state in the list.
type RevisionLine struct {
	Name, Href, Note, When, Stamp string
	Beside                        Link // to compare it with the one before
}

// Answers is the right side: what comes of the entries.
type Answers struct {
	File     string    // what names of its files begin with
	Wrong    []Problem // why these are the last good answers; none when they are current
	WrongToo string    // how many more reasons there are
	Banner   string    // of a revision whose recomputation differs
	Views    Views
	Head     *Head
	Flow     *Flow
	Charts   []Chart
	Map      *MapPlace
	Ledger   *Ledger
	Working  *Working
	Waves    *Waves
	Weights  *Weights
	Warnings []Finding // exceeded ratings and cautions, worst first
	Notes    []Finding
	Count    string // "4 notes"
	Sizing   *Sizing
	Missing  []MissingPart
	Links    *Links // of a revision; nil where none can be made
	Shared   bool   // its reader has a link and nothing else
}

// Views are the choices of what is shown, kept in the address.
type Views struct {
	Href    string // where the form asks
	Typed   bool   // any voltage and ambient may be typed, not only those listed
	Vins    []Link
	Vin     Field
	Ambient Field
	Load    Field
	Scale   string // of the load axis, carried along
	Working string // that is open, carried along
	Chart   string // the same of a chart
	At      string // "12 V in, 2 A (100 %), 45 °C" in words
}

// Head holds the large figures.
type Head struct {
	Efficiency, Loss, Hottest, Temperature string
	Vin, Load, Ambient                     string
	Reason                                 string // why there are none
}

// Finding is one thing to be said, worst first.
type Finding struct{ Level, Part, Message, At, Source string }

// Chart is one drawing with its table of numbers.
type Chart struct {
	ID, Kind, Title, Caption string
	Data                     string // JSON for the drawing
	Scale                    string
	Scales                   []Link
	Heads                    []string
	Rows                     []Line
}

// Line is a row of plain figures under a heading.
type Line struct {
	Head  string
	Cells []string
}

// Ledger is the table of loss items by load.
type Ledger struct {
	Caption string // "mW at 12 V in, 45 °C; shade: share of the column's loss"
	Opens   string // said of its figures where they lead to their working
	Take    []Link // files
	Paper   Link   // the same for printing
	Columns []Link // the loads
	Lines   []LedgerLine
	Foot    []LedgerLine
	Zero    []Link // the items that are 0 at every load, with why
	Outside bool   // some figure is marked
}

// LedgerLine is a part's subtotal, one of its items, or a line of the foot.
type LedgerLine struct {
	Head, Class string
	Square      bool // the part's colour stands before it
	Cells       []LedgerCell
}

// LedgerCell is one figure; Class shades it by its share. Columns without
// figures have one cell that says why, over so many rows and columns.
type LedgerCell struct {
	Text, Class, Rows, Columns string
	Working                    Link // how the figure came about; its text says so in full
	Aside                      bool // at another load than the chosen one: the Tab key passes it by
}

// MissingPart is a part with the entries it lacks.
type MissingPart struct {
	Title   string
	Entries []Problem
}

// Sizing is what can be said before the parts are chosen.
type Sizing struct {
	Ripple     string // "0.3"
	Inductance string // "22.5 µH"
	Used       string // of the currents, if another
	Duty       string // of the switch, over the input range
	Heads      []string
	Rows       []Line
	Error      []Problem // what keeps it from being worked out
}

// Revision is the page of a saved state.
type Revision struct {
	Page                  Page
	ID, Number            string
	Name, Note, About     string
	When, Stamp           string
	Model                 string
	Previous, Next, Draft Link
	Reopen                string
	Compare               []Link
	Lost                  string // what reopening it would drop
	Shared                bool   // its reader has a link and nothing else
	Parts                 []Given
	Answers               Answers
}

// Given is a part with the values it was saved with.
type Given struct {
	Title, Class string
	Part         string // what it is, in words
	Values       []GivenValue
}

// GivenValue is one of them.
type GivenValue struct {
	Symbol               Symbol
	Label, Value, Source string
}
