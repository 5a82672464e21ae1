package budget

import (
	"lossbook/budget/formula"
)

// Working is how one figure of a budget came about: the figure itself, then each
// quantity it was computed from that was itself computed, nearest first.
type Working struct {
	Outside bool // a curve was held flat for it
	Steps   []Step
}

// Value returns the figure, in the unit of the first step.
func (w *Working) Value() float64 { return w.Steps[0].Value }

// Step is one quantity with the formula it follows from. The formula, evaluated with
// the terms, gives the value.
type Step struct {
	Term
	Formula *formula.Expression // nil where Words say it
	Words   string              // why there is nothing to compute, or how it is found where no formula gives it
	Terms   []Term              // in the order of the formula
	Source  string              // of the method
	Inputs  []string            // paths of entries it rests on beside its terms: curves, sizes
	Solved  bool                // it feeds back on itself: formula and value agree as closely as the point was solved
}

// Term is a named quantity. The names are those of formulas; the unit is that of
// the value. Path is its place in the design, "" of one that is not entered.
type Term struct {
	Name  string
	Value float64
	Unit  string
	Path  string
}

// method is a formula with its source.
type method struct {
	formula *formula.Expression
	source  string
}

func how(text, source string) method { return method{formula.Must(text), source} }

// Working returns how the item of a settled budget came about, from a repetition of
// its last evaluation: the same functions give the same figures, and this time note
// what they use. There is none of a point without figures, of an unknown item, or
// where a quantity is beyond any number.
func (m *Model) Working(b *Budget, part, kind string) (Working, bool) {
	e := m.entryOf(part, kind)
	if b.State != Settled || e == nil {
		return Working{}, false
	}
	s := m.situationOf(b)
	it := Item{Part: part, Kind: kind, step: new(Step)}
	it.step.by(e.method)
	power := e.power(s, &it)
	it.step.Term = Term{Name: "P", Value: power, Unit: "W"}
	if it.step.Formula == nil {
		it.step.Terms = nil
	}
	w := Working{Outside: it.Outside, Steps: []Step{*it.step}}
	w.follow(s, e)
	return w, w.writable()
}

// writable reports whether every number behind a figure can be written: absurd entries
// let a coefficient overflow although the loss, worked out in logarithms, does not.
func (w *Working) writable() bool {
	for _, step := range w.Steps {
		for _, term := range append(step.Terms, step.Term) {
			if !finite(term.Value) {
				return false
			}
		}
	}
	return true
}

func (m *Model) entryOf(part, kind string) *entry {
	for i := range m.entries {
		if e := &m.entries[i]; e.part == part && e.kind == kind {
			return e
		}
	}
	return nil
}

// follow adds a step for each term that has a definition of its own, and for theirs.
func (w *Working) follow(s *situation, e *entry) {
	known := map[string]bool{}
	for i := 0; i < len(w.Steps); i++ {
		for _, term := range w.Steps[i].Terms {
			define, is := definitions[term.Name]
			if !is || term.Path != "" || known[term.Name] {
				continue
			}
			known[term.Name] = true
			step := Step{Term: term}
			define(s, &step, e)
			w.Steps = append(w.Steps, step)
		}
	}
}

// by takes a formula and its source.
func (st *Step) by(m method) { st.Formula, st.Words, st.Source = m.formula, "", m.source }

// found says in words how a quantity is found that no single formula gives, and
// which entries it rests on.
func (st *Step) found(words, source string, inputs ...string) {
	st.Formula, st.Words, st.Source, st.Inputs = nil, words, source, inputs
}

// note takes a term that is computed, or belongs to the point.
func (st *Step) note(name string, value float64, unit string) {
	st.Terms = append(st.Terms, Term{Name: name, Value: value, Unit: unit})
}

// given takes a term that is entered in the design at the path.
func (st *Step) given(name, path string, value float64) {
	f, _ := FieldAt(path)
	st.Terms = append(st.Terms, Term{Name: name, Value: value, Unit: f.Unit, Path: path})
}

// An item hands on what its power function says while its working is asked for; at
// all other times, and without an item, nothing is kept.

func (it *Item) asked() bool { return it != nil && it.step != nil }

func (it *Item) note(name string, value float64, unit string) {
	if it.asked() {
		it.step.note(name, value, unit)
	}
}

func (it *Item) given(name, path string, value float64) {
	if it.asked() {
		it.step.given(name, path, value)
	}
}

// by replaces the formula of the item's row, where the function takes another way.
func (it *Item) by(m method) {
	if it.asked() {
		it.step.by(m)
	}
}

// none says why the item is 0.
func (it *Item) none(words string) float64 {
	if it.asked() {
		it.step.found(words, "")
	}
	return 0
}

func (it *Item) outside(is bool) {
	if it != nil && is {
		it.Outside = true
	}
}
