package proof

// Whole loss tables: what a document adds up, item by item.

const rising, falling = "switch.turn_on", "switch.turn_off"

// boostTable holds the items at the mean current that the document rounds its own to,
// and a whole design at its load.
func boostTable(t *Trial) {
	s := newSheet(t, "boost", t.In("input voltage"), t.In("output voltage"), t.In("load"), t.In("frequency")).
		conducting(t.In("on-resistance")).timed(t.In("rise time"), t.In("fall time"))
	s.Diode.VF0, s.Inductor.DCR, s.Controller.Current = n(t.In("diode voltage")), n(t.In("winding resistance")), n(t.In("supply current"))
	b := s.drawing(t.In("mean input current"), func(b solution) float64 { return b.Inductor.Mean })
	t.Is("duty", b.Duty)
	t.Is("quiescent", b.item("controller.supply"))
	t.Is("rise", b.item(rising))
	t.Is("fall", b.item(falling))
	t.Is("switch conduction", b.item("switch.conduction"))
	t.Is("diode", b.item("rectifier.conduction"))
	t.Is("inductor", b.item("inductor.winding_dc"))
	t.Is("total", b.Loss)
	whole := s.solved()
	t.Is("whole design, total", whole.Loss)
	t.Is("whole design, efficiency", whole.Efficiency)
}

// synchronousRectifier enters the charge that carries the power which the document
// counts as ½·Q_rr·V_in·f: here the rectifier takes V_b·Q_b/3.
func synchronousRectifier(t *Trial) {
	vin, load, f, duty := t.In("input voltage"), t.In("load"), t.In("frequency"), t.In("duty")
	hot := t.In("on-resistance") * (1 + t.In("rise of resistance")*(t.In("hot junction")-25))
	s := newSheet(t, "buck", vin, duty*vin-load*hot, load, f).conducting(hot).timed(20e-9, 20e-9).twin()
	s.Ambient, s.SyncSwitch.ThetaJA = n(t.In("ambient")), n(t.In("thermal resistance"))
	s.SyncSwitch.VSD = n(t.In("body diode"))
	s.Drive.DeadTimeOn, s.Drive.DeadTimeOff = n(t.In("dead time")), n(t.In("dead time"))
	r := &s.SyncSwitch.Recovery
	r.QRR, r.QRRCurrent, r.QRRDidt = n(3*t.In("recovery charge")), n(load), n(1e9)
	r.QRRCurrentExponent, r.QRRDidtExponent, r.Softness = n(0), n(0), n(1)
	b := s.solved()
	t.Is("rms current", b.RectifierRMS)
	t.Is("conduction", b.item("rectifier.conduction"))
	t.Is("dead time", b.item("rectifier.dead_time"))
	t.Is("recovery", b.item("rectifier.recovery"))
	t.Is("total", b.item("rectifier.conduction", "rectifier.dead_time", "rectifier.recovery"))
	t.Is("junction", b.Temperatures.Rectifier)
	t.Is("inductance", newSheet(t, "buck", vin, t.In("output voltage"), load, f).sized(t.In("ripple")/load).Inductance)
}

// synchronousBuck lowers the output by the drops, which the document's duty ignores.
func synchronousBuck(t *Trial) {
	vin, load, f := t.In("input voltage"), t.In("load"), t.In("frequency")
	hot := t.In("on-resistance") * t.In("hot factor")
	s := newSheet(t, "buck", vin, vin*t.In("duty")-load*hot, load, f).conducting(hot).timed(t.In("rise time"), t.In("fall time")).twin()
	s.Controller.Current = n(t.In("supply current"))
	gate := n(t.In("gate charge") * vin / swing) // the document's gates move by the input
	s.Switch.QG, s.SyncSwitch.QG = gate, gate
	b := s.solved()
	t.Is("switching", b.item(rising, falling))
	t.Is("switch conduction", b.item("switch.conduction"))
	t.Is("rectifier conduction", b.item("rectifier.conduction"))
	t.Is("controller", b.item("controller.supply"))
	t.Is("gates", b.item("drive.gate"))
	t.Is("input capacitor, rms", b.InputCapRMS)
	small := newSheet(t, "buck", t.In("highest input"), t.In("output voltage"), load, f)
	small.Inductor.Inductance = n(t.In("inductance"))
	coil := need(small.sized(0.3), "inductor")
	t.Is("ripple", 2*(coil.Peak-coil.Mean))
	t.Is("peak", coil.Peak)
}

