package budget

import (
	"encoding/json"
	"math"
	"strings"
	"testing"
	"time"
)

// wild draws designs of extreme magnitudes that Validate still accepts: every entry
// of a random design, now and then, is thrown far off.
func (c chance) wild() *Design {
	d := c.design(1)
	vin, power := c.between(0.5, 2000), c.between(1e-3, 1e5)
	ratio := [...]float64{1.001, 1.2, 3, 50}[c.IntN(4)]
	vout := vin * ratio
	switch d.Topology {
	case "buck":
		vout = vin / ratio
	case "buck_boost":
		vout = vin * [...]float64{0.02, 0.5, 1, 50}[c.IntN(4)]
	}
	d.Frequency = c.num(1e3, 1e8)
	d.Input, d.Output = Input{N(vin), N(vin), N(vin)}, Output{N(vout), N(power / vout)}
	d.Ambient = N([...]float64{-273.15, -234.4, -40, 25, 300}[c.IntN(5)])
	d.Drive.DeadTimeOn, d.Drive.DeadTimeOff = N(0.1/d.Frequency.V), N(0)
	c.spread(d)
	return d
}

// spread puts numbers to nothing, or many decades away, in one entry of five.
func (c chance) spread(d *Design) {
	for _, part := range Parts() {
		for _, f := range part.Fields {
			entry, there := d.Slot(f.Path, false)
			n, number := entry.(*Num)
			if !there || !number || !n.Stated || part.Path == "" || part.Path == "drive" || !c.maybe(0.2) {
				continue
			}
			was := *n
			switch {
			case f.Domain != Positive && c.maybe(0.4):
				n.V = 0
			case c.maybe(0.3):
				n.V = math.Copysign(1e-15, n.V)
			default:
				n.V *= c.between(1e-9, 1e9)
			}
			if len(Validate(d)) > 0 {
				*n = was
			}
		}
	}
}

// decent asks of a budget that its figures and findings are numbers and words.
func decent(t testing.TB, m *Model, b *Budget) {
	t.Helper()
	everyNumber(b, func(what string, v float64) {
		if !finite(v) {
			t.Errorf("%v: %s is %g", b.Point, what, v)
		}
	})
	if b.State != Settled && b.Reason() == "" {
		t.Errorf("%v: no reason for %s", b.Point, b.State)
	}
	if b.State == Settled { // what follows from the answer must be the answer
		if again := m.situationOf(b).loss; math.Abs(again-b.Loss) > 1e-3*b.Loss {
			t.Errorf("%v: settled at %g W, from which %g W follow", b.Point, b.Loss, again)
		}
	}
	for _, f := range m.Findings(b) {
		if !finite(f.Value) || !finite(f.Limit) || f.Message == "" {
			t.Errorf("%v: %+v", b.Point, f)
		}
	}
}

// TestExtremes works out wild designs: each point in time, with numbers or a reason.
func TestExtremes(t *testing.T) {
	states, slowest := map[State]int{}, time.Duration(0)
	for seed := range uint64(400) {
		d := newChance(seed).wild()
		m, err := Prepare(d)
		if err != nil {
			t.Fatalf("seed %d: %v", seed, err)
		}
		for _, share := range []float64{0, 1e-6, 0.05, 1, 100} {
			var b Budget
			start := time.Now()
			m.At(Point{d.Input.Nominal.V, share * d.Output.Current.V, d.Ambient.V}, &b)
			slowest = max(slowest, time.Since(start))
			states[b.State]++
			if decent(t, m, &b); t.Failed() {
				raw, _ := json.Marshal(d)
				t.Fatalf("seed %d: %s", seed, raw)
			}
		}
		m.Review(nil)
	}
	t.Logf("%v, slowest point %v", states, slowest)
	if states[Settled] < 200 || states[OutOfReach] < 100 || states[Runaway] < 100 {
		t.Error("the wild designs no longer reach every state")
	}
	if slowest > 30*time.Second { // a hang: a point takes some 20 ms, or 700 under the race detector on a busy machine
		t.Errorf("one point took %v", slowest)
	}
}

