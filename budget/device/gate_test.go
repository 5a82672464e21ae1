package device_test

import (
	"math"
	"testing"

	"lossbook/budget/device"
	"pgregory.net/rapid"
)

// gate is a gate whose transitions work out by hand.
func gate() device.Gate {
	return device.Gate{Threshold: 2, Plateau: 3.5, ThresholdCharge: 1.2e-9, MillerCharge: 4e-9,
		SourceInductor: 1e-9, On: 8, ResistanceOn: 5, ResistanceOff: 4}
}

func TestTransitions(t *testing.T) {
	g := gate()
	on, _ := g.TurnOn(6)
	off, _ := g.TurnOff(6)
	negative := g
	negative.Off = -3
	below, _ := negative.TurnOff(6)
	follows := g
	follows.PlateauCurrent = 12
	scaledOn, _ := follows.TurnOn(6)
	scaledOff, _ := follows.TurnOff(3)
	const hand = "charge over mean gate current, by hand"
	hold(t, []row{
		{"t_ri", on.Current, 12e-9 / 5.25, exact, hand},
		{"t_fv", on.Voltage, 20e-9 / 4.5, exact, hand},
		{"t_rv", off.Voltage, 16e-9 / 3.5, exact, hand},
		{"t_fi", off.Current, 10.8e-9 / 2.75, exact, hand},
		{"t_rv, −3 V off", below.Voltage, 16e-9 / 6.5, exact, hand},
		{"t_fi, −3 V off", below.Current, 10.8e-9 / 5.75, exact, hand},
		{"plateau at half its current", scaledOn.Plateau, 2.75, exact, hand},
		{"t_ri at half the plateau's current", scaledOn.Current, 9e-9 / 5.625, exact, hand},
		{"t_fv at half the plateau's current", scaledOn.Voltage, 20e-9 / 5.25, exact, hand},
		{"plateau at a quarter", scaledOff.Plateau, 2.375, exact, hand},
		{"t_fi at a quarter", scaledOff.Current, 4.2e-9 / 2.1875, exact, hand},
		{"t_rv at a quarter", scaledOff.Voltage, 16e-9 / 2.375, exact, hand},
		{"plateau at its current", follows.PlateauAt(12), 3.5, exact, "as stated"},
		{"plateau that holds", g.PlateauAt(1e6), 3.5, 0, "no current stated with it"},
		{"slope", g.Slope(6), 6 / (12e-9 / 5.25), exact, "the current over its rise time"},
		{"slope with a plateau that follows", follows.Slope(6), 6 / (12e-9 / 5.25), exact, "plateau and charge as stated, unscaled"},
	})
}

// TestDriveReached takes the current to where the plateau meets the drive voltage:
// Vpl = 2 + 1.5·I/12 is 8 V at 48 A.
func TestDriveReached(t *testing.T) {
	g := gate()
	g.PlateauCurrent = 12
	for _, c := range []struct {
		current  float64
		possible bool
	}{{math.Nextafter(48, 0) * (1 - 1e-15), true}, {48, false}, {math.Nextafter(48, 100), false}, {1e9, false}} {
		_, on := g.TurnOn(c.current)
		_, off := g.TurnOff(c.current)
		if on != c.possible || off != c.possible {
			t.Errorf("%.17g A: turn-on %v, turn-off %v, want %v", c.current, on, off, c.possible)
		}
	}
	if e, possible := g.TurnOn(0); !possible || e.Current != 0 || e.Plateau != 2 {
		t.Errorf("at no current %+v %v, want no current rise and the threshold as plateau", e, possible)
	}
}

// TestTransitionLoss integrates voltage times current over the straight lines.
func TestTransitionLoss(t *testing.T) {
	const vb, i, tri, tfv = 48.0, 7.0, 11e-9, 23e-9
	e := device.Edge{Current: tri, Voltage: tfv}
	area := integral(func(x float64) float64 { return vb * i * x / tri }, 0, tri) +
		integral(func(x float64) float64 { return vb * (1 - x/tfv) * i }, 0, tfv)
	voltage := vb * i * tfv / 2
	hold(t, []row{
		{"turn-on", device.TurnOnLoss(vb, i, e), area, 1e-13, "quadrature of v·i"},
		{"turn-off without junction charge", device.TurnOffLoss(vb, i, e, 0), area, 1e-13, "quadrature of v·i"},
		{"turn-off, a third stored", device.TurnOffLoss(vb, i, e, voltage/3), area - voltage/3, 1e-13, "energy balance"},
		{"turn-off, all stored", device.TurnOffLoss(vb, i, e, 2*voltage), vb * i * tri / 2, exact, "the current's fall alone"},
		{"turn-off, just all stored", device.TurnOffLoss(vb, i, e, math.Nextafter(voltage, 1)), vb * i * tri / 2, exact, "the current's fall alone"},
	})
}

// TestTransitionScaling holds the laws a hand estimate relies on.
func TestTransitionScaling(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		k := rapid.Float64Range(0.1, 10).Draw(t, "k")
		i := rapid.Float64Range(0.1, 50).Draw(t, "i")
		vb := rapid.Float64Range(1, 800).Draw(t, "vb")
		g := gate()
		g.SourceInductor = 0
		base, _ := g.TurnOn(i)
		slow := g
		slow.ResistanceOn *= k
		slower, _ := slow.TurnOn(i)
		loss := device.TurnOnLoss(vb, i, base)
		for what, off := range map[string]float64{
			"k·R gives k·loss": device.TurnOnLoss(vb, i, slower)/loss - k,
			"k·V gives k·loss": device.TurnOnLoss(k*vb, i, base)/loss - k,
			"k·I gives k·loss": device.TurnOnLoss(vb, k*i, base)/loss - k,
		} {
			if math.Abs(off) > 1e-13*k {
				t.Fatalf("%s: off by %g", what, off)
			}
		}
	})
}
