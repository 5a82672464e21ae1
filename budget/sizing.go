package budget

// Sizing is what can be said of a converter before its parts are chosen: the
// inductance for a wanted ripple, and what each part must stand over the input
// range, from the lossless balances.
type Sizing struct {
	Ripple     float64       // wanted Δi/IL at full load and nominal input
	Inductance float64       // H, for that ripple at the nominal input
	Used       float64       // H, the inductance the currents are worked out with: the entered one, else Inductance
	Parts      []Requirement // inductor, switch, rectifier, input and output capacitor
}

// Requirement is what one part must stand, the worst over the input range at
// full load. Blocking is 0 for a part that does not block.
type Requirement struct {
	Part                      string
	Blocking, Peak, Mean, RMS float64 // V, A
	DutyMin, DutyMax          float64 // of the switch
}

// Size works out the sizing of a design from its topology, input range, output
// and frequency alone. The errors name what is missing or wrong among these.
func Size(d *Design, ripple float64) (Sizing, []FieldError) { return Sizing{}, nil }
