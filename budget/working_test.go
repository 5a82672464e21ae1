package budget_test

import (
	"math"
	"slices"
	"testing"

	"lossbook/budget"
	"lossbook/budget/formula"
)

// ofThePoint are the terms that are neither entered nor computed.
var ofThePoint = []string{"V_in", "I_out", "T_a"}

// shown counts what of the workings was checked.
type shown struct {
	t                        *testing.T
	items, formulas, reasons int
	steps, words, totals     int
	methods                  map[string]bool
}

// TestWorking evaluates what is shown of every item of every case with the terms that
// are shown, and wants the cell: for the item within 1e-12, for the quantities behind
// it within what rounding of their terms leaves.
func TestWorking(t *testing.T) {
	s := &shown{t: t, methods: map[string]bool{}}
	for name, c := range cases(t) {
		m, err := budget.Prepare(&c.Design)
		if err != nil {
			t.Fatal(err)
		}
		var b budget.Budget
		for _, p := range c.Points {
			m.At(p.point(&c.Design), &b)
			for i := range b.Items {
				s.item(name, m, &c.Design, &b, b.Items[i])
			}
			s.below(name, m, &c.Design, &b)
		}
	}
	t.Logf("%d items: %d formulas, %d reasons; behind them %d formulas and %d in words; %d totals; %d different formulas",
		s.items, s.formulas, s.reasons, s.steps, s.words, s.totals, len(s.methods))
	if s.items < 4000 || s.formulas < 3000 || s.reasons < 500 || s.steps < 10000 || s.totals < 1500 || len(s.methods) < 70 {
		t.Error("too little was checked")
	}
}

func (s *shown) item(name string, m *budget.Model, d *budget.Design, b *budget.Budget, it budget.Item) {
	s.t.Helper()
	s.items++
	where := name + " " + it.Part + "." + it.Kind
	w, known := m.Working(b, it.Part, it.Kind)
	if !known || w.Value() != it.Power || w.Outside != it.Outside {
		s.t.Errorf("%s: cell %v, working %+v", where, it.Power, w)
		return
	}
	if first := w.Steps[0]; first.Formula == nil {
		s.reasons++
		if it.Power != 0 || first.Words == "" {
			s.t.Errorf("%s: %v W without a formula, said of it: %q", where, it.Power, first.Words)
		}
	} else {
		s.formulas++
		if got := s.value(where, first); math.Abs(got-it.Power) > 1e-12*math.Abs(it.Power) {
			s.t.Errorf("%s: %s gives %.17g, the cell is %.17g", where, first.Formula.Text, got, it.Power)
		}
	}
	s.behind(where, w.Steps, d)
}

// below checks the rows that follow from all losses. A sum's terms are cells.
func (s *shown) below(name string, m *budget.Model, d *budget.Design, b *budget.Budget) {
	s.t.Helper()
	for what, value := range map[string]float64{"switch": b.Temperatures.Switch, "rectifier": b.Temperatures.Rectifier, "inductor": b.Temperatures.Inductor} {
		w, known := m.TemperatureWorking(b, what)
		s.total(name+" temperature "+what, b, w, known, value)
		s.behind(name, w.Steps, d)
	}
	w, known := m.EfficiencyWorking(b)
	s.total(name+" efficiency", b, w, known, b.Efficiency)
	s.behind(name, w.Steps, d)
	w, known = m.Loss(b)
	s.total(name+" loss", b, w, known, b.Loss)
	s.behind(name, w.Steps, d)
	for _, parts := range [][]string{{"switch"}, {"input_capacitor", "output_capacitor", "snubber"}, {"drive", "controller"}, {"layout"}} {
		sum := 0.0
		for _, it := range b.Items {
			if slices.Contains(parts, it.Part) {
				sum += it.Power
			}
		}
		w, known := m.Subtotal(b, parts...)
		s.total(name+" sum of "+parts[0], b, w, known, sum)
	}
}

func (s *shown) total(where string, b *budget.Budget, w budget.Working, known bool, value float64) {
	s.t.Helper()
	if known != (b.State == budget.Settled) {
		s.t.Errorf("%s: of a point that is %s a working is given: %v", where, b.State, known)
	}
	if !known {
		return
	}
	s.totals++
	if math.Abs(w.Value()-value) > 1e-14*math.Abs(value) {
		s.t.Errorf("%s is %v, its working %v", where, value, w.Value())
	}
	s.step(where, w.Steps[0])
}

