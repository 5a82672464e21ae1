package view

// Working says how one figure of the ledger came about.
type Working struct {
	Title   string // "Switch, conduction"
	At      string // the point, in words
	Result  string // "44.2 mW"
	Close   string // the address without it
	Cell    string // the address of the figure's cell, to go back to
	Unlike  string // why there is none
	Anew    string // said where another model than the figure's explains it
	Outside bool   // a curve was held flat for it
	Solved  string // how the point was found, of a figure that it was solved for
	Main    *WorkingStep
	Near    []WorkingStep // of the terms of the formula
	Far     []WorkingStep // of their terms
	Behind  string        // "and 7 more behind these"
	Entries []WorkingEntry
	Checked string // the address that says how such a figure was checked, "" for a reader without other pages
}

// WorkingStep is one quantity: its formula in symbols, the same with numbers, and what
// it comes to. Without a formula, words say how it is found.
type WorkingStep struct {
	Words    string // what the quantity is
	Name     Math
	Symbols  *Math
	Numbers  *Math // nil where the formula holds nothing but numbers
	Result   Math
	Instead  string
	Source   string
	Balanced string // said of a quantity that feeds back on itself
}

// WorkingEntry is an entry that a figure rests on, with where its value comes from.
type WorkingEntry struct {
	Symbol              Math
	Label, Value, Href  string
	Source, Unsupported string // one of the two
}

// Math is a node of a formula as MathML has it: an element with text, or with
// arguments.
type Math struct {
	Element MathElement
	Text    string
	Args    []Math
}

// MathElement is one of the elements that formulas are made of.
type MathElement string

// The elements.
const (
	MathRow      MathElement = "mrow"
	MathName     MathElement = "mi"
	MathNumber   MathElement = "mn"
	MathSign     MathElement = "mo"
	MathText     MathElement = "mtext" // upright: a unit, the words of a subscript
	MathFraction MathElement = "mfrac"
	MathRoot     MathElement = "msqrt"
	MathSub      MathElement = "msub"
	MathSuper    MathElement = "msup"
)