// TestBeyondNumbers holds corners at which an iterate once left the numbers: a diode
// whose slope falls below zero, an on-resistance that explodes near absolute zero, a
// loss that feeds itself without bound, leakage beyond any number at ambient.
func TestBeyondNumbers(t *testing.T) {
	for name, change := range map[string]func(*Design){
		"slope below zero":                           all(diode, set("diode.r_d_slope", -0.5), set("diode.r_d", 1)),
		"slope far below zero in the cold":           all(diode, set("diode.r_d_slope", 1300), set("ambient", -40)),
		"on-resistance at absolute zero":             all(set("sync_switch.rds_on_hot_ratio", 1e-15), set("ambient", -234.4), write("light_load", "diode_emulation")),
		"a loss that feeds itself":                   all(set("switch.q_gd", 1), set("switch.q_gs2", 1), set("inductor.inductance", 1e-12)),
		"a loss that feeds itself through the input": all(set("series_resistances[1].resistance", 1e4), set("inductor.inductance", 1e-25)),
		"leakage beyond any number":                  all(diode, set("diode.i_leak_doubling", 1e-3), set("ambient", 100)),
		"ambient beyond any model":                   set("ambient", 1e6),
		"no loss at all":                             all(set("switch.rds_on", 1e-15), set("inductor.dcr", 1e-15), set("enclosure_theta", 1e15)),
	} {
		d := full()
		change(d)
		m, err := Prepare(d)
		if err != nil {
			t.Fatalf("%s: %v", name, err)
		}
		for _, load := range []float64{0, 1e-9, 0.1, 8, 1e6} {
			var b Budget
			m.At(Point{48, load, d.Ambient.V}, &b)
			if decent(t, m, &b); t.Failed() {
				t.Fatalf("%s at %g A", name, load)
			}
		}
	}
}

// TestImpossible heats a part to where its model leaves its meaning: each is a runaway
// of that part, with the reason.
func TestImpossible(t *testing.T) {
	for name, c := range map[string]struct {
		part   string
		change func(*Design)
	}{
		"threshold below zero": {"rectifier", all(diode, set("diode.v_f0", 0.05), set("ambient", 125))},
		"slope below zero":     {"rectifier", all(diode, set("diode.r_d_slope", -0.02), set("ambient", 100))},
		"core below zero":      {"inductor", all(set("inductor.core.ct1", 0.02), set("ambient", 90))},
	} {
		d := full()
		c.change(d)
		m, err := Prepare(d)
		if err != nil {
			t.Fatal(err)
		}
		var b Budget
		if m.At(Point{48, 8, d.Ambient.V}, &b); b.State != Runaway || b.Part != c.part || !strings.Contains(b.Reason(), "below zero") {
			t.Errorf("%s: %s of %q, %s", name, b.State, b.Part, b.Reason())
		}
	}
}

// TestErrorByTheAnswer asks that a step is measured by the loss it leads to, not by what
// follows from the guess, which far from any solution is far larger.
func TestErrorByTheAnswer(t *testing.T) {
	p := problem{s: &situation{guess: 1e13, sums: sums{stage: 1.7e23, loss: 1.7e23}}, held: true}
	if e := p.error(unknowns{5e12}); e != 0.5 {
		t.Errorf("5e12 W beside 1e13 W count as %g, want 0.5", e)
	}
}

// FuzzDesign reads any design file: what Validate accepts is worked out, with numbers
// or a reason, and never a panic.
func FuzzDesign(f *testing.F) {
	seeds := []*Design{full(), quietDiode(), lean()}
	for seed := range uint64(12) {
		seeds = append(seeds, newChance(seed).design(1), newChance(seed).wild())
	}
	for _, d := range seeds {
		raw, err := json.Marshal(d)
		if err != nil {
			f.Fatal(err)
		}
		f.Add(raw)
	}
	f.Fuzz(func(t *testing.T, raw []byte) {
		var d Design
		if json.Unmarshal(raw, &d) != nil {
			return
		}
		wrong := Validate(&d)
		m, err := Prepare(&d)
		if (len(wrong) > 0) != (err != nil) {
			t.Fatalf("Validate finds %v, Prepare %v", wrong, err)
		}
		if err != nil {
			return
		}
		var budgets []Budget
		for _, share := range []float64{0, 0.05, 1, 3} {
			p := Point{d.Input.Nominal.V, share * d.Output.Current.V, d.AmbientTemperature()}
			if len(ValidatePoints([]Point{p})) == 0 {
				var b Budget
				m.At(p, &b)
				decent(t, m, &b)
				budgets = append(budgets, b)
			}
		}
		m.Review(budgets)
	})
}
