package device

import "math"

// Recovery is the reverse recovery of a diode, or of a MOSFET's body diode, as
// stated at one current and slope.
type Recovery struct {
	Charge          float64 // C, stated, less the capacitive charge where it holds that
	Current         float64 // A, at which it is stated
	Slope           float64 // A/s, at which it is stated
	CurrentExponent float64 // exponent of the charge over the current
	SlopeExponent   float64 // exponent of the charge over the slope
	Tau             float64 // s, carrier lifetime; 0: not known
	DeadTime        float64 // s, during which a body diode stores charge
	DeadTimeBounds  bool    // true of a body diode
	Softness        float64 // ratio t_b/t_a
}

// Reverse is one recovery: charge in C, of which Tail flows while the rectifier
// takes up voltage, and the time in s until the reverse current peaks.
type Reverse struct{ Charge, Rise, Tail float64 }

// At returns the recovery from the forward current i (A, > 0) at the slope k
// (A/s, > 0): a triangle with t_b/t_a = S,
//
//	Q = Q_0·(I/I_0)^a·(k/k_0)^b      t_a = √(2·Q/(k·(1 + S)))      Q_b = Q·S/(1 + S)
//
// With a lifetime τ, Q is at most I·τ, and of a body diode then reduced by 1 −
// e^(−dead/τ). The exponents 0.5 are common practice; softness is t_b/t_a as in
// JEDEC JESD282. The zero Charge recovers nothing.
func (r Recovery) At(i, k float64) Reverse {
	if r.Charge <= 0 {
		return Reverse{}
	}
	q := r.Charge * math.Pow(i/r.Current, r.CurrentExponent) * math.Pow(k/r.Slope, r.SlopeExponent)
	if r.Tau > 0 {
		q = math.Min(q, i*r.Tau)
		if r.DeadTimeBounds {
			q *= -math.Expm1(-r.DeadTime / r.Tau)
		}
	}
	return Reverse{
		Charge: q,
		Rise:   math.Sqrt(2 * q / (k * (1 + r.Softness))),
		Tail:   q * r.Softness / (1 + r.Softness),
	}
}

// RectifierEnergy returns what the recovering rectifier burns, in J: Vb·Q_b/3, its
// reverse current falling straight while its voltage rises straight.
func (r Reverse) RectifierEnergy(vb float64) float64 { return vb * r.Tail / 3 }

// SwitchEnergy returns what the switch burns beyond its own turn-on, in J, while
// it carries the current i (A) and the reverse current against vb: Vb·(I·t_a + Q)
// less the rectifier's part.
func (r Reverse) SwitchEnergy(vb, i float64) float64 {
	return vb*(i*r.Rise+r.Charge) - r.RectifierEnergy(vb)
}
