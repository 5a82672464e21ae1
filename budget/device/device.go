// Package device models the semiconductors: what a MOSFET and a diode lose by
// conducting, switching, recovering and leaking. Temperatures are in °C,
// everything else in SI units; energies are per event, in J.
package device

// Curve is a quantity over another, as a data sheet draws it. outside is true
// where x lies beyond the rows and the end value was held; x and y are in the
// units of the rows.
type Curve interface {
	At(x float64) (y float64, outside bool)
}

const (
	kelvin  = 273.15 // of 0 °C
	cold    = 298.15 // K, at which on-resistance is stated (25 °C)
	hot     = 423.15 // K, at which its hot ratio is stated (150 °C)
	ambient = 25.0   // °C, at which forward characteristics are stated
)
