package device

import "math"

// Forward is a diode's forward characteristic as a straight line that moves with
// temperature.
type Forward struct {
	Threshold       float64 // V at 25 °C
	ThresholdSlope  float64 // V/K
	Resistance      float64 // Ω at 25 °C
	ResistanceSlope float64 // 1/K
}

// At returns the line at the junction temperature tj (°C): V_d = V_F0 + s·(Tj − 25)
// in V and r_d·(1 + α·(Tj − 25)) in Ω. Far from 25 °C either can fall below zero,
// which no diode does; the caller must not let that stand.
func (f Forward) At(tj float64) (volt, ohm float64) {
	return f.Threshold + f.ThresholdSlope*(tj-ambient), f.Resistance * (1 + f.ResistanceSlope*(tj-ambient))
}

// ForwardLoss returns V_d·I_mean + r_d·I_rms² in W, for a mean in A and a mean
// square in A².
func ForwardLoss(volt, ohm, mean, square float64) float64 { return volt*mean + ohm*square }

// Leakage is a diode's reverse current, stated at one voltage and temperature.
type Leakage struct {
	Current     float64 // A
	Voltage     float64 // V
	Temperature float64 // °C
	Doubling    float64 // K, in which it doubles
}

// Growth returns 2^((Tj − T_0)/ΔT_2), the factor by which the junction temperature
// tj (°C) raises the stated leakage. It overflows to infinity where a junction has run away.
func (l Leakage) Growth(tj float64) float64 {
	return math.Exp2((tj - l.Temperature) / l.Doubling)
}

// Rate returns the relative slope of the leakage over temperature in 1/K, ln 2 over
// the kelvin in which it doubles.
func (l Leakage) Rate() float64 { return math.Ln2 / l.Doubling }

// Loss returns the mean power in W of the leakage: the rectifier blocks on (V)
// while the switch conducts, the share d1 of the period, and rest (V) during the
// share d3 in which nothing does,
//
//	P = [d1·V_on·i(V_on) + d3·V_rest·i(V_rest)]      i(V) = I_0·(V/V_0)·growth
//
// Source: leakage proportional to voltage and exponential in temperature, ST AN869
// (the exponential; proportionality to the voltage is common practice).
func (l Leakage) Loss(growth, d1, on, d3, rest float64) float64 {
	if l.Current == 0 {
		return 0
	}
	return l.Current * growth / l.Voltage * (d1*on*on + d3*rest*rest)
}

// BodyDiode is the forward line of a MOSFET's body diode, used in dead times:
// its threshold in V and its slope in Ω.
type BodyDiode struct{ Voltage, Resistance float64 }

// Loss returns what a current i (A, ≥ 0) through the body diode loses in the
// dead time t (s), in J: I·(V_SD + r_SD·I)·t.
func (b BodyDiode) Loss(i, t float64) float64 { return i * (b.Voltage + b.Resistance*i) * t }
