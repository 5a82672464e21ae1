package budget_test

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"
)

// What the exact solution is worth is checked here without a budget.

// marched integrates a circuit's equations from the start of an orbit in small equal
// steps (Runge-Kutta of fourth order), with an inductor equation written out by hand
// for each topology, and returns mean voltages at input and output, rms current, and
// how far the state is from its start in the end.
func (c *circuit) marched(topology string, o orbit, steps int) (vin, vout, rms, gap float64) {
	source := o.start.AtVec(xSource)
	x := [3]float64{o.start.AtVec(xCurrent), o.start.AtVec(xInput), o.start.AtVec(xOutput)}
	begin := x
	for phase, span := range []float64{o.d1, o.d2, o.d3} {
		if span <= 0 {
			continue
		}
		derive := func(x [3]float64) (slope [3]float64, in, out float64) {
			i, drawn, fed := x[0], 0.0, 0.0
			if phase == 2 {
				i = 0
			}
			if phase == 0 || phase == 1 && topology == "boost" {
				drawn = i
			}
			if phase == 1 || phase == 0 && topology == "buck" {
				fed = i
			}
			in, out = x[1]+c.inputESR*(source-drawn), x[2]+c.outputESR*(fed-c.load)
			var v float64
			switch {
			case phase == 2:
			case phase == 0 && topology == "buck":
				v = in - out - c.on.resistance*i
			case phase == 0:
				v = in - c.on.resistance*i
			case topology == "boost":
				v = in - out - c.off.drop - c.off.resistance*i
			default:
				v = -out - c.off.drop - c.off.resistance*i
			}
			return [3]float64{v * c.period / c.inductance, (source - drawn) * c.period / c.inputC, (fed - c.load) * c.period / c.outputC}, in, out
		}
		h := span / float64(steps)
		for range steps {
			k1, in1, out1 := derive(x)
			k2, in2, out2 := derive(along(x, k1, h/2))
			k3, in3, out3 := derive(along(x, k2, h/2))
			end := along(x, k3, h)
			k4, in4, out4 := derive(end)
			var next [3]float64
			for j := range x {
				next[j] = x[j] + h/6*(k1[j]+2*k2[j]+2*k3[j]+k4[j])
			}
			after, _, _ := derive(next)
			middle := (x[0]+next[0])/2 + h/8*(k1[0]-after[0])
			vin += h / 6 * (in1 + 2*in2 + 2*in3 + in4)
			vout += h / 6 * (out1 + 2*out2 + 2*out3 + out4)
			if phase < 2 {
				rms += h / 6 * (x[0]*x[0] + 4*middle*middle + next[0]*next[0])
			}
			x = next
		}
	}
	scale := []float64{c.load, c.vin, c.vout}
	for j := range x {
		gap = math.Max(gap, math.Abs(x[j]-begin[j])/scale[j])
	}
	return vin, vout, math.Sqrt(rms), gap
}

func along(x, slope [3]float64, h float64) [3]float64 {
	for j := range x {
		x[j] += h * slope[j]
	}
	return x
}

// TestExactByMarching integrates the orbits found in small steps: they must return
// with the asked mean voltages and the rms current found.
func TestExactByMarching(t *testing.T) {
	r, checked := stages{rand.New(rand.NewPCG(5, 5))}, map[string]int{}
	for i := range 54 {
		topology := []string{"boost", "buck", "buck_boost"}[i%3]
		s := r.draw(topology, []string{"diode", "forced"}[i/3%2], rough)
		c, _ := s.circuit.plain()
		f, err := c.settled()
		if err != nil {
			t.Fatal(err)
		}
		solve := c.continuous
		if f.mode == "dcm" {
			solve = c.discontinuous
		}
		o, err := solve()
		if err != nil {
			t.Fatal(err)
		}
		vin, vout, rms, gap := c.marched(topology, o, 400)
		checked[topology+" "+f.mode]++
		for _, v := range [][2]float64{{vin, c.vin}, {vout, c.vout}, {rms, f.rms}} {
			if !(math.Abs(v[0]/v[1]-1) < 1e-8) {
				t.Errorf("%s %s: %.12g in small steps, %.12g at once", topology, f.mode, v[0], v[1])
			}
		}
		if !(gap < 1e-8) {
			t.Errorf("%s %s: the state fails to return by %.2g", topology, f.mode, gap)
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
		f, err := e.exact()
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
