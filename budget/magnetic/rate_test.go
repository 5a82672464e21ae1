package magnetic_test

import (
	"testing"

	"lossbook/budget/magnetic"
)

// TestRates holds the slopes that steer the solver against differences of what they
// are slopes of.
func TestRates(t *testing.T) {
	relative := func(f func(float64) float64, x float64) float64 {
		const h = 1e-3
		return (f(x+h) - f(x-h)) / (2 * h * f(x))
	}
	core := magnetic.MaterialCore(1e-6, 5e-5, 8, 3, magnetic.Steinmetz{Alpha: 1.4, Beta: 2.4, CT0: 1.85, CT1: 0.0185, CT2: 0.0001}, 3e5)
	const difference = "a central difference"
	hold(t, []row{
		{"copper at −40 °C", magnetic.CopperRate(-40), relative(magnetic.CopperFactor, -40), 1e-9, difference},
		{"copper at 130 °C", magnetic.CopperRate(130), relative(magnetic.CopperFactor, 130), 1e-9, difference},
		{"core at 40 °C", core.Rate(40), relative(core.Factor, 40), 1e-9, difference},
		{"core at 130 °C", core.Rate(130), relative(core.Factor, 130), 1e-9, difference},
	})
	if got := (magnetic.Core{}).Rate(40); got != 0 {
		t.Errorf("a core without loss has the slope %g", got)
	}
	low := magnetic.MaterialCore(1, 1, 1, 1, magnetic.Steinmetz{Alpha: 1, Beta: 2, CT0: 0.01}, 1) // a factor of a hundredth all the same
	if got := low.Rate(40); got != 0 {
		t.Errorf("a factor that stays has the slope %g", got)
	}
	steep := magnetic.MaterialCore(1, 1, 1, 1, magnetic.Steinmetz{Alpha: 1, Beta: 2, CT0: 0.01, CT1: 1e-4}, 1)
	hold(t, []row{{"core of a small factor", steep.Rate(0), -0.01, 1e-12, "by hand"}})
}
