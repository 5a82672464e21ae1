package budget

import (
	"math"
	"math/rand/v2"
	"testing"

	"lossbook/budget/stage"
	"lossbook/budget/wave"
)

// TestWeighedRipple holds the table's sum over the harmonics against the sum one by
// one, down to where the table is left.
func TestWeighedRipple(t *testing.T) {
	d := quiet()
	d.Inductor.Winding = &Winding{Conductor: "round", Diameter: N(9e-4), Layers: N(3), Porosity: N(0.8)}
	m, b := solved(t, d, easy)
	s := m.situationOf(b)
	random := rand.New(rand.NewPCG(3, 14))
	worst, tabled := 0.0, 0
	for range 20000 {
		d1 := math.Pow(10, -2.2*random.Float64())
		s.mode, s.flow = CCM, stage.Flow{Triangle: wave.Triangle{Max: 3, D1: d1, D2: 1 - d1}}
		s.temperature[inductorHeat] = -40 + 200*random.Float64()
		square := s.harmonics()
		want, _ := m.spectrum.Weigh(&square, s.temperature[inductorHeat])
		got := s.weighedRipple()
		if got != want {
			tabled++
		}
		worst = math.Max(worst, math.Abs(got-want)/want)
	}
	t.Logf("%d of 20000 by the table, worst off by %.1e", tabled, worst)
	if worst > 1e-12 || tabled < 5000 {
		t.Errorf("worst off by %.2g", worst)
	}
}
