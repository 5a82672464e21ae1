package view

// Links are the links that open a revision to whoever has them.
type Links struct {
	Send     string // where the form asks for another one
	Note     Field
	Problems []Problem
	Made     string // the address of the one just made, "" else; it is shown this once
	List     []ShareLink
}

// ShareLink is one of them, without its address, which nobody keeps.
type ShareLink struct {
	Note, When, Stamp string
	Revoke            string // where its button asks; "" once it is revoked
	Revoked           string // when
}

func (l ShareLink) name() string {
	if l.Note == "" {
		return "without a note"
	}
	return l.Note
}
