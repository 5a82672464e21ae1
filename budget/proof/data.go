// Package proof holds the model against figures from elsewhere: printed in data
// sheets and application notes, derived from closed forms, or measured. The
// figures are data, with their sources; here stands how the model comes by its
// own, which are computed each time and never written down.
package proof

import (
	"bytes"
	"encoding/json"
	"fmt"
	"math"
	"strconv"
	"strings"
)

// File is everything that is known of how far the model can be trusted, but for
// what is measured.
type File struct {
	Checks    []Check    `json:"checks"`
	Unchecked []Gap      `json:"unchecked"` // items and findings that no figure of the checks is about
	LeftOut   []Omission `json:"left_out"`
}

// Check is one place of one document, with the figures it prints.
type Check struct {
	ID        int         `json:"id"`
	Group     string      `json:"group"`
	Title     string      `json:"title"`
	Document  string      `json:"document"`
	Place     string      `json:"place"`
	Known     Knowledge   `json:"known"`
	How       string      `json:"how"`  // how the model is brought to answer
	Slip      string      `json:"slip"` // where a printed figure doesn't follow from its own inputs
	Inputs    [][2]string `json:"inputs"`
	Figures   []Figure    `json:"figures"`
	Unreached []Unreached `json:"unreached"`
}

// Knowledge says how a figure came to be known.
type Knowledge string

// The ways a figure is known.
const (
	Read       Knowledge = "read"             // in the document named
	SecondHand Knowledge = "read second-hand" // where another document quotes it
	Derived    Knowledge = "derived"          // worked out here from a published closed form
	Memory     Knowledge = "from memory"
)

// Figure is one value to be reached.
type Figure struct {
	Name       string      `json:"name"`
	At         [][2]string `json:"at"` // inputs of its own
	Printed    string      `json:"printed"`
	Recomputed string      `json:"recomputed"` // what the printed inputs give, where that is something else or more exact
	Tolerance  string      `json:"tolerance"`  // "0.3 %"; else half of the last digit given
	Why        string      `json:"why"`        // of a tolerance that is wider
	Covers     []string    `json:"covers"`     // items "part.kind" and findings "finding.rule" that it is about
}

// Unreached is a printed figure that the model can't be asked for.
type Unreached struct {
	Name    string `json:"name"`
	Printed string `json:"printed"`
	Reason  string `json:"reason"`
}

// Gap is an item or a finding without a check.
type Gap struct {
	What   string `json:"what"`
	Reason string `json:"reason"`
}

// Omission is something the model leaves out, and what it may amount to.
type Omission struct {
	What string `json:"what"`
	Size string `json:"size"`
}

// ReadFile reads the data and refuses what it doesn't know, or what lacks a source,
// a reason or a value.
func ReadFile(text []byte) (File, error) {
	decoder := json.NewDecoder(bytes.NewReader(text))
	decoder.DisallowUnknownFields()
	var f File
	if err := decoder.Decode(&f); err != nil {
		return File{}, err
	}
	seen := map[int]bool{}
	for _, c := range f.Checks {
		if seen[c.ID] {
			return File{}, fmt.Errorf("check %d stands twice", c.ID)
		}
		seen[c.ID] = true
		if fault := c.fault(); fault != "" {
			return File{}, fmt.Errorf("check %d %s", c.ID, fault)
		}
	}
	for _, g := range f.Unchecked {
		if g.What == "" || g.Reason == "" {
			return File{}, fmt.Errorf("%q is unchecked without a reason", g.What)
		}
	}
	for _, o := range f.LeftOut {
		if o.What == "" || o.Size == "" {
			return File{}, fmt.Errorf("%q is left out without a size", o.What)
		}
	}
	return f, nil
}