// largeBuck lowers the output by the drops too, which the document's currents ignore.
func largeBuck(t *Trial) {
	vin, load, f, winding := t.In("input voltage"), t.In("load"), t.In("frequency"), t.In("output inductor")
	hot := t.In("on-resistance") * t.In("hot factor")
	s := newSheet(t, "buck", vin, t.In("output voltage")-load*(hot+winding), load, f).conducting(hot).timed(t.In("rise time"), t.In("fall time")).twin()
	s.Inductor.DCR, s.Controller.Current = n(winding), n(t.In("supply current"))
	s.InputCapacitor = capacitor(t.In("input capacitors"))
	gate := n(t.In("gate charge") * vin / swing)
	s.Switch.QG, s.SyncSwitch.QG = gate, gate
	b := s.solved()
	t.Is("controller", b.item("controller.supply"))
	t.Is("gates", b.item("drive.gate"))
	t.Is("switching", b.item(rising, falling))
	t.Is("conduction", b.item("switch.conduction", "rectifier.conduction"))
	t.Is("input capacitors", b.item("input_capacitor.esr"))
	t.Is("output inductor", b.item("inductor.winding_dc"))
	alone := newSheet(t, "buck", vin, t.In("output voltage"), 2*load, f)
	alone.Series = series("inductor", "input", t.In("input inductor"))
	t.Is("input inductor", alone.drawing(t.In("input current"), func(b solution) float64 { return b.Iin }).item("layout.inductor"))
}

// integratedBuck counts switching as V_in·f·I_o·t_r, half of it for either edge, and
// draws the gate's charge from the input.
func integratedBuck(t *Trial) {
	vin, vout, load, ohm := t.In("input voltage"), t.In("output voltage"), t.In("load"), t.In("on-resistance")
	s := newSheet(t, "buck", vin, vout/vin*(vin-load*ohm), load, t.In("frequency")).conducting(ohm).timed(t.In("rise time"), t.In("rise time"))
	s.Controller.Current, s.Switch.QG, s.Drive.FedFrom = n(t.In("supply current")), n(t.In("gate charge")), "input"
	b := s.solved()
	t.Is("conduction", b.item("switch.conduction"))
	t.Is("switching", b.item(rising, falling))
	t.Is("gate", b.item("drive.gate", "drive.regulator"))
	t.Is("quiescent", b.item("controller.supply"))
	t.Is("total", b.Loss)
}

// hotBuck heats its one die with all of the loss.
func hotBuck(t *Trial) {
	vin, load, ohm := t.In("input voltage"), t.In("load"), t.In("on-resistance")
	s := newSheet(t, "buck", vin, t.In("duty")*(vin-load*ohm), load, t.In("frequency")).conducting(ohm).timed(t.In("transition"), t.In("transition"))
	s.Controller.Current, s.EnclosureTheta, s.Ambient = n(t.In("supply current")), n(t.In("thermal resistance")), n(t.In("ambient"))
	b := s.solved()
	t.Is("conduction", b.item("switch.conduction"))
	t.Is("switching", b.item(rising, falling))
	t.Is("quiescent", b.item("controller.supply"))
	t.Is("total", b.Loss)
	t.Is("junction", b.Temperatures.Switch)
}

// outputCapacitance enters a constant capacitance as the charge C·V with the energy
// ½·C·V².
func outputCapacitance(t *Trial) {
	v, c := t.In("voltage"), t.In("capacitance of either")
	s := newSheet(t, "buck", v, v/2, 1, t.In("frequency"))
	s.Switch.QOSS, s.Switch.EOSS, s.Switch.QOSSAt = n(c*v), n(c*v*v/2), n(v)
	t.Is("two capacitances", s.twin().solved().item("switch.output_charge"))
}

// diodeBuck counts switching as integratedBuck does.
func diodeBuck(t *Trial) {
	vin, load, f, ohm, vd, winding := t.In("input voltage"), t.In("load"), t.In("frequency"), t.In("on-resistance"), t.In("diode voltage"), t.In("winding resistance")
	vout := t.In("duty")*(vin+vd-load*ohm) - vd - load*winding
	s := newSheet(t, "buck", vin, vout, load, f).conducting(ohm).timed(t.In("fall time"), t.In("fall time"))
	s.Diode.VF0, s.Inductor.DCR, s.Controller.Current = n(vd), n(winding), n(t.In("supply current"))
	s.Switch.QG = n(t.In("gate current") / f * t.In("gate voltage") / swing)
	b := s.solved()
	t.Is("conduction", b.item("switch.conduction"))
	t.Is("switching", b.item(rising, falling))
	t.Is("quiescent", b.item("controller.supply"))
	t.Is("gate", b.item("drive.gate"))
	t.Is("diode", b.item("rectifier.conduction"))
	t.Is("inductor", b.item("inductor.winding_dc"))
	t.Is("total", b.Loss)
}
