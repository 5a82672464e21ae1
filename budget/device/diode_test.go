package device_test

import (
	"math"
	"testing"

	"lossbook/budget/device"
)

// TestForward holds lines and numbers of data sheets.
func TestForward(t *testing.T) {
	line := func(v0, r, i float64) float64 {
		volt, ohm := device.Forward{Threshold: v0, Resistance: r}.At(25)
		return volt + ohm*i
	}
	tilted := device.Forward{Threshold: 0.4, ThresholdSlope: -0.0015, Resistance: 0.02, ResistanceSlope: 0.002}
	volt, ohm := tilted.At(125)
	hold(t, []row{
		{"STPS10L40C at 5 A", line(0.33, 26e-3, 5), 0.46, 1e-12, "ST STPS10L40C data sheet, 0.46 V"},
		{"STPS10L40C at 10 A", line(0.33, 26e-3, 10), 0.59, 1e-12, "ST STPS10L40C data sheet, 0.59 V"},
		{"STPS10L25D at 10 A", line(0.22, 13e-3, 10), 0.35, 1e-12, "ST STPS10L25D data sheet, 0.35 V"},
		{"STPS10L25D at 20 A", line(0.22, 13e-3, 20), 0.48, 1e-12, "ST STPS10L25D data sheet, 0.48 V"},
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
	schottky := device.Leakage{Current: 0.2e-3, Voltage: 40, Temperature: 25, Doubling: math.Ln2 / 0.0644}
	l := device.Leakage{Current: 3e-3, Voltage: 40, Temperature: 100, Doubling: 11}
	const d1, d3, vb, rest = 0.45, 0.2, 24.0, 9.0
	// the mean of v·i(v) over the shares of the period in which the diode blocks
	i := func(v float64) float64 { return 3e-3 * v / 40 * 4 }
	hold(t, []row{
		{"STPS10L40C at 100 °C", schottky.Current * schottky.Growth(100), 25e-3, 3e-3, "ST STPS10L40C data sheet, 25 mA (from 0.2 mA at 25 °C)"},
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

// TestRunawayLimit is ST AN869 rev 2, first example: 15 V for half the time, 10.1
// K/W, 210 mA at 125 °C growing by e^0.055 a kelvin. Where the loop gain is 1 the
// leakage is 1/(V·share·c·Rth): 240.0 mA recomputed (the note prints 242 mA, which
// its own inputs don't give), at 127.4 °C.
func TestRunawayLimit(t *testing.T) {
	const share, vr, rth, c = 0.5, 15.0, 8.5 + 1.6, 0.055
	l := device.Leakage{Current: 0.21, Voltage: vr, Temperature: 125, Doubling: math.Ln2 / c}
	gain := func(tj float64) float64 {
		const h = 1e-3
		loss := func(tj float64) float64 { return l.Loss(l.Growth(tj), share, vr, 0, 0) }
		return rth * (loss(tj+h) - loss(tj-h)) / (2 * h)
	}
	low, high := 100.0, 150.0
	for range 60 {
		if mid := (low + high) / 2; gain(mid) < 1 {
			low = mid
		} else {
			high = mid
		}
	}
	hold(t, []row{
		{"leakage at the limit", 0.21 * l.Growth(low), 0.2400, 2e-4, "ST AN869 rev 2, recomputed"},
		{"junction at the limit", low, 127.4, 3e-4, "ST AN869 rev 2, derived"},
	})
}
