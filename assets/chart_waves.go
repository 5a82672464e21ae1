package assets

// Waves is the data of a <loss-chart> of the kind "waves", one row a waveform over a
// shared time axis; chart-waves.js says how it is drawn. Times come in the unit that X
// names, values in their row's.
type Waves struct {
	Title     string     `json:"title"`
	X         Axis       `json:"x"`
	Y         Axis       `json:"y"`
	Period    float64    `json:"period"`
	Intervals []Interval `json:"intervals"`
	Rows      []Wave     `json:"rows"`
}

// An Interval is a named part of the period.
type Interval struct {
	Name string  `json:"name"`
	From float64 `json:"from"`
	To   float64 `json:"to"`
}

// A Wave runs straight from point to point, [time, value], over one period; two points
// at one time are a jump. Short names it where its value is read.
type Wave struct {
	Name   string       `json:"name"`
	Short  string       `json:"short"`
	Class  string       `json:"cls"`
	Unit   string       `json:"unit"`
	Points [][2]float64 `json:"points"`
	Levels []Level      `json:"levels"`
}

// A Level is a figure of a waveform, marked at its height and labelled with its name
// and text, the figure in the row's unit. Dash is 0 solid, 1 dashed, 2 dotted.
type Level struct {
	Name  string  `json:"name"`
	Text  string  `json:"text"`
	Value float64 `json:"value"`
	Dash  int     `json:"dash"`
}
