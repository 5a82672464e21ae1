package view

// Weights are the figures that sum up a range of loads in one number.
type Weights struct {
	At    string // "at 12 V in, 45 °C"
	Means []Mean
	Day   *Day // nil where no load profile is entered
}

// Mean is a weighted mean of efficiencies.
type Mean struct{ Name, Figure, How, Reason, Source string }

// Day is the energy of a load profile.
type Day struct {
	In, Out, Lost, Efficiency string
	Reason                    string // why there are no figures
	Off                       string // the hours that no row covers
	Worked                    string // with which model, where that is not the revision's
	Heads                     []string
	Rows                      []Line
}

// Profile is the entries of a load profile, a use a row.
type Profile struct {
	Send  string // where its buttons send the form
	Heads []string
	Rows  []ProfileRow
	Add   string // what its button says to the server
}

// ProfileRow is one use.
type ProfileRow struct {
	Cells  []Cell
	Remove string // what its button says to the server
	Label  string // "Remove row 2 of the load profile"
}
