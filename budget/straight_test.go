package budget

import (
	"math"
	"strings"
	"testing"
)

// TestStraightLineBegins finds, for each thing that bends the currents, the
// neighbouring floats between which the note begins, and asks that the second look
// finds just the bound there.
func TestStraightLineBegins(t *testing.T) {
	for _, c := range []struct {
		path       string
		fine, much float64
		load       float64 // A
		words      string
	}{
		{"input_capacitor.capacitance", 2e-5, 2e-7, 8, "the input capacitor’s rms current"},
		{"input_capacitor.esr", 1e-3, 0.2, 8, "the switch’s rms current"},
		{"output_capacitor.capacitance", 3e-4, 1e-6, 8, "the output capacitor’s rms current"},
		{"switch.rds_on", 6e-3, 2, 0.8, "the switch’s rms current"},
		{"inductor.dcr", 5e-3, 2, 0.8, "the switch’s rms current"},
		{"inductor.sat_drop", 0.01, 0.8, 16, "the inductor’s peak current"},
	} {
		at := Point{48, c.load, 25}
		list := func(v float64) []Finding {
			d := quiet()
			d.Switch.ThetaJA, d.SyncSwitch.ThetaJA, d.Inductor.ThetaJA = N(0), N(0), N(0)
			set(c.path, v)(d)
			return foundAt(t, d, at, "straight_line", "")
		}
		expect(t, c.path+" fine", list(c.fine), "")
		expect(t, c.path+" much", list(c.much), Note)
		fine, much := c.fine, c.much
		for range 200 {
			if mid := fine + (much-fine)/2; len(list(mid)) == 0 {
				fine = mid
			} else {
				much = mid
			}
		}
		if math.Abs(much-fine) > 1e-12*fine {
			t.Errorf("%s: the note begins between %g and %g", c.path, fine, much)
		}
		found := list(much)
		if expect(t, c.path, found, Note); len(found) != 1 {
			continue
		}
		if v := found[0].Value; math.Abs(v-straightEnough) > 1e-9 || found[0].Limit != straightEnough {
			t.Errorf("%s: it begins at %g of %g", c.path, v, found[0].Limit)
		}
		if !strings.Contains(found[0].Message, c.words) {
			t.Errorf("%s: %q does not name %s", c.path, found[0].Message, c.words)
		}
	}
}

// TestStraightLineHas asks for silence where nothing bends or nothing is known, and
// for other words where the ripple leaves no balance.
func TestStraightLineHas(t *testing.T) {
	d := quiet()
	d.InputCapacitor.Capacitance, d.OutputCapacitor.Capacitance = N(1e-9), N(1e-9)
	list := foundAt(t, d, easy, "straight_line", "")
	expect(t, "next to no capacitors", list, Note)
	if !strings.Contains(list[0].Message, "too large") || !(list[0].Value > 1) {
		t.Errorf("next to no capacitors: %+v", list[0])
	}
	d = quiet()
	d.InputCapacitor, d.OutputCapacitor = nil, nil
	expect(t, "no capacitors stated", foundAt(t, d, easy, "straight_line", ""), "")
	for _, topology := range []string{"boost", "buck", "buck_boost"} {
		d := quietDiode()
		d.Topology = topology
		if topology == "boost" {
			d.Output.Voltage = N(100)
		}
		expect(t, topology+" without load", foundAt(t, d, Point{48, 0, 25}, "straight_line", ""), "")
	}
}

// TestStraightLineNoDigitsLost asks that a current with next to no ripple is not taken
// for one that has changed.
func TestStraightLineNoDigitsLost(t *testing.T) {
	for _, l := range []float64{1e-3, 1, 1e3} {
		d := quiet()
		d.Inductor.Inductance = N(l)
		d.InputCapacitor.Capacitance, d.OutputCapacitor.Capacitance = N(1), N(1)
		d.InputCapacitor.ESR, d.OutputCapacitor.ESR = N(0), N(0)
		expect(t, "ripple of a large inductor", foundAt(t, d, easy, "straight_line", ""), "")
	}
}
