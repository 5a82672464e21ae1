package view

// Hint is what helps at first; without text there is none.
type Hint struct {
	Text     string
	Send, To string // where putting it away is sent, and where that leads
}
