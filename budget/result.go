package budget

// Point is an operating point: input voltage, load current, ambient in °C.
type Point struct{ Vin, Iout, Ambient float64 }

// State says whether a point has a budget.
type State uint8

// The three states of a point.
const (
	Settled State = iota
	OutOfReach
	Runaway
)

// String returns the state as the API writes it.
func (s State) String() string {
	return [...]string{"settled", "out_of_reach", "runaway"}[s]
}

// Mode says whether the inductor current flows all the time.
type Mode uint8

// The two modes.
const (
	CCM Mode = iota
	DCM
)

// String returns the mode as the API writes it.
func (m Mode) String() string { return [...]string{"ccm", "dcm"}[m] }

// Item is one loss of a budget.
type Item struct {
	Part, Kind string
	Power      float64 // W
	Outside    bool    // a curve was held flat for it
	step       *Step   // what its function notes while its working is asked for
}

// Current describes a periodic current, in A.
type Current struct{ Mean, Min, Max, RMS float64 }

// Temperatures of the parts that heat themselves, in °C.
type Temperatures struct{ Switch, Rectifier, Inductor float64 }

// Budget is what a model finds at one point. Of a point that did not settle
// only Point, Vout, State, Part and the reason stand.
type Budget struct {
	Point
	Vout    float64
	State   State
	Part    string // of a runaway: the part that runs away
	reason  reason
	current float64 // A, that a reason speaks of
	model   *Model

	Mode          Mode
	Duty          float64 // share of the period in which the switch conducts
	OnTime        float64 // s
	Pin, Pout     float64 // W; Pin is all power drawn, the rail's too
	Loss          float64 // W, the sum of Items
	Efficiency    float64 // 0…1
	Iin           float64 // mean, A
	Inductor      Current
	SwitchRMS     float64
	RectifierRMS  float64
	RectifierMean float64
	InputCapRMS   float64
	OutputCapRMS  float64
	Temperatures  Temperatures
	Items         []Item
	Iterations    int          // evaluations of all losses it took
	Residual      float64      // how far the answer may still be: the larger share of the loss or of a temperature in kelvin
	LossError     float64      // the same in W
	HeatErrors    Temperatures // the same of each temperature, in K

	guess float64 // W of stage loss, from which the whole situation follows again
}

// Level is the weight of a finding.
type Level string

// The levels, worst first.
const (
	Exceeded Level = "exceeded"
	Caution  Level = "caution"
	Note     Level = "note"
)

// Finding is a rating exceeded, a caution or a note, worded as what the
// engineer can do about it.
type Finding struct {
	Level   Level
	Part    string
	Rule    string
	Aspect  string // tells findings of one rule and part apart: "ripple", "voltage"
	Message string
	Value   float64
	Limit   float64
	Unit    string // of Value and Limit, "" for a ratio
	Source  string
	At      *Point // of a design's finding: the point where it is worst
}

// FieldError is one thing wrong with a design, at its JSON path, in words that
// say what would be right.
type FieldError struct {
	Path    string
	Message string
	Missing bool // nothing is entered where something must be
}

// Error returns path and message.
func (e FieldError) Error() string { return e.Path + ": " + e.Message }