// behind checks that every term is entered, belongs to the point, or has a step of its
// own that gives its value.
func (s *shown) behind(where string, steps []budget.Step, d *budget.Design) {
	s.t.Helper()
	own := map[string]float64{}
	for _, step := range steps[min(1, len(steps)):] {
		own[step.Name] = step.Value
		s.step(where+" "+step.Name, step)
	}
	for _, step := range steps {
		for _, path := range step.Inputs {
			if _, known := budget.FieldAt(path); !known {
				s.t.Errorf("%s: rests on %q, which is no entry", where, path)
			}
		}
		for _, term := range step.Terms {
			value, explained := own[term.Name]
			switch {
			case term.Path != "":
				s.entered(where, term, d)
			case slices.Contains(ofThePoint, term.Name):
			case !explained || value != term.Value:
				s.t.Errorf("%s: %s = %v %s comes from nowhere", where, term.Name, term.Value, term.Unit)
			}
		}
	}
}

func (s *shown) step(where string, step budget.Step) {
	s.t.Helper()
	if step.Formula == nil {
		s.words++
		if step.Words == "" {
			s.t.Errorf("%s: neither formula nor words", where)
		}
		return
	}
	s.steps++
	tolerance := 1e-13 * magnitude(step.Formula.Root, values(step))
	if step.Solved {
		tolerance = 1e-9 * (math.Abs(step.Value) + 273.15)
	}
	if got := s.value(where, step); !(math.Abs(got-step.Value) <= tolerance) {
		s.t.Errorf("%s: %s gives %.17g, it is %.17g", where, step.Formula.Text, got, step.Value)
	}
}

func (s *shown) value(where string, step budget.Step) float64 {
	s.t.Helper()
	s.methods[step.Formula.Text] = true
	if step.Source == "" {
		s.t.Errorf("%s: %s has no source", where, step.Formula.Text)
	}
	used := step.Formula.Names()
	for _, term := range step.Terms {
		if !slices.Contains(used, term.Name) {
			s.t.Errorf("%s: %s is shown but not used in %s", where, term.Name, step.Formula.Text)
		}
	}
	got, err := step.Formula.Value(values(step))
	if err != nil {
		s.t.Errorf("%s: %s: %v", where, step.Formula.Text, err)
	}
	return got
}

func values(step budget.Step) map[string]float64 {
	of := map[string]float64{}
	for _, term := range step.Terms {
		of[term.Name] = term.Value
	}
	return of
}

// magnitude is what an expression would be if nothing in it cancelled: the scale of
// its rounding.
func magnitude(n *formula.Node, of map[string]float64) float64 {
	switch n.Kind {
	case formula.Sum, formula.Difference:
		return magnitude(n.Args[0], of) + magnitude(n.Args[1], of)
	case formula.Product:
		return magnitude(n.Args[0], of) * magnitude(n.Args[1], of)
	case formula.Quotient:
		return magnitude(n.Args[0], of) / math.Abs(valueOf(n.Args[1], of))
	case formula.Negation, formula.Absolute:
		return magnitude(n.Args[0], of)
	case formula.Root:
		return math.Sqrt(magnitude(n.Args[0], of))
	}
	if n.Text == "max" || n.Text == "min" {
		return math.Max(magnitude(n.Args[0], of), magnitude(n.Args[1], of))
	}
	return math.Abs(valueOf(n, of))
}

func valueOf(n *formula.Node, of map[string]float64) float64 {
	v, _ := (&formula.Expression{Root: n}).Value(of) // an unknown name is reported of the whole
	return v
}

// entered checks a term against the design.
func (s *shown) entered(where string, term budget.Term, d *budget.Design) {
	s.t.Helper()
	f, known := budget.FieldAt(term.Path)
	want := f.Default
	if slot, there := d.Slot(term.Path, false); there {
		if n, is := slot.(*budget.Num); is && n.Stated {
			want = n.V
		}
	}
	if !known || f.Unit != term.Unit || want != term.Value {
		s.t.Errorf("%s: %s = %v %s, the entry %s is %v %s", where, term.Name, term.Value, term.Unit, term.Path, want, f.Unit)
	}
}

// There is a working of what there is a figure of, and of nothing else.
func TestNoWorking(t *testing.T) {
	given := map[budget.State]int{}
	for name, c := range cases(t) {
		m, err := budget.Prepare(&c.Design)
		if err != nil {
			t.Fatal(err)
		}
		var b budget.Budget
		for _, p := range c.Points {
			m.At(p.point(&c.Design), &b)
			given[b.State]++
			if _, known := m.Working(&b, "switch", "conduction"); known != (b.State == budget.Settled) {
				t.Errorf("%s: a point that is %s: a working is given: %v", name, b.State, known)
			}
			if _, known := m.Working(&b, "switch", "colour"); known {
				t.Errorf("%s: a loss that there is none of has a working", name)
			}
		}
	}
	if len(given) < 3 {
		t.Errorf("only these states were seen: %v", given)
	}
}
