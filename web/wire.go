package web

import (
	"encoding/json"
	"time"

	"lossbook/budget"
)

// Point is one row of a result, as the API writes it and as revisions keep it.
// Page, CSV and JSON are all drawn from a list of these.
type Point struct {
	Vin      float64   `json:"vin"`
	Iout     float64   `json:"iout"`
	Ambient  float64   `json:"ambient"`
	Vout     float64   `json:"vout"`
	State    string    `json:"state"`
	Reason   string    `json:"reason,omitempty"` // of a point that does not settle
	Part     string    `json:"part,omitempty"`   // of a runaway
	*Figures           // of a point that settles
	Findings []Finding `json:"findings"`
}

// Figures is what a settled point has and another has not.
type Figures struct {
	Mode               string       `json:"mode"`
	Duty               float64      `json:"duty"`
	OnTime             float64      `json:"on_time"`
	Pin                float64      `json:"pin"`
	Pout               float64      `json:"pout"`
	Loss               float64      `json:"loss"`
	Efficiency         float64      `json:"efficiency"`
	Iin                float64      `json:"iin"`
	InductorCurrent    Current      `json:"inductor_current"`
	SwitchRMS          float64      `json:"switch_rms"`
	RectifierRMS       float64      `json:"rectifier_rms"`
	RectifierMean      float64      `json:"rectifier_mean"`
	InputCapacitorRMS  float64      `json:"input_capacitor_rms"`
	OutputCapacitorRMS float64      `json:"output_capacitor_rms"`
	Temperatures       Temperatures `json:"temperatures"`
	Items              []Item       `json:"items"`
	Solver             *Solver      `json:"solver,omitempty"` // a revision of an early model kept none
}

// Solver is what the search for the point took, and how far its answer may still be
// from the solution.
type Solver struct {
	Evaluations       int          `json:"evaluations"`
	Error             float64      `json:"error"`              // the larger share of the loss or of a temperature in kelvin
	LossError         float64      `json:"loss_error"`         // W
	TemperatureErrors Temperatures `json:"temperature_errors"` // K
}

// Current describes the inductor's current, in A.
type Current struct {
	Mean float64 `json:"mean"`
	Min  float64 `json:"min"`
	Max  float64 `json:"max"`
	RMS  float64 `json:"rms"`
}

// Temperatures are those of the parts, in °C.
type Temperatures struct {
	Switch    float64 `json:"switch"`
	Rectifier float64 `json:"rectifier"`
	Inductor  float64 `json:"inductor"`
}

// Item is one loss, in W.
type Item struct {
	Part    string  `json:"part"`
	Kind    string  `json:"kind"`
	Power   float64 `json:"power"`
	Outside bool    `json:"outside,omitempty"` // a curve was held flat for it
	Working []Step  `json:"working,omitempty"` // where it was asked for: the loss, then what it was computed from
}

// Step is one quantity of a working: its formula, evaluated with the terms, gives the
// result. Without a formula, words say how it is found.
type Step struct {
	Name    string   `json:"name"`
	Formula string   `json:"formula,omitempty"`
	Words   string   `json:"words,omitempty"`
	Terms   []Term   `json:"terms"`
	Result  float64  `json:"result"`
	Unit    string   `json:"unit"`
	Source  string   `json:"source,omitempty"`
	Inputs  []string `json:"inputs,omitempty"` // paths of entries it rests on beside its terms
}

// Term is a quantity of a formula; one that is entered has the path of its entry.
type Term struct {
	Name  string  `json:"name"`
	Value float64 `json:"value"`
	Unit  string  `json:"unit"`
	Path  string  `json:"path,omitempty"`
}

// Finding is a rating exceeded, a caution or a note. A design's names the point
// where it is worst.
type Finding struct {
	Level   string  `json:"level"`
	Part    string  `json:"part"`
	Rule    string  `json:"rule"`
	Message string  `json:"message"`
	Value   float64 `json:"value"`
	Limit   float64 `json:"limit"`
	Source  string  `json:"source"`
	Unit    string  `json:"unit,omitempty"` // of value and limit
	Point   *At     `json:"point,omitempty"`
}

// At names an operating point.
type At struct {
	Vin     float64 `json:"vin"`
	Iout    float64 `json:"iout"`
	Ambient float64 `json:"ambient"`
}

// Revision is a saved state: design and results as they were saved, byte for
// byte.
type Revision struct {
	Number    int             `json:"number"`
	Note      string          `json:"note"`
	CreatedAt time.Time       `json:"created_at"`
	Model     string          `json:"model"`
	Design    json.RawMessage `json:"design"`
	Points    json.RawMessage `json:"points"`
	Findings  json.RawMessage `json:"findings"`
}

// Settled reports whether the point has figures.
func (p *Point) Settled() bool { return p.Figures != nil }

func pointOf(b *budget.Budget, findings []budget.Finding) Point {
	p := Point{
		Vin: b.Vin, Iout: b.Iout, Ambient: b.Ambient, Vout: b.Vout,
		State: b.State.String(), Findings: findingsOf(findings),
	}
	if b.State == budget.Settled {
		p.Figures = figuresOf(b)
		return p
	}
	p.Reason, p.Part = b.Reason(), b.Part
	return p
}

func figuresOf(b *budget.Budget) *Figures {
	f := &Figures{
		Mode: b.Mode.String(), Duty: b.Duty, OnTime: b.OnTime,
		Pin: b.Pin, Pout: b.Pout, Loss: b.Loss, Efficiency: b.Efficiency, Iin: b.Iin,
		InductorCurrent: Current(b.Inductor),
		SwitchRMS:       b.SwitchRMS, RectifierRMS: b.RectifierRMS, RectifierMean: b.RectifierMean,
		InputCapacitorRMS: b.InputCapRMS, OutputCapacitorRMS: b.OutputCapRMS,
		Temperatures: Temperatures(b.Temperatures),
		Items:        make([]Item, len(b.Items)),
		Solver:       &Solver{b.Iterations, b.Residual, b.LossError, Temperatures(b.HeatErrors)},
	}
	for i, it := range b.Items {
		f.Items[i] = Item{Part: it.Part, Kind: it.Kind, Power: it.Power, Outside: it.Outside}
	}
	return f
}

func findingsOf(findings []budget.Finding) []Finding {
	list := make([]Finding, len(findings)) // never nil: an empty list is [], not null
	for i, f := range findings {
		list[i] = Finding{Level: string(f.Level), Part: f.Part, Rule: f.Rule, Message: f.Message,
			Value: f.Value, Limit: f.Limit, Source: f.Source, Unit: f.Unit}
		if f.At != nil {
			at := At(*f.At)
			list[i].Point = &at
		}
	}
	return list
}
