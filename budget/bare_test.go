package budget

// Designs with next to nothing in them, where a closed form is to be met.

const (
	charge = 1e-9 // C, of both parts of a transition
	stiff  = 1e-1 // H, that leaves no ripple
)

// timed is a MOSFET and drive whose transitions take the times given (s): threshold
// and plateau of 2 and 3 V below a drive of 8 V.
func timed(on, off, rds float64) (*MOSFET, *Drive) {
	const source = 1e-6 // Ω; the rest of the path lies in the gate resistors
	m := &MOSFET{VdsRating: N(100), RdsOn: N(rds), VThreshold: N(2), VPlateau: N(3), QGS2: N(charge), QGD: N(charge), QG: N(0)}
	return m, &Drive{Voltage: N(8), RSource: N(source), RSink: N(source),
		RGateOn:  N(on/(charge*(1/5.5+1/5.0)) - source),
		RGateOff: N(off/(charge*(1/2.5+1/3.0)) - source)}
}

// sheet is a design with nothing in it but what is asked for.
func sheet(topology string, vin, vout, load, f float64, sw *MOSFET, drive *Drive, dcr float64) *Design {
	return &Design{Format: Format, Name: "bare", Topology: topology, Rectifier: "diode", Frequency: N(f),
		Input: Input{N(vin), N(vin), N(vin)}, Output: Output{N(vout), N(load)}, Switch: sw, Drive: drive,
		Diode:    &Diode{VRRM: N(100), VF0: N(0)},
		Inductor: &Inductor{Inductance: N(stiff), DCR: N(dcr)}}
}

const nothing = 1e-12 // Ω, where there is to be no resistance
