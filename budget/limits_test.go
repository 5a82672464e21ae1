package budget

import (
	"math"
	"testing"
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
