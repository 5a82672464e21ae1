package device_test

import (
	"math"
	"testing"

	"lossbook/budget/device"
)

// relative is the slope of a quantity over itself, by a central difference.
func relative(f func(float64) float64, x float64) float64 {
	const h = 1e-3
	return (f(x+h) - f(x-h)) / (2 * h * f(x))
}

// TestRates holds the slopes that steer the solver against differences of what they
// are slopes of.
func TestRates(t *testing.T) {
	power := device.NewResistance(8e-3, 1.8, nil)
	curve := device.NewResistance(8e-3, 1.8, ramp{})
	leakage := device.Leakage{Current: 3e-3, Voltage: 40, Temperature: 100, Doubling: 11}
	ohm := func(tj float64) float64 { r, _ := power.At(tj); return r }
	const difference = "a central difference"
	hold(t, []row{
		{"on-resistance at −40 °C", power.Rate(-40), relative(ohm, -40), 1e-9, difference},
		{"on-resistance at 130 °C", power.Rate(130), relative(ohm, 130), 1e-9, difference},
		{"on-resistance by a curve", curve.Rate(70), 0.01 / 1.5, 1e-4, "a hundredth a kelvin of 1.5"},
		{"on-resistance beyond its curve", 1 + curve.Rate(130), 1, 0, "held flat"},
		{"leakage", leakage.Rate(), relative(leakage.Growth, 80), 1e-6, difference},
	})
	if got := device.NewResistance(8e-3, 1, nil).Rate(50); got != 0 || math.Signbit(got) {
		t.Errorf("a resistance that stays has the slope %g", got)
	}
}
