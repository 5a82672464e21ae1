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

// Place is the part that it belongs to, and when it is shown, if that is not now.
func (f Found) Place() string {
	if f.Away == "" {
		return f.Part
	}
	return f.Part + ", " + f.Away
}
