package proof

import (
	"lossbook/budget"
	"lossbook/budget/magnetic"
	"lossbook/budget/stage"
)

// Figures of the power stage: duties, currents, ripple, an inductance.

func capacitor(esr float64) *budget.Capacitor {
	return &budget.Capacitor{Capacitance: n(1), ESR: n(esr)}
}

func series(name, place string, ohm float64) []budget.SeriesResistance {
	return []budget.SeriesResistance{{Name: name, Location: place, Resistance: n(ohm)}}
}

// boostSizing lets the diode's voltage act in the stage; the least inductance comes
// from the lossless sizing, whose output is raised by it.
func boostSizing(t *Trial) {
	low, high, vout, load, f, vf := t.In("lowest input"), t.In("highest input"), t.In("output voltage"), t.In("load"), t.In("frequency"), t.In("diode voltage")
	stageAt := func(vin float64) sheet {
		s := newSheet(t, "boost", vin, vout, load, f)
		s.Diode.VF0, s.Inductor.Inductance = n(vf), n(t.In("inductance"))
		return s
	}
	t.Is("duty at the highest input", stageAt(high).solved().Duty)
	b := stageAt(low).solved()
	t.Is("duty at the lowest input", b.Duty)
	t.Is("ripple", b.Inductor.Max-b.Inductor.Min)
	t.Is("rms", b.Inductor.RMS)
	t.Is("peak", b.Inductor.Max)
	between := stageAt(t.In("input between")).solved().Inductor
	t.Is("ripple between", between.Max-between.Min)
	t.Is("least inductance", newSheet(t, "boost", high, vout+vf, load, f).sized(t.In("ripple share")).Inductance)
	s := stageAt(low)
	s.Series = series("sense", "switch", t.In("sense resistor"))
	mean := b.Inductor.Mean
	t.Is("sense resistor", s.drawing(mean, func(b solution) float64 { return b.Inductor.Mean }).item("layout.sense"))
	allowed := newSheet(t, "boost", low, vout, load, f)
	allowed.Controller.FixedLoss = n(t.In("loss allowed"))
	t.Is("efficiency with the loss allowed", allowed.solved().Efficiency)
}

// boostWithDrops has a voltage in the switch, which a MOSFET does not: the stage's
// balance is asked alone.
func boostWithDrops(t *Trial) {
	vin, vout, load := t.In("input voltage"), t.In("output voltage"), t.In("load")
	d := stage.Drive{On: vin - t.In("switch voltage"), Off: vout - vin, Period: 1 / t.In("frequency")}
	b := stage.Branches{Threshold: t.In("diode voltage")}
	l := magnetic.NewLinkage(t.In("inductance"), 0, 0, nil)
	mean := boundary(load, 100*load, func(il float64) bool { return t.flow(d, b, l, il).Fall().Mean() < load })
	flow := t.flow(d, b, l, mean)
	t.Is("duty", flow.D1)
	t.Is("mean", mean)
	t.Is("ripple", flow.Swing())
	t.Is("peak", flow.Max)
}

// flow solves the balance of continuous conduction.
func (t *Trial) flow(d stage.Drive, b stage.Branches, l stage.Linkage, mean float64) stage.Flow {
	flow, fault := stage.Continuous(d, b, l, mean)
	if fault != stage.NoFault {
		t.fail("the balance has fault %d at %g A", fault, mean)
	}
	return flow
}

func invertingCurrents(t *Trial) {
	mean := t.In("inductor current")
	s, _ := stage.ByName("buck_boost")
	t.Each(func(_ string, in func(string) float64) float64 {
		const vin = 10.0 // whatever it is, the duty sets the share
		d := in("duty")
		vout := vin * d / (1 - d)
		drive := stage.Drive{On: s.OnVoltage(vin, vout), Off: s.OffVoltage(vin, vout), Period: 1e-6}
		return t.flow(drive, stage.Branches{}, magnetic.NewLinkage(stiff, 0, 0, nil), mean).Fall().Mean()
	})
}

func inputCapacitor(t *Trial) {
	b := newSheet(t, "buck", t.In("input voltage"), t.In("output voltage"), t.In("load"), 1e6).solved()
	t.Is("rms", b.InputCapRMS)
}

// suppliedBoost draws the gate's charge from the input.
func suppliedBoost(t *Trial) {
	for _, at := range []string{"lowest", "usual", "highest"} {
		s := newSheet(t, "boost", t.In(at+" input"), t.In("output voltage"), t.In("load"), t.In("frequency"))
		s.Diode.VF0, s.Switch.QG, s.Drive.FedFrom, s.Controller.Current = n(t.In("diode voltage")), n(t.In("gate charge")), "input", n(t.In("supply current"))
		b := s.solved()
		t.Is("duty at the "+at+" input", b.Duty)
		t.Is("current at the "+at+" input", b.Inductor.Mean)
		if at == "usual" {
			t.Is("chip", b.item("controller.supply", "drive.gate", "drive.regulator"))
		}
	}
}

// touchingZero raises the mean current until the valley leaves zero.
func touchingZero(t *Trial) {
	vin, vout := t.In("input voltage"), t.In("output voltage")
	d := stage.Drive{On: vin - t.In("switch voltage"), Off: vout - vin, Period: 1 / t.In("frequency")}
	b := stage.Branches{Threshold: t.In("diode voltage")}
	l := magnetic.NewLinkage(t.In("inductance"), 0, 0, nil)
	mean := boundary(0, 10, func(il float64) bool { return t.flow(d, b, l, il).Min < 0 })
	flow := t.flow(d, b, l, mean)
	t.Is("duty", flow.D1)
	t.Is("ripple", flow.Swing())
	t.Is("load at the boundary", flow.Fall().Mean())
}
