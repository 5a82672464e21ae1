package view

// Accuracy is the page that says how far the figures were checked.
type Accuracy struct {
	Page     Page
	Summary  []string
	Groups   []CheckGroup
	Core     CoreLoss
	Cases    string
	Bounds   BoundTable
	Items    []Cover
	Findings []Cover
	LeftOut  []Method
}

// CheckGroup is a heading with its checks.
type CheckGroup struct {
	ID, Title string
	Checks    []Check
}

// Check is one place of one document, with what it prints and what comes out here.
type Check struct {
	ID, No, Title string
	Source        string
	Known         string
	How, Slip     string
	Inputs        string
	Figures       []CheckFigure
	Unreached     []Method
}

// CheckFigure is one figure of it.
type CheckFigure struct {
	Name, At      string
	Expected, Got string
	Printed       string // where it is not what is expected
	Digits        string
	Note          string // of its tolerance
	Missed        bool
}

// CoreLoss is the model of a core against measured loss.
type CoreLoss struct {
	What   string
	Fitted string
	Lines  []CoreLine
}

// CoreLine is one duty of the flux.
type CoreLine struct{ Duty, Points, Mean, Worst, Note string }

// BoundTable is how far the figures are from those of exact currents: a column for
// each kind of stage.
type BoundTable struct {
	Heads []BoundHead
	Lines []BoundLine
}

// BoundHead is a kind of stage and how many were tried.
type BoundHead struct{ Domain, Stages string }

// BoundLine is one quantity.
type BoundLine struct {
	Quantity string
	Cells    []BoundCell
}

// BoundCell is the worst of all stages, and what half of any topology and mode keep
// within.
type BoundCell struct{ Worst, Half string }

// Cover names an item or a finding, with its checks or the reason why there is none.
type Cover struct {
	Name, ID string
	Checks   []Link
	Reason   string
}
