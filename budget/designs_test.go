package budget

import (
	"math"
	"testing"
)

// full is a synchronous buck of 48 to 12 V with every part and entry there, at ease
// in all its ratings: it draws no finding.
func full() *Design {
	d := &Design{Format: Format, Name: "full", Topology: "buck", Rectifier: "synchronous", LightLoad: "forced",
		Frequency: N(300e3), Input: Input{N(40), N(48), N(56)}, Output: Output{N(12), N(8)}, Ambient: N(25), EnclosureTheta: N(0)}
	d.Switch, d.SyncSwitch = easyMOSFET(), easyMOSFET()
	d.Diode = easyDiode()
	d.Inductor = &Inductor{Inductance: N(12e-6), ISat: N(20), SatDrop: N(0.2), IRMSRating: N(20), TMax: N(155), ThetaJA: N(5), DCR: N(5e-3),
		ACCurve: Curve{{1e3, 1}, {300e3, 3}, {20e6, 40}},
		Winding: &Winding{Conductor: "round", Diameter: N(0.8e-3), Layers: N(2), Porosity: N(0.8)},
		Core: &Core{Volume: N(1e-6), Area: N(5e-5), Turns: N(8), K: N(3), Alpha: N(1.42), Beta: N(2.45),
			CT0: N(1), CT1: N(0), CT2: N(0)}}
	d.InputCapacitor = &Capacitor{Capacitance: N(2e-5), ESR: N(2e-3), VoltageRating: N(100), RippleRating: N(10)}
	d.OutputCapacitor = &Capacitor{Capacitance: N(3e-4), ESR: N(5e-3), VoltageRating: N(25), RippleRating: N(5)}
	d.Snubber = &Snubber{Capacitance: N(100e-12)}
	d.Drive = &Drive{Voltage: N(8), VoltageOff: N(0), RSource: N(2), RSink: N(1), RGateOn: N(1), RGateOff: N(1), DeadTimeOn: N(20e-9), DeadTimeOff: N(20e-9), FedFrom: "input"}
	d.Controller = &Controller{Current: N(2e-3), FedFrom: "input", FixedLoss: N(0.01), DutyMax: N(0.9), OnTimeMin: N(100e-9)}
	d.Series = []SeriesResistance{{"shunt", "inductor", N(1e-3)}, {"fuse", "input", N(2e-3)}}
	return d
}

func easyMOSFET() *MOSFET {
	return &MOSFET{VdsRating: N(100), IDRating: N(40), TjMax: N(150), ThetaJA: N(3), RdsOn: N(6e-3), RdsOnHotRatio: N(1.8),
		VThreshold: N(2), VPlateau: N(3.2), VPlateauCurrent: N(10), QGS2: N(2e-9), QGD: N(4e-9), QG: N(20e-9), RGate: N(1), LSource: N(2e-10),
		QOSS: N(30e-9), EOSS: N(0.5e-6), QOSSAt: N(50), VSD: N(0.8), RSD: N(5e-3),
		Recovery: Recovery{QRR: N(20e-9), QRRCurrent: N(8), QRRDidt: N(1e9), QRRTau: N(20e-9), Softness: N(0.5)}}
}

func easyDiode() *Diode {
	return &Diode{VRRM: N(100), IFRating: N(20), TjMax: N(150), ThetaJA: N(3), VF0: N(0.4), VF0Slope: N(-1e-3), RD: N(5e-3), RDSlope: N(1e-3),
		CJ: N(300e-12), CJAt: N(10), ILeak: N(1e-5), ILeakVoltage: N(50), Recovery: Recovery{QRR: N(0)}}
}

// diode turns a design to its diode.
func diode(d *Design) { d.Rectifier, d.LightLoad = "diode", "" }

// lean is the least that makes a design.
func lean() *Design {
	mosfet := func() *MOSFET {
		return &MOSFET{VdsRating: N(100), RdsOn: N(6e-3), VThreshold: N(2), VPlateau: N(3.2), QGS2: N(2e-9), QGD: N(4e-9), QG: N(20e-9)}
	}
	return &Design{Format: Format, Name: "lean", Topology: "buck", Rectifier: "synchronous",
		Frequency: N(300e3), Input: Input{N(40), N(48), N(56)}, Output: Output{N(12), N(8)},
		Switch: mosfet(), SyncSwitch: mosfet(), Diode: &Diode{VRRM: N(100), VF0: N(0.4)},
		Inductor: &Inductor{Inductance: N(12e-6), DCR: N(5e-3), Winding: &Winding{Conductor: "foil", Thickness: N(1e-4), Layers: N(1)},
			Core: &Core{ReferencePower: N(0.1), ReferenceFrequency: N(1e5), ReferenceRipple: N(2), Alpha: N(1.4), Beta: N(2.4)}},
		InputCapacitor: &Capacitor{Capacitance: N(2e-5)}, OutputCapacitor: &Capacitor{Capacitance: N(3e-4)},
		Drive: &Drive{Voltage: N(8), RSource: N(2), RSink: N(1)}, Controller: &Controller{}}
}

// solved prepares a design and works out one point, which must settle.
func solved(t testing.TB, d *Design, p Point) (*Model, *Budget) {
	t.Helper()
	m, err := Prepare(d)
	if err != nil {
		t.Fatal(err)
	}
	b := new(Budget)
	if m.At(p, b); b.State != Settled {
		t.Fatalf("%v: %s, %s", p, b.State, b.Reason())
	}
	return m, b
}

// item returns the power of one row of the ledger.
func item(t testing.TB, b *Budget, part, kind string) float64 {
	t.Helper()
	for _, it := range b.Items {
		if it.Part == part && it.Kind == kind {
			return it.Power
		}
	}
	t.Fatalf("no item %s.%s", part, kind)
	return 0
}

// TestGrid reads the default points: lowest, nominal, highest input, each over the loads.
func TestGrid(t *testing.T) {
	points, i := Grid(lean()), 0
	for _, vin := range []float64{40, 48, 56} {
		for _, load := range []float64{0.4, 0.8, 1.6, 2, 2.4, 4, 6, 8} {
			if i < len(points) && (points[i].Vin != vin || math.Abs(points[i].Iout-load) > 1e-12 || points[i].Ambient != 25) {
				t.Errorf("point %d is %v, want %g V and %g A at 25 °C", i, points[i], vin, load)
			}
			i++
		}
	}
	if len(points) != i {
		t.Errorf("%d points, want %d", len(points), i)
	}
	d := lean()
	d.Ambient = N(0)
	if got := Grid(d)[0].Ambient; got != 0 {
		t.Errorf("a stated ambient of 0 °C became %g", got)
	}
}
