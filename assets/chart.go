package assets

import "encoding/json"

// The types below are the data attribute of a <loss-chart>, to be written as
// JSON; chart-lines.js and chart-stack.js say how each is drawn. Lines is of the
// kinds "efficiency" and "difference", Stack of the kind "stack". Values come in the
// unit that their axis names.

// An Axis has a title with its unit in words ("load, % of 2 A"), and the unit
// that follows a value read at the cursor ("%").
type Axis struct {
	Label string `json:"label"`
	Unit  string `json:"unit"`
}

// Lines is a chart of figures against load. Title is read aloud, not drawn.
type Lines struct {
	Title  string `json:"title"`
	X      Axis   `json:"x"`
	Y      Axis   `json:"y"`
	Series []Line `json:"series"`
}

// A Line is named at its end. Dash is 0 solid, 1 dashed, 2 dotted, 3 and 4 mixed.
type Line struct {
	Name   string  `json:"name"`
	Dash   int     `json:"dash"`
	Points []Point `json:"points"` // rising in X
}

// A Point of a line. None leaves a gap: the load has no figure. Outside marks a
// figure for which a curve was held flat outside its range.
type Point struct {
	X, Y          float64
	None, Outside bool
}

// MarshalJSON writes [x, y], [x, null] for None, and [x, y, 1] for Outside.
func (p Point) MarshalJSON() ([]byte, error) {
	switch {
	case p.None:
		return json.Marshal([]any{p.X, nil})
	case p.Outside:
		return json.Marshal([]any{p.X, p.Y, 1})
	}
	return json.Marshal([]any{p.X, p.Y})
}

// Stack is a chart of columns, each piled up of the same parts from below.
type Stack struct {
	Title   string   `json:"title"`
	X       Axis     `json:"x"`
	Y       Axis     `json:"y"`
	Parts   []Part   `json:"parts"`
	Columns []Column `json:"columns"`
}

// A Part has a name and the class of its colour, "p-switch" to "p-layout".
type Part struct {
	Name  string `json:"name"`
	Class string `json:"cls"`
}

// A Column stands at X with one value for each part and the text of their total.
// With a Reason it has neither: the words stand in the place of the bar.
type Column struct {
	X       string    `json:"x"`
	Values  []float64 `json:"values,omitempty"`
	Total   string    `json:"total,omitempty"`
	Outside bool      `json:"outside,omitempty"`
	Reason  string    `json:"reason,omitempty"`
}
