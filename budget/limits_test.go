package budget

import (
	"math"
	"testing"

	"github.com/google/go-cmp/cmp"
)

// TestGauge puts a value on its caution and on its limit, and at the floats beside
// them: what is allowed is allowed in full.
func TestGauge(t *testing.T) {
	up := func(x float64) float64 { return math.Nextafter(x, 9) }
	for value, level := range map[float64]Level{0: "", 0.8: "", up(0.8): Caution, 1: Caution, up(1): Exceeded} {
		var list []Finding
		for _, o := range (gauge{value: value, caution: 0.8, limit: 1, message: func() string { return "words" }, source: practice}).read(nil) {
			list = append(list, o.Finding)
		}
		expect(t, "gauge", list, level)
	}
}

// TestShareOfNoRating asks that nothing is measured against a rating of 0, however
// small the next one is.
func TestShareOfNoRating(t *testing.T) {
	for rating, want := range map[float64]int{0: 0, -1: 0, 1e-6: 1} {
		if list := share(nil, gauge{caution: 0.8}, 5, rating, "it", "A", "help"); len(list) != want {
			t.Errorf("a rating of %g: %d findings, want %d", rating, len(list), want)
		}
	}
}

// TestSmallDuty asks that a controller's limit counts however small it is.
func TestSmallDuty(t *testing.T) {
	d := quiet()
	d.Controller.DutyMax = N(0.005)
	expect(t, "a duty of 0.5 % at most", foundAt(t, d, easy, "modulation", "controller"), Exceeded)
}

// TestHeadroomEnds puts the plateau on the drive voltage and beside it, where no
// settled point leads, and leaves next to nothing.
func TestHeadroomEnds(t *testing.T) {
	m, _ := solved(t, quiet(), easy) // drives with 8 V
	for plateau, level := range map[float64]Level{6: "", math.Nextafter(6, 7): Caution, 7.995: Caution, 8: Caution, math.Nextafter(8, 9): Exceeded} {
		var list []Finding
		for _, o := range m.headroomOf(nil, "switch", plateau) {
			list = append(list, o.Finding)
			if o.severity != plateau-8 {
				t.Errorf("severity %g at a plateau of %g V: less room is worse", o.severity, plateau)
			}
		}
		expect(t, "headroom", list, level)
	}
}

// TestInductanceUnlikeItsCurve puts the start of the curve at twice and at half the
// inductance, and beside them.
func TestInductanceUnlikeItsCurve(t *testing.T) {
	for ratio, level := range map[float64]Level{0.499: Caution, 0.5: "", 0.501: "", 1.999: "", 2: "", 2.001: Caution} {
		d := quiet()
		d.Inductor.Inductance, d.Inductor.LCurve = N(16e-6), Curve{{0, 16e-6 * ratio}}
		expect(t, "inductance", review(t, d, "inductance"), level)
	}
}

// TestRowsOfPaths asks for the last row that a list may have, and for the one after.
func TestRowsOfPaths(t *testing.T) {
	for path, want := range map[string]bool{
		"series_resistances[0].name": true, "series_resistances[199].name": true, "series_resistances[200].name": false,
		"series_resistances[-1].name": false, "series_resistances[x].name": false,
	} {
		var d Design
		if _, there := d.Slot(path, true); there != want {
			t.Errorf("%s: there %v, want %v", path, there, want)
		}
	}
	d := Design{Series: make([]SeriesResistance, 3)}
	for path, want := range map[string]bool{"series_resistances[2].name": true, "series_resistances[3].name": false} {
		if _, there := d.Slot(path, false); there != want {
			t.Errorf("%s of three: there %v, want %v", path, there, want)
		}
	}
}

// TestEfficiencyOfNearlyNothing asks for the ratio of output and input at a microwatt.
func TestEfficiencyOfNearlyNothing(t *testing.T) {
	d := lean()
	d.Switch.QG, d.SyncSwitch.QG, d.LightLoad = N(0), N(0), "diode_emulation"
	d.Inductor.Core, d.Inductor.Winding = nil, nil
	_, b := solved(t, d, Point{48, 1e-7, 25})
	if !(b.Pin > 0) || b.Pin > 1e-3 || math.Abs(b.Efficiency-b.Pout/b.Pin) > 1e-15 || !(b.Efficiency > 0) {
		t.Errorf("efficiency %g of %g W in and %g W out", b.Efficiency, b.Pin, b.Pout)
	}
}

// TestGateChargeOfItsParts puts the total gate charge on the sum of two of its parts,
// which in floats is a little more than 6 nC, and beside it.
func TestGateChargeOfItsParts(t *testing.T) {
	for total, level := range map[float64]Level{6e-9 * (1 - 1e-8): Caution, 6e-9: "", 6e-9 * (1 + 1e-8): ""} {
		d := quiet()
		for part, m := range map[string]*MOSFET{"switch": d.Switch, "rectifier": d.SyncSwitch} {
			m.QGS2, m.QGD, m.QG = N(2e-9), N(4e-9), N(total)
			var list []Finding
			for _, f := range review(t, d, "gate_charge") {
				if f.Part == part {
					list = append(list, f)
				}
			}
			expect(t, "gate charge of the "+part, list, level)
		}
	}
}

