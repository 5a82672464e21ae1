package budget

import (
	"math"
	"slices"
)

// reset empties a budget for a new point; its items keep their room.
func (b *Budget) reset(m *Model, p Point) {
	*b = Budget{Point: p, Vout: m.vout, model: m, Items: b.Items[:0]}
}

// book writes a settled situation into the budget. The input current is what the
// items at the solution draw, so that energy closes to rounding.
func (b *Budget) book(s *situation, a answer) {
	m, f := s.m, &s.frame
	b.State, b.Mode = Settled, s.mode
	b.Duty, b.OnTime = s.flow.D1, s.flow.OnTime
	b.Inductor = Current{Mean: s.il, Min: s.flow.Min, Max: s.flow.Max, RMS: math.Sqrt(s.inductor.MeanSquare())}
	b.SwitchRMS, b.RectifierRMS = math.Sqrt(s.sw.MeanSquare()), math.Sqrt(s.re.MeanSquare())
	b.RectifierMean = s.re.Mean()
	b.InputCapRMS, b.OutputCapRMS = math.Sqrt(s.inputAC), math.Sqrt(s.outputAC)
	b.Temperatures = Temperatures{s.temperature[0], s.temperature[1], s.temperature[2]}
	b.bookItems(s)
	b.Pout = m.vout * f.Iout
	b.Pin = b.Pout + b.Loss
	if b.Pin > 0 {
		b.Efficiency = b.Pout / b.Pin
	}
	is := (m.vout*f.io + s.stage) / f.Vin
	b.Iin = is + (m.fedFromInput(f)+inputESR(s, nil))/f.Vin
	b.bookErrors(s, a)
	b.guess = s.guess
}

// bookErrors tells how far the solution may still be: by the step that the solver saw
// no need to make. Each of its watts, of the stage's loss or of a part's heat, moves
// the whole loss by no more than itself where substitution settles.
func (b *Budget) bookErrors(s *situation, a answer) {
	b.Iterations, b.Residual = a.iterations, a.residual
	var kelvin [3]float64
	for i := range kelvin {
		kelvin[i] = math.Abs(a.step[i+1]) * (s.m.theta[i] + s.m.enclosure)
		b.LossError += math.Abs(a.step[i+1])
	}
	b.LossError += math.Abs(a.step[0])
	b.HeatErrors = Temperatures{kelvin[0], kelvin[1], kelvin[2]}
}

func (b *Budget) bookItems(s *situation) {
	b.Loss = 0
	b.Items = slices.Grow(b.Items, len(s.m.entries))[:len(s.m.entries)]
	for i := range s.m.entries {
		e, it := &s.m.entries[i], &b.Items[i]
		it.Part, it.Kind, it.Outside, it.step = e.part, e.kind, false, nil
		it.Power = e.power(s, it)
		b.Loss += it.Power
	}
}
