package view

// Steps are the ways back and forth through the edits of a sheet.
type Steps struct {
	Undo, Redo Step
	Said       string // what was just undone or redone
	To         string // id of the entry it changed
}

// Step is one of them, with what it would change; without a label there is none.
type Step struct {
	Send     string // where its button sends the form
	Symbol   Symbol // of the entry, seen in the place of its label
	Label    string
	From, To string
	More     string // "and 3 more"
}

// Words are the step as it is read aloud.
func (s Step) Words() string {
	words := s.Label
	if s.From != "" {
		words += " " + s.From + " → " + s.To
	} else if s.To != "" {
		words += ": " + s.To
	}
	if s.More != "" {
		words += " " + s.More
	}
	return words
}