// fault says what a check lacks.
func (c Check) fault() string {
	switch c.Known {
	case Read, SecondHand, Derived, Memory:
	default:
		return fmt.Sprintf("is known %q", c.Known)
	}
	if c.Title == "" || c.Group == "" || c.Document == "" || len(c.Figures)+len(c.Unreached) == 0 {
		return "has no title, group, document or figure"
	}
	if len(c.Figures) > 0 && c.How == "" {
		return "doesn't say how it is reached"
	}
	names := map[string]bool{}
	for _, g := range c.Figures {
		if g.Name == "" || names[g.Name] {
			return fmt.Sprintf("has the figure %q without a name, or twice", g.Name)
		}
		names[g.Name] = true
		if _, err := g.expected(); err != nil {
			return err.Error()
		}
		if (g.Tolerance == "") != (g.Why == "") {
			return "has a tolerance without a reason at " + g.Name
		}
	}
	for _, u := range c.Unreached {
		if u.Name == "" || u.Reason == "" {
			return fmt.Sprintf("leaves out %q without a reason", u.Name)
		}
	}
	return ""
}

// expected is a figure as numbers.
type expected struct {
	want    float64 // in base units
	scale   float64 // of its own unit in base units
	allowed float64 // in base units, to either side
}

func (g Figure) expected() (e expected, err error) {
	text := g.Recomputed
	if text == "" {
		text = g.Printed
	}
	number, unit, _ := strings.Cut(text, " ")
	if e.want, err = quantity(text); err != nil {
		return e, fmt.Errorf("has at %s %w", g.Name, err)
	}
	e.scale = units[unit]
	e.allowed = halfDigit(number) * e.scale
	if g.Tolerance != "" {
		share, err := quantity(g.Tolerance)
		if err != nil || !(share > 0) {
			return e, fmt.Errorf("has at %s the tolerance %q", g.Name, g.Tolerance)
		}
		e.allowed = share * math.Abs(e.want)
	}
	if e.want == 0 {
		return e, fmt.Errorf("expects nothing at %s", g.Name)
	}
	return e, nil
}

// Expected returns the text of what a figure is held against.
func (g Figure) Expected() string {
	if g.Recomputed != "" {
		return g.Recomputed
	}
	return g.Printed
}

// Reprinted reports whether a document prints something else than what its figure is
// held against, digits aside.
func (g Figure) Reprinted() bool {
	if g.Printed == "" || g.Recomputed == "" {
		return false
	}
	printed, err := quantity(g.Printed)
	again, _ := quantity(g.Recomputed)
	return err != nil || math.Abs(printed-again) > 1e-9*math.Abs(again)
}

// units are what a figure may be given in, over the base unit that the model
// computes in.
var units = map[string]float64{
	"": 1, "%": 1e-2,
	"V": 1, "mV": 1e-3, "A": 1, "mA": 1e-3, "W": 1, "mW": 1e-3, "Ω": 1, "mΩ": 1e-3,
	"F": 1, "pF": 1e-12, "H": 1, "µH": 1e-6, "C": 1, "nC": 1e-9, "µC": 1e-6,
	"s": 1, "ns": 1e-9, "µs": 1e-6, "Hz": 1, "kHz": 1e3, "MHz": 1e6,
	"°C": 1, "K/W": 1, "1/K": 1, "%/K": 1e-2, "T": 1, "mT": 1e-3, "m": 1, "mm": 1e-3, "µA": 1e-6,
	"kW/m³": 1e3, "W/m³": 1, "MS/m": 1e6, "A/µs": 1e6, "Ω/1000ft": 1 / 304.8,
}

// quantity reads a number and its unit.
func quantity(text string) (float64, error) {
	number, unit, _ := strings.Cut(text, " ")
	v, err := strconv.ParseFloat(number, 64)
	scale, known := units[unit]
	if err != nil || !known {
		return 0, fmt.Errorf("%q, which is no number with a unit known here", text)
	}
	return v * scale, nil
}

// halfDigit returns half of the last digit that a number is given to.
func halfDigit(number string) float64 {
	mantissa, power, _ := strings.Cut(strings.ToLower(number), "e")
	exponent, _ := strconv.Atoi(power)
	if _, decimals, is := strings.Cut(mantissa, "."); is {
		exponent -= len(decimals)
	}
	return 0.5 * math.Pow10(exponent)
}
