// Package magnetic models the inductor: how much flux a current links, what its
// winding loses at direct and alternating current, and what its core loses.
// Temperatures are in °C, everything else in SI units.
package magnetic

// Curve is a quantity over another, as a data sheet draws it. outside is true
// where x lies beyond the rows and the end value was held; x and y are in the
// units of the rows.
type Curve interface {
	At(x float64) (y float64, outside bool)
}

// Area is a curve that can be integrated from 0.
type Area interface {
	Curve
	Integral(x float64) float64 // from 0 to x, in the units of y times x
}

// copperSlope is the temperature coefficient of annealed copper at 20 °C, 1/K.
// Source: IEC 60028.
const copperSlope = 0.00393

// CopperFactor returns the resistance of copper at t (°C) over that at 20 °C:
// 1 + 0.00393·(T − 20). Source: IEC 60028.
func CopperFactor(t float64) float64 { return 1 + copperSlope*(t-20) }

// CopperRate returns the relative slope of CopperFactor over t (°C) in 1/K.
func CopperRate(t float64) float64 { return copperSlope / CopperFactor(t) }
