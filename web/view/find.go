package view

// FindBox is where the name of an entry is typed.
type FindBox struct {
	Send  string // where it asks
	Query string
	View  Hidden // that is shown, carried along
}

// Find is the page of the entries that a text may mean.
type Find struct {
	Page       Page
	Name, Href string // the sheet
	Box        FindBox
	Count      string // "3 entries"
	Found      []Found
}

// Found is one of them.
type Found struct {
	Symbol                   Symbol
	Label, Part, Where, Away string
	ID                       string // in the list
	Href, To                 string // its address, and its id on the sheet
}
