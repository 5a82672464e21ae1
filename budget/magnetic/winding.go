package magnetic

import "math"

// Harmonics is the number of harmonics of the ripple that the winding's loss is
// summed over.
const Harmonics = 50

const (
	copperResistivity  = 1.7241e-8      // Ω·m at 20 °C, IEC 60028 (58 MS/m)
	vacuumPermeability = 4e-7 * math.Pi // H/m
)

// Winding is how the resistance of an inductor rises with frequency: by a curve
// of factors, by Dowell's layers, or not at all.
type Winding struct {
	curve  Curve
	height float64 // m, of the equivalent foil times √porosity; 0: no layers known
	layers float64
}

// CurveWinding returns a winding whose factor over frequency (Hz) is the curve's.
func CurveWinding(c Curve) Winding { return Winding{curve: c} }

// FoilWinding returns a winding of foil of the thickness (m) in layers of the
// porosity (0…1).
func FoilWinding(thickness, layers, porosity float64) Winding {
	return Winding{height: thickness * math.Sqrt(porosity), layers: layers}
}

// RoundWinding returns a winding of round wire of the diameter (m), taken as a
// square of the same area: h = d·√(π/4).
func RoundWinding(diameter, layers, porosity float64) Winding {
	return FoilWinding(diameter*math.Sqrt(math.Pi/4), layers, porosity)
}

// Factor returns the resistance at the frequency f (Hz, > 0) over that at direct
// current, for copper at t (°C). outside is true where a curve was held flat.
func (w Winding) Factor(f, t float64) (factor float64, outside bool) {
	switch {
	case w.curve != nil:
		return w.curve.At(f)
	case w.height > 0:
		return Dowell(w.height/SkinDepth(f, t), w.layers), false
	}
	return 1, false
}

// Known reports whether anything was stated about the factor.
func (w Winding) Known() bool { return w.curve != nil || w.height > 0 }

// SkinDepth returns δ = √(ρ/(π·f·µ0)) in m of copper at f (Hz, > 0) and t (°C).
func SkinDepth(f, t float64) float64 {
	return math.Sqrt(copperResistivity * CopperFactor(t) / (math.Pi * f * vacuumPermeability))
}

// Dowell returns the factor by which m layers of the relative height ξ = h·√η/δ
// raise a winding's resistance,
//
//	F = ξ·[(sinh 2ξ + sin 2ξ)/(cosh 2ξ − cos 2ξ) + ⅔·(m² − 1)·(sinh ξ − sin ξ)/(cosh ξ + cos ξ)]
//
// ξ ≥ 0, m ≥ 1. Below ξ = 1e-3 its series 1 + (5m² − 1)·ξ⁴/45, above 40 its limit
// ξ·(1 + ⅔·(m² − 1)), where the formula loses digits or overflows. Source: P. L.
// Dowell, Effects of eddy currents in transformer windings, Proc. IEE 113 (1966).
func Dowell(xi, m float64) float64 {
	layers := 2.0 / 3.0 * (m*m - 1)
	switch {
	case xi < 1e-3:
		return 1 + (5*m*m-1)*xi*xi*xi*xi/45
	case xi > 40:
		return xi * (1 + layers)
	}
	sin, cos := math.Sincos(xi)
	up := math.Exp(xi)
	sinh, cosh := (up-1/up)/2, (up+1/up)/2
	if xi < 0.5 {
		sinh = math.Sinh(xi) // e^ξ − e^−ξ cancels here
	}
	skin := (sinh*cosh + sin*cos) / (sinh*sinh + sin*sin) // half angles of the formula's first fraction
	return xi * (skin + layers*(sinh-sin)/(cosh+cos))
}
