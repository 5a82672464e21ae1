package view

// Report is a revision on paper.
type Report struct {
	Page            Page
	Name, Number    string
	Note, About     string
	When, Stamp     string
	Model, Hash     string
	Banner          string // of a revision whose recomputation differs
	Back            Link
	Head            *Head
	HeadAt          string // the point it holds at
	Flow            *Flow
	Conditions      Given
	Parts           []Given
	Ledgers         []Ledger // one for each input voltage
	Charts          []Chart
	Margins         []MarginLine // the nearest to its limit first
	Unrated         []string     // what no limit is stated for
	Weights         *Weights
	Warnings, Notes []Finding
	Methods         []Method
}

// MarginLine is how near a part comes to one of its limits.
type MarginLine struct {
	Part, What, Value, Limit string
	Used                     string // %, of the limit
	At                       string
	Over                     bool
}

// Method says how a kind of figure is worked out, and after whom.
type Method struct{ What, How, Source string }
