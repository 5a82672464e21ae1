package device

import "math"

// Resistance is the on-resistance of a MOSFET over junction temperature.
type Resistance struct {
	cold     float64
	exponent float64
	curve    Bounded
}

// Bounded is a curve that knows its largest value, in the units of its rows.
type Bounded interface {
	Curve
	Most() float64
}

// NewResistance returns the on-resistance that is cold (Ω, > 0) at 25 °C and
// hotRatio (> 0) times that at 150 °C. A curve of multipliers over °C, if not
// nil, goes before the ratio.
func NewResistance(coldOhm, hotRatio float64, curve Bounded) Resistance {
	return Resistance{coldOhm, math.Log(hotRatio) / math.Log(hot/cold), curve}
}

// At returns the resistance in Ω at the junction temperature tj in °C,
//
//	R(Tj) = R_25·((Tj + 273.15)/298.15)^m,  m = ln(ratio)/ln(423.15/298.15)
//
// a power law of the absolute temperature through the two stated values, or
// R_25 times the curve's multiplier, held flat beyond its rows (outside). tj must
// be above −273.15. Source: the power law is common practice; mobility falls as
// a power of absolute temperature.
func (r Resistance) At(tj float64) (ohm float64, outside bool) {
	if r.curve != nil {
		k, outside := r.curve.At(tj)
		return r.cold * k, outside
	}
	if r.exponent == 0 {
		return r.cold, false
	}
	return r.cold * math.Exp(r.exponent*math.Log((tj+kelvin)/cold)), false
}

// Rate returns the relative slope of At over the junction temperature tj (°C) in 1/K: m
// over the absolute temperature, or the slope of the curve by a difference of 0.01 K.
func (r Resistance) Rate(tj float64) float64 {
	if r.curve == nil {
		return r.exponent / (tj + kelvin)
	}
	const h = 0.01
	low, _ := r.curve.At(tj - h/2)
	high, _ := r.curve.At(tj + h/2)
	return (high - low) / (h * low)
}

// Most returns the largest resistance in Ω between two junction temperatures (°C), or
// a bound above it.
func (r Resistance) Most(from, to float64) float64 {
	if r.curve != nil {
		return r.cold * r.curve.Most()
	}
	a, _ := r.At(from)
	b, _ := r.At(to)
	return math.Max(a, b)
}

// Conduction returns the power in W of a current of the mean square i2 (A²)
// through the resistance r (Ω): P = I_rms²·R.
func Conduction(i2, r float64) float64 { return i2 * r }
