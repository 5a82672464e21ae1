package budget_test

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"
)

// What the exact solution is worth is checked here without a budget.

// TestExactByMarching solves stages by small steps as well: all figures must be those
// of the matrix exponentials.
func TestExactByMarching(t *testing.T) {
	r, checked := stages{rand.New(rand.NewPCG(5, 5))}, map[string]int{}
	for i := range 54 {
		topology := []string{"boost", "buck", "buck_boost"}[i%3]
		s := r.draw(topology, []string{"diode", "forced"}[i/3%2], rough)
		c, _ := s.circuit.plain()
		want, err := c.settled()
		if err != nil {
			t.Fatal(err)
		}
		got, err := c.lapped(topology)
		if err != nil || got.mode != want.mode || got.open > 1e-8 {
			t.Errorf("%s: mode %s of %s, energy open by %.1e, %v", topology, got.mode, want.mode, got.open, err)
		}
		checked[topology+" "+want.mode]++
		for _, v := range [][2]float64{{got.duty, want.duty}, {got.mean, want.mean}, {got.rms, want.rms}, {got.max, want.max}, {got.switchRMS, want.switchRMS}, {got.rectifierRMS, want.rectifierRMS},
			{got.rectifierMean, want.rectifierMean}, {got.inputRMS, want.inputRMS}, {got.outputRMS, want.outputRMS}, {got.source, want.source}} {
			if !(math.Abs(v[0]/v[1]-1) < 1e-7) {
				t.Errorf("%s %s: %.12g in small steps, %.12g at once", topology, want.mode, v[0], v[1])
			}
		}
	}
	for _, topology := range []string{"boost", "buck", "buck_boost"} {
		if checked[topology+" ccm"] < 5 || checked[topology+" dcm"] < 3 {
			t.Errorf("too few of a kind: %v", checked)
		}
	}
}

// TestExactWithoutLosses holds the ratios of Erickson & Maksimović, Fundamentals of
// Power Electronics, chapters 2 and 5, which a circuit without resistance and with
// large capacitors must have: continuous at full load, discontinuous at K = 2L/(RT).
func TestExactWithoutLosses(t *testing.T) {
	for _, c := range []struct {
		topology  string
		on, off   path
		d         float64
		ratio     float64
		k         float64 // 0: continuous
		rectifies bool
	}{
		{"boost", path{in: true}, path{in: true, out: true}, 0.4, 1 / 0.6, 0, false},
		{"buck", path{in: true, out: true}, path{out: true}, 0.4, 0.4, 0, false},
		{"buck_boost", path{in: true}, path{out: true}, 0.4, 0.4 / 0.6, 0, false},
		{"boost", path{in: true}, path{in: true, out: true}, 0.4, (1 + math.Sqrt(1+4*0.16/0.1)) / 2, 0.1, true},
		{"buck", path{in: true, out: true}, path{out: true}, 0.4, 2 / (1 + math.Sqrt(1+4*0.1/0.16)), 0.1, true},
		{"buck_boost", path{in: true}, path{out: true}, 0.4, 0.4 / math.Sqrt(0.1), 0.1, true},
	} {
		e := circuit{on: c.on, off: c.off, period: 1, inductance: 1, vin: 1, vout: c.ratio, load: 3, inputC: 1e8, outputC: 1e8, rectifies: c.rectifies}
		if c.k > 0 {
			e.load = c.ratio * c.k / 2 // R = 2L/(K·T)
		}
		von, voff := unit(c.on.in)-unit(c.on.out)*c.ratio, unit(c.off.out)*c.ratio-unit(c.off.in)
		e.guessOn, e.guessTotal = von, von+voff
		f, err := e.exact(c.topology)
		mode := map[bool]string{true: "dcm", false: "ccm"}[c.k > 0]
		name := fmt.Sprintf("%s %s", c.topology, mode)
		if err != nil || f.mode != mode || !(math.Abs(f.duty-c.d) < 1e-7) || !(math.Abs(f.efficiency-1) < 1e-9) {
			t.Errorf("%s: duty %.9g, want %g; efficiency %.12g, mode %s, %v", name, f.duty, c.d, f.efficiency, f.mode, err)
		}
		if peak := von * c.d; !(math.Abs(f.max-f.min-peak) < 1e-6*peak) {
			t.Errorf("%s: the current moves by %.9g, V·t/L is %.9g", name, f.max-f.min, peak)
		}
	}
}
