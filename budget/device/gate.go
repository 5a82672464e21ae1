package device

// Gate is a MOSFET's gate with the drive that moves it.
type Gate struct {
	Threshold       float64 // V
	Plateau         float64 // V, as stated
	PlateauCurrent  float64 // A, at which it is stated; 0: the plateau holds at any current
	ThresholdCharge float64 // C, Q_gs2 as stated
	MillerCharge    float64 // C, Q_gd
	SourceInductor  float64 // H, common to gate and power loop
	On, Off         float64 // V, the drive's two levels
	ResistanceOn    float64 // Ω, driver, resistor and gate together
	ResistanceOff   float64 // Ω
}

// Edge is one switching transition: how long the current and the voltage take,
// in s, and the plateau in V at its current.
type Edge struct{ Current, Voltage, Plateau float64 }

// plateau returns plateau voltage and threshold-to-plateau charge at the current
// i (A, ≥ 0): Vpl(I) = Vth + (Vpl − Vth)·I/I_pl, the charge scaled likewise, as
// the straight transfer characteristic through the stated point has it.
func (g *Gate) plateau(i float64) (volt, charge float64) {
	if g.PlateauCurrent == 0 {
		return g.Plateau, g.ThresholdCharge
	}
	share := i / g.PlateauCurrent
	return g.Threshold + (g.Plateau-g.Threshold)*share, g.ThresholdCharge * share
}

// PlateauAt returns the plateau in V at the current i (A, ≥ 0).
func (g *Gate) PlateauAt(i float64) float64 {
	v, _ := g.plateau(i)
	return v
}

// TurnOn returns the transition into conduction at the current i (A, ≥ 0):
//
//	t_ri = (Q_gs2·R_on + L_s·I)/(V_dr − (V_th + V_pl)/2)      t_fv = Q_gd·R_on/(V_dr − V_pl)
//
// possible is false when the plateau reaches the drive voltage. Source: L. Balogh,
// Design and Application Guide for High Speed MOSFET Gate Drive Circuits, TI
// SLUA618 (from memory).
func (g *Gate) TurnOn(i float64) (e Edge, possible bool) {
	v, q := g.plateau(i)
	if !(v < g.On) {
		return Edge{Plateau: v}, false
	}
	return Edge{
		Current: (q*g.ResistanceOn + g.SourceInductor*i) / (g.On - (g.Threshold+v)/2),
		Voltage: g.MillerCharge * g.ResistanceOn / (g.On - v),
		Plateau: v,
	}, true
}

// TurnOff returns the transition out of conduction at the current i (A, ≥ 0):
//
//	t_rv = Q_gd·R_off/(V_pl − V_off)      t_fi = (Q_gs2·R_off + L_s·I)/((V_th + V_pl)/2 − V_off)
//
// possible is false when the drive can't have carried the current: the plateau
// reaches its voltage. Source: as TurnOn.
func (g *Gate) TurnOff(i float64) (e Edge, possible bool) {
	v, q := g.plateau(i)
	if !(v < g.On) {
		return Edge{Plateau: v}, false
	}
	return Edge{
		Current: (q*g.ResistanceOff + g.SourceInductor*i) / ((g.Threshold+v)/2 - g.Off),
		Voltage: g.MillerCharge * g.ResistanceOff / (v - g.Off),
		Plateau: v,
	}, true
}

// Slope returns the di/dt in A/s with which the switch takes over the current i
// (A, > 0), with plateau and charge as stated:
//
//	k = I·(V_dr − (V_th + V_pl)/2)/(Q_gs2·R_on + L_s·I)
//
// Q_gs2·R_on and L_s must not both be 0. Source: the transition above, its time
// taken at the stated plateau.
func (g *Gate) Slope(i float64) float64 {
	return i * (g.On - (g.Threshold+g.Plateau)/2) / (g.ThresholdCharge*g.ResistanceOn + g.SourceInductor*i)
}

// TurnOnLoss returns the energy in J of turning on i (A) against vb (V):
// ½·Vb·I·(t_ri + t_fv), current and voltage taken as straight lines.
func TurnOnLoss(vb, i float64, e Edge) float64 { return vb * i * (e.Current + e.Voltage) / 2 }

// TurnOffLoss returns the energy in J of turning off i (A) against vb (V):
// ½·Vb·I·t_fi + max(0, ½·Vb·I·t_rv − stored). While the voltage rises, the part of
// the current that charges the junctions is stored (J) and not lost; it is booked
// when the switch turns on.
func TurnOffLoss(vb, i float64, e Edge, stored float64) float64 {
	return vb*i*e.Current/2 + max(0, vb*i*e.Voltage/2-stored)
}
