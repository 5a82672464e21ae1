package view

// Assets are the addresses of what every page loads, and the setting of the
// library that swaps answers in.
type Assets struct {
	Style   string
	Icon    string
	Scripts []string // in the order they are to run
	Swap    string
}

// Page is what every page has around its content.
type Page struct {
	Title  string // of the document, without the program's name
	Failed bool   // the title says "Error:" first
	Assets Assets
	Notice Notice
}

func (p Page) title() string {
	title := p.Title + " · Lossbook"
	if p.Failed {
		return "Error: " + title
	}
	return title
}

// Notice says what has just been done. Undo is the address that takes it back,
// "" when nothing does.
type Notice struct{ Text, Undo string }

// Symbol is a letter with its subscript, as a data sheet prints it.
type Symbol struct{ Base, Sub string }

// Option is one value of a choice.
type Option struct {
	Value, Label string
	Chosen       bool
}

// Problem is one line of an error summary; Href leads to the entry, "" when
// there is none on the page.
type Problem struct{ Label, Message, Href string }

// Fault is a page that says why something could not be done.
type Fault struct {
	Page    Page
	Heading string
	Words   []string // a paragraph each
	Details []Problem
	Back    Link
	Shared  bool // its reader has a link and nothing else
}

// Link leads to another page, or to a place on this one.
type Link struct {
	Text, Href string
	Here       bool // it is the view that is shown
}
