package device_test

import (
	"math"
	"testing"

	"lossbook/budget/device"
)

func TestForward(t *testing.T) {
	tilted := device.Forward{Threshold: 0.4, ThresholdSlope: -0.0015, Resistance: 0.02, ResistanceSlope: 0.002}
	volt, ohm := tilted.At(125)
	hold(t, []row{
		{"threshold 100 K up", volt, 0.25, exact, "0.4 − 0.15 V by hand"},
		{"slope 100 K up", ohm, 0.024, exact, "20 mΩ·1.2 by hand"},
		{"body diode", device.BodyDiode{Voltage: 0.7, Resistance: 0.01}.Loss(5, 20e-9), 5 * 0.75 * 20e-9, exact, "by hand"},
	})
	// 6 A while half a period falls to 2 A: the loss integrated over the ramp.
	const d = 0.4
	ramp := func(x float64) float64 { return 6 - 4*x }
	loss := d * integral(func(x float64) float64 { return ramp(x) * (volt + ohm*ramp(x)) }, 0, 1)
	hold(t, []row{{"loss of a ramp", device.ForwardLoss(volt, ohm, d*4, d*(36+12+4)/3.0), loss, 1e-13, "quadrature of v·i"}})
}

func TestLeakage(t *testing.T) {
	l := device.Leakage{Current: 3e-3, Voltage: 40, Temperature: 100, Doubling: 11}
	const d1, d3, vb, rest = 0.45, 0.2, 24.0, 9.0
	// the mean of v·i(v) over the shares of the period in which the diode blocks
	i := func(v float64) float64 { return 3e-3 * v / 40 * 4 }
	hold(t, []row{
		{"one doubling", l.Growth(111), 2, exact, "the entry"},
		{"where stated", l.Growth(100), 1, 0, "the entry"},
		{"one halving", l.Growth(89), 0.5, exact, "the entry"},
		{"loss", l.Loss(4, d1, vb, d3, rest), d1*vb*i(vb) + d3*rest*i(rest), exact, "mean of v·i by hand"},
	})
	if got := (device.Leakage{}).Loss(math.Inf(1), 1, 1, 0, 0); got != 0 {
		t.Errorf("no leakage stated gives %g W", got)
	}
	if g := l.Growth(1e6); !math.IsInf(g, 1) {
		t.Errorf("far past a runaway the growth is %g, want infinity for the caller to see", g)
	}
}