// TestNotUsed has one of two entries that displace each other, or both, and as little
// of each as there can be.
func TestNotUsed(t *testing.T) {
	one := Curve{{25, 1}}
	for _, c := range []struct {
		name   string
		change func(d *Design)
		level  Level
	}{
		{"a hot ratio", func(d *Design) { d.Switch.RdsOnHotRatio = N(1.8) }, ""},
		{"a hot ratio and a row of a curve", func(d *Design) { d.Switch.RdsOnHotRatio, d.Switch.RdsOnCurve = N(1.8), one }, Note},
		{"a row of a curve", func(d *Design) { d.Switch.RdsOnHotRatio, d.Switch.RdsOnCurve = Num{}, one }, ""},
		{"a capacitance", func(d *Design) {
			d.Switch.QOSS, d.Switch.EOSS, d.Switch.COSS, d.Switch.COSSAt = Num{}, Num{}, N(1e-12), N(25)
		}, ""},
		{"a capacitance beside no charge", func(d *Design) {
			d.Switch.QOSS, d.Switch.EOSS, d.Switch.COSS, d.Switch.COSSAt = N(0), Num{}, N(1e-12), N(25)
		}, ""},
		{"a capacitance of nothing", func(d *Design) { d.Switch.COSS = N(0) }, ""},
		{"a small drop", func(d *Design) { d.Inductor.SatDrop = N(0.001) }, ""},
		{"a small drop and a row of a curve", func(d *Design) { d.Inductor.SatDrop, d.Inductor.LCurve = N(0.001), Curve{{0, 12e-6}} }, Note},
		{"no drop and a row of a curve", func(d *Design) { d.Inductor.SatDrop, d.Inductor.LCurve = N(0), Curve{{0, 12e-6}} }, ""},
		{"a winding", func(d *Design) { d.Inductor.ACCurve = nil }, ""},
		{"a winding and a row of a curve", func(d *Design) { d.Inductor.ACCurve = Curve{{3e5, 3}} }, Note},
		{"a row of a curve of factors", func(d *Design) { d.Inductor.Winding, d.Inductor.ACCurve = nil, Curve{{3e5, 3}} }, ""},
	} {
		d := quiet()
		if c.name[:9] != "a winding" {
			d.Inductor.Winding = nil
		}
		c.change(d)
		expect(t, c.name, review(t, d, "not_used"), c.level)
	}
}

// TestNoChargeToRecover asks that a stated recovery of nothing is no contradiction.
func TestNoChargeToRecover(t *testing.T) {
	d := quiet()
	d.SyncSwitch.QRR, d.SyncSwitch.QRRVoltage = N(0), N(50)
	expect(t, "nothing", review(t, d, "recovery_charge"), "")
}

func TestFinite(t *testing.T) {
	for v, want := range map[float64]bool{0: true, -math.MaxFloat64: true, math.Inf(1): false, math.Inf(-1): false} {
		if finite(v) != want {
			t.Errorf("%g is finite: %v", v, !want)
		}
	}
	if finite(math.NaN()) {
		t.Error("no number is finite")
	}
}

// TestPrepareLeavesTheDesign asks that defaults are filled into a copy.
func TestPrepareLeavesTheDesign(t *testing.T) {
	for name, build := range map[string]func() *Design{"lean": lean, "full": full, "diode": quietDiode} {
		d, same := build(), build()
		if _, err := Prepare(d); err != nil {
			t.Fatal(err)
		}
		if diff := cmp.Diff(same, d); diff != "" {
			t.Errorf("%s: Prepare changed it: %s", name, diff)
		}
	}
}

// TestEfficiencyOfNothing asks for 0 where nothing flows in.
func TestEfficiencyOfNothing(t *testing.T) {
	d := lean()
	d.Switch.QG, d.SyncSwitch.QG, d.LightLoad = N(0), N(0), "diode_emulation"
	_, b := solved(t, d, Point{48, 0, 25})
	if b.Pin != 0 || b.Efficiency != 0 {
		t.Errorf("%g W in, efficiency %g", b.Pin, b.Efficiency)
	}
}

// TestErrorsByHand takes a last step apart: each watt counts in the loss, and warms its
// part through its own thermal resistance and the enclosure's.
func TestErrorsByHand(t *testing.T) {
	var b Budget
	s := &situation{m: &Model{theta: [3]float64{5, 7, 11}, enclosure: 2}}
	b.bookErrors(s, answer{step: unknowns{-16, 32, -64, 128}, iterations: 7, residual: 0.25})
	if b.LossError != 240 || b.HeatErrors != (Temperatures{32 * 7, 64 * 9, 128 * 13}) || b.Iterations != 7 || b.Residual != 0.25 {
		t.Errorf("errors %g W and %+v after %d evaluations, residual %g", b.LossError, b.HeatErrors, b.Iterations, b.Residual)
	}
}

// TestWorstFirst mixes the levels and asks for their order, and for the order given
// within a level.
func TestWorstFirst(t *testing.T) {
	var list []observation
	for i, level := range []Level{Note, Caution, Exceeded, Note, Exceeded, Caution} {
		list = append(list, observation{Finding: Finding{Level: level, Value: float64(i)}})
	}
	var order []float64
	for _, f := range plain(list) {
		order = append(order, f.Value)
	}
	if diff := cmp.Diff([]float64{2, 4, 1, 5, 0, 3}, order); diff != "" {
		t.Error(diff)
	}
}
