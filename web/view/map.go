package view

// MapPlace is where a map stands on the page it belongs to.
type MapPlace struct {
	None        string // why there is no map
	Open        bool
	Show, Close string // the page with and without it
	Page        string // the map on a page of its own
	Source      string // where the page fetches it
	Drawn       *Map   // it is there already
}

// Map is a figure over load and input voltage.
type Map struct {
	None    string // why there is none
	Caution string // no point of it is sound
	Chart   Chart
	Limits  []Finding // what is exceeded or near, and where points have no figure
	Words   string    // of its table
	Worked  string    // with which model, where it matters
	CSV     Link
	Page    Link
}

// MapPage is the page of a map alone.
type MapPage struct {
	Page   Page
	Title  string
	Foot   string // of every printed page
	File   string // what names of files begin with
	Home   Link
	Wrong  string // an entry of the address that could not be used
	Shared bool   // its reader has a link and nothing else
	Map    Map
}
