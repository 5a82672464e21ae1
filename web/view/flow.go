package view

// Flow is the strip of watts at one point: what goes in, what comes out, and the loss
// between them by part and item, each as wide as its share. Places and widths are
// shares of the strip, such as "4.59%".
type Flow struct {
	Reason        string // why there is none
	In, Out, Lost string // "50.31 W in", "48.00 W out", "2.31 W lost, 4.59 % of the input"
	Told          string // all of it in words
	LossWidth     string // of the loss within the input
	Wedge         string // corners of what leads from there to the whole strip
	Height        string // px, with the names below the strip
	Parts         []FlowPart
	Layouts       []FlowLayout // of the names, for a strip of some width
	Listed        bool         // they have no room below the strip at the first of these
	Unit          string
	Rows          []FlowRow // the same as a table
	Column        Link      // to where the same figures stand by load
}

// FlowPart is a part with a loss; Edge is where it begins, "" of the first.
type FlowPart struct {
	Class, Name, Figures, Edge string
	Items                      []FlowItem
}

// FlowItem is one of its losses.
type FlowItem struct{ X, Width, Edge, Told string }

// FlowLayout sets the names for a strip that is at least so wide as its class says.
type FlowLayout struct {
	Class  string
	Names  []FlowName
	Inside []FlowInside
}

// FlowName is a part's name and figures below the strip, tied to its place by Leader
// where the two are apart.
type FlowName struct {
	Class, Name, Figures string
	X, NameY, FiguresY   string
	Leader               []FlowLine
}

// FlowInside is an item's name within the strip.
type FlowInside struct{ X, Name string }

// FlowLine is a stroke from one place to another.
type FlowLine struct{ X1, Y1, X2, Y2 string }

// FlowRow is a line of the table: a power, and its share of the loss where it is one.
type FlowRow struct{ Class, Head, Power, Share string }
