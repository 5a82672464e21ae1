package proof

import (
	"errors"
	"fmt"
	"math"
)

// Result is a check with what the model gives.
type Result struct {
	Check
	Outcomes []Outcome // of its figures, in their order
}

// Outcome is one figure with what the model gives for it.
type Outcome struct {
	Figure
	Got     float64 // in the units of the figure
	Allowed float64 // to either side, in the units of the figure
	Off     float64 // share of the expected value by which it is missed
	Digits  float64 // correct digits as a factor's exponent: −log10 of Off, 15 at most
	Holds   bool
}

// Runner brings the model to answer for one check.
type Runner func(t *Trial)

// runners are the checks that the physics can answer by itself.
var runners = map[int]Runner{
	1: boostTable, 2: synchronousRectifier, 3: synchronousBuck, 4: largeBuck, 5: integratedBuck, 6: hotBuck, 7: outputCapacitance, 28: diodeBuck,
	8: boostSizing, 9: boostWithDrops, 10: invertingCurrents, 11: inputCapacitor, 29: suppliedBoost, 30: touchingZero,
	12: windingResistance, 13: allDrops, 14: discontinuous, 15: rmsValues,
	16: triangleOverSine, 17: ferrite, 19: dowell, 20: copper,
	21: runaway, 22: forwardLines, 23: recoveryTriangle,
	24: measuredAccounts, 27: cautions,
}

// Run asks the model for every figure. more holds how to answer the checks that are
// about what lies outside the physics. It fails if a figure is not answered, an
// answer belongs to none, or an input was not used.
func Run(f File, more map[int]Runner) ([]Result, error) {
	var results []Result
	var faults []error
	for _, c := range f.Checks {
		r, err := c.run(more)
		if err != nil {
			faults = append(faults, fmt.Errorf("check %d, %s: %w", c.ID, c.Title, err))
		}
		results = append(results, r)
	}
	return results, errors.Join(faults...)
}

func (c Check) run(more map[int]Runner) (Result, error) {
	r := Result{Check: c}
	if len(c.Figures) == 0 {
		return r, nil
	}
	run := runners[c.ID]
	if run == nil {
		run = more[c.ID]
	}
	if run == nil {
		return r, errors.New("nothing answers it")
	}
	t := &Trial{check: c, inputs: newInputs(c.Inputs), got: map[string]float64{}}
	run(t)
	t.inputs.used(t)
	for _, g := range c.Figures {
		got, answered := t.got[g.Name]
		if !answered {
			t.fail("%s is not answered", g.Name)
			continue
		}
		r.Outcomes = append(r.Outcomes, g.held(got))
		delete(t.got, g.Name)
	}
	for name := range t.got {
		t.fail("%s is answered, and stands nowhere", name)
	}
	return r, t.err
}

// held holds an answer in base units against a figure.
func (g Figure) held(got float64) Outcome {
	e, err := g.expected()
	off := math.Abs(got-e.want) / math.Abs(e.want)
	return Outcome{Figure: g, Got: got / e.scale, Allowed: e.allowed / e.scale, Off: off,
		Digits: math.Min(15, -math.Log10(off)), Holds: err == nil && math.Abs(got-e.want) <= e.allowed}
}

// Trial is a check while it is answered.
type Trial struct {
	check  Check
	inputs *inputs
	got    map[string]float64
	err    error
}

func (t *Trial) fail(format string, args ...any) {
	if t.err == nil {
		t.err = fmt.Errorf(format, args...)
	}
}

// In returns an input in the units of its base, 0 if there is none, which fails the
// check.
func (t *Trial) In(name string) float64 { return t.inputs.value(t, name) }

// Is answers a figure with a value in the units of its base.
func (t *Trial) Is(name string, value float64) { t.got[name] = value }

// Each answers every figure that has inputs of its own, given its name; in reads its
// inputs in the units of their base.
func (t *Trial) Each(answer func(figure string, in func(input string) float64) float64) {
	for _, g := range t.check.Figures {
		if len(g.At) == 0 {
			continue
		}
		own := newInputs(g.At)
		t.Is(g.Name, answer(g.Name, func(input string) float64 { return own.value(t, input) }))
		own.used(t)
	}
}

// inputs are values by name, each of which must be asked for.
type inputs struct {
	text  map[string]string
	asked map[string]bool
}

func newInputs(list [][2]string) *inputs {
	in := &inputs{map[string]string{}, map[string]bool{}}
	for _, pair := range list {
		in.text[pair[0]] = pair[1]
	}
	return in
}

func (in *inputs) value(t *Trial, name string) float64 {
	in.asked[name] = true
	text, is := in.text[name]
	if !is {
		t.fail("it has no input %q", name)
		return 0
	}
	v, err := quantity(text)
	if err != nil {
		t.fail("its input %q is %w", name, err)
	}
	return v
}

func (in *inputs) used(t *Trial) {
	for name := range in.text {
		if !in.asked[name] {
			t.fail("its input %q is not used", name)
		}
	}
}
