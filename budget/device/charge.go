package device

import "math"

// Charge is the nonlinear capacitance of a junction under the square-root law:
//
//	Q(V) = q·√(V/V_at)      E(V) = e·(V/V_at)^1.5
//
// which is that of an abrupt junction with its built-in voltage neglected. The
// zero Charge has none. Source: common practice; C ∝ 1/√V.
type Charge struct {
	q     float64 // C/√V
	e     float64 // J/V^1.5, of the energy that belongs to q
	extra float64 // J/V^1.5, by which the stated energy differs from it
}

// ChargeOf returns the law through a stated charge q (C) and energy e (J) at the
// voltage at (V, > 0). stated is false when no energy was given: then e = q·at/3,
// which the square-root law implies.
func ChargeOf(q, e, at float64, stated bool) Charge {
	c := Charge{q: q / math.Sqrt(at), e: q / (3 * math.Sqrt(at))}
	if stated {
		c.extra = e/(at*math.Sqrt(at)) - c.e
	}
	return c
}

// ChargeOfCapacitance returns the law through a small-signal capacitance c (F)
// at the voltage at (V, > 0): q = 2·c·at, e = ⅔·c·at². It understates the charge
// of many parts, whose capacitance falls faster than 1/√V.
func ChargeOfCapacitance(c, at float64) Charge { return ChargeOf(2*c*at, 0, at, false) }

// None reports whether there is no charge at all.
func (c Charge) None() bool { return c.q == 0 }

// At returns the charge in C at v (V, ≥ 0).
func (c Charge) At(v float64) float64 { return c.q * math.Sqrt(v) }

// Energy returns the stored energy in J at v (V, ≥ 0).
func (c Charge) Energy(v float64) float64 { return (c.e + c.extra) * v * math.Sqrt(v) }

// moved returns what charging the junction from vb − vx up to vb out of a source
// of vb costs beyond what it stores, in J: [Q(Vb) − Q(Vb − Vx)]·Vb − [E(Vb) − E(Vb
// − Vx)]. With w = √Vb and v = √(Vb − Vx) the law's own part is
// q/3·Vx²·(2w + v)/(w + v)², free of cancellation at small Vx.
func (c Charge) moved(vb, vx float64) float64 {
	if vx <= 0 {
		return 0
	}
	w, v := math.Sqrt(vb), math.Sqrt(math.Max(0, vb-vx))
	own := c.e * vx * vx * (2*w + v) / ((w + v) * (w + v))
	return own - c.extra*vx/(w+v)*(w*w+w*v+v*v)
}

// TurnOnEnergy returns what a switch burns in its channel when it turns on from
// vx (V) in a stage that blocks vb: its own stored energy and the charging of the
// rectifier's capacitance from vb − vx to vb,
//
//	E(Vx) = E_sw(Vx) + [Q_re(Vb) − Q_re(Vb − Vx)]·Vb − [E_re(Vb) − E_re(Vb − Vx)]
//
// and not less than 0. 0 ≤ vx ≤ vb. Source: energy balance of the two junctions
// and the loop that feeds them.
func TurnOnEnergy(sw, re Charge, vb, vx float64) float64 {
	return math.Max(0, sw.Energy(vx)+re.moved(vb, vx))
}

// SoftVoltage returns the voltage from which a switch turns on when a reversed
// inductor current of magnitude i (A) has discharged it for the dead time (s):
// Vb·(1 − min(1, i·dead/Qt)), with qt the charge of both junctions at vb. Without
// charge it is vb.
func SoftVoltage(vb, i, dead, qt float64) float64 {
	if qt == 0 {
		return vb
	}
	return vb * (1 - math.Min(1, i*dead/qt))
}

// Ringing describes the switch node after the inductor current has ended: from
// what the mean of the turn-on energy moves to what, and how fast.
type Ringing struct {
	Start float64 // J, turning on right away: from Vb
	Rest  float64 // J, turning on at rest from Vrest, with what the ringing burnt
	Tau   float64 // s, π·√(L·Qt/Vb), half a period of the ringing
}

// NewRinging returns the ringing of a switch and rectifier with the inductance l
// (H, at no current) between the blocking voltage vb and the rest voltage vrest:
// E0 = E(Vrest) + ½·(Qt/Vb)·(Vb − Vrest)².
func NewRinging(sw, re Charge, vb, vrest, l float64) Ringing {
	qt := sw.At(vb) + re.At(vb)
	swing := vb - vrest
	return Ringing{
		Start: TurnOnEnergy(sw, re, vb, vb),
		Rest:  TurnOnEnergy(sw, re, vb, vrest) + qt/vb*swing*swing/2,
		Tau:   math.Pi * math.Sqrt(l*qt/vb),
	}
}

// Energy returns the energy in J of turning on after the current has rested for
// t3 (s, ≥ 0): a mean path through the ringing that counts on no valley and meets
// the continuous value at t3 = 0, E(Vb) + (E0 − E(Vb))·(1 − e^(−t3/τ)). Without
// charge it is 0.
func (r Ringing) Energy(t3 float64) float64 {
	if r.Tau == 0 {
		return 0
	}
	return r.Start - (r.Rest-r.Start)*math.Expm1(-t3/r.Tau)
}
