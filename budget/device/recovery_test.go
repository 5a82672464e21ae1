package device_test

import (
	"math"
	"testing"

	"lossbook/budget/device"
)

// TestRecoveryEnergy integrates v·i: for t_a the switch stands at vb and carries load
// and reverse current; for t_b the voltage passes to the rectifier in a straight line
// while the reverse current falls in one. The load current in t_b belongs to turn-on.
func TestRecoveryEnergy(t *testing.T) {
	const vb, i, k, s = 48.0, 8.0, 400e6, 0.6
	r := device.Recovery{Charge: 90e-9, Current: 8, Slope: 400e6, Softness: s}.At(i, k)
	ta := r.Rise
	tb, peak := s*ta, k*ta
	sw := integral(func(x float64) float64 { return vb * (i + k*x) }, 0, ta) +
		integral(func(x float64) float64 { return vb * (1 - x/tb) * peak * (1 - x/tb) }, 0, tb)
	re := integral(func(x float64) float64 { return vb * x / tb * peak * (1 - x/tb) }, 0, tb)
	hold(t, []row{
		{"switch", r.SwitchEnergy(vb, i), sw, 1e-12, "quadrature of v·i"},
		{"rectifier", r.RectifierEnergy(vb), re, 1e-12, "quadrature of v·i"},
		{"charge", k * ta * ta / 2 * (1 + s), r.Charge, 1e-14, "area of the triangle"},
	})
}

func TestRecoveryScaling(t *testing.T) {
	base := device.Recovery{Charge: 50e-9, Current: 10, Slope: 100e6, CurrentExponent: 0.5, SlopeExponent: 0.3, Softness: 0.5}
	bound := base
	bound.Tau = 2e-9
	body := base
	body.Tau, body.DeadTime, body.DeadTimeBounds = 30e-9, 20e-9, true
	short := body
	short.DeadTime = 1e-15
	hold(t, []row{
		{"where stated", base.At(10, 100e6).Charge, 50e-9, 0, "the entry"},
		{"four times the current", base.At(40, 100e6).Charge, 100e-9, exact, "4^0.5"},
		{"a thousand times the slope", base.At(10, 1e11).Charge, 50e-9 * math.Cbrt(1000) / math.Pow(10, 0.1), 1e-13, "1000^0.3"},
		{"bounded by the lifetime", bound.At(10, 100e6).Charge, 20e-9, exact, "I·τ"},
		{"a lifetime that doesn't bind", device.Recovery{Charge: 50e-9, Current: 10, Slope: 100e6, Softness: 1, Tau: 6e-9}.At(10, 100e6).Charge, 50e-9, 0, "below I·τ"},
		{"a dead time's storage", body.At(10, 100e6).Charge, 50e-9 * (1 - math.Exp(-2.0/3)), exact, "1 − e^(−t/τ)"},
		{"a very short one", short.At(10, 100e6).Charge, 50e-9 * 1e-15 / 30e-9, 1e-7, "t/τ to first order"},
		{"no dead time for a diode", device.Recovery{Charge: 50e-9, Current: 10, Slope: 100e6, Softness: 1, Tau: 30e-9, DeadTime: 1e-9}.At(10, 100e6).Charge, 50e-9, 0, "only a body diode stores during it"},
	})
	if got := (device.Recovery{Softness: 0.5}).At(5, 1e8); got != (device.Reverse{}) {
		t.Errorf("no charge recovers %+v", got)
	}
	if got := (device.Recovery{CurrentExponent: 0.5, SlopeExponent: 0.5, Softness: 0.5}).At(5, 1e8); got != (device.Reverse{}) {
		t.Errorf("no charge, stated at no current, recovers %+v", got)
	}
	if got := (device.Recovery{Charge: -1e-9, Softness: 0.5}).At(5, 1e8); got != (device.Reverse{}) {
		t.Errorf("a negative charge recovers %+v", got)
	}
}
