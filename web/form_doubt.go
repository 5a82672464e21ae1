package web

import (
	"math"

	"lossbook/budget"
	"lossbook/web/quantity"
)

// usualSize is the range of sizes that a data sheet or schematic states in a
// unit, with room to spare; beyond it a prefix is more likely to have been left
// out than meant. Source: common practice.
var usualSize = map[string][2]float64{
	"V": {1e-3, 2e4}, "A": {1e-9, 2e3}, "Ω": {1e-6, 2e3}, "F": {1e-13, 0.5}, "H": {1e-10, 1},
	"C": {1e-12, 1e-4}, "s": {1e-12, 1e-2}, "Hz": {1e3, 1e9}, "W": {1e-6, 1e4}, "J": {1e-12, 1e-1},
	"m": {1e-6, 0.1}, "m²": {1e-8, 0.1}, "m³": {1e-10, 0.01}, "K/W": {0.01, 2e3}, "A/s": {1e4, 1e12},
}

// doubtful asks whether a value of an unusual size is meant. It is no error: the
// budget is computed with it.
func doubtful(f budget.Field, text string) string {
	sizes, known := usualSize[f.Unit]
	if !known || blank(text) {
		return ""
	}
	value, err := quantity.Parse(text, quantity.Unit(f.Unit))
	size := math.Abs(value)
	switch {
	case err != nil || size == 0:
		return ""
	case size < sizes[0]:
		return "unusually small: is the prefix right?"
	case size > sizes[1]:
		return "unusually large: is the prefix right?"
	}
	return ""
}
