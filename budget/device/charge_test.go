package device_test

import (
	"math"
	"math/big"
	"testing"

	"lossbook/budget/device"
	"pgregory.net/rapid"
)

// capacitance is the law's own: C(V) = c·√(at/V), integrated in u = √V, in which
// C·dV = 2·c·√at·du is free of its pole.
const (
	smallSignal = 310e-12 // F
	statedAt    = 30.0    // V
)

func charged(weight func(v float64) float64, from, to float64) float64 {
	return integral(func(u float64) float64 { return weight(u*u) * 2 * smallSignal * math.Sqrt(statedAt) }, math.Sqrt(from), math.Sqrt(to))
}

func TestCharge(t *testing.T) {
	c := device.ChargeOfCapacitance(smallSignal, statedAt)
	q := device.ChargeOf(20e-9, 150e-9, 25, true)
	own := device.ChargeOf(2*smallSignal*statedAt, 0, statedAt, false)
	const quadrature = "quadrature of C(V) = c·√(at/V)"
	hold(t, []row{
		{"charge at 48 V", c.At(48), charged(func(float64) float64 { return 1 }, 0, 48), 1e-13, quadrature},
		{"energy at 48 V", c.Energy(48), charged(func(v float64) float64 { return v }, 0, 48), 1e-13, quadrature},
		{"charge where stated", q.At(25), 20e-9, exact, "the entry"},
		{"energy where stated", q.Energy(25), 150e-9, exact, "the entry"},
		{"charge at four times", q.At(100), 40e-9, exact, "√4"},
		{"energy at four times", q.Energy(100), 1200e-9, exact, "4^1.5"},
		{"energy not stated", own.Energy(statedAt), 2 * smallSignal * statedAt * statedAt / 3, exact, "q·at/3"},
		{"two ways of stating", own.At(7), c.At(7), exact, "q = 2·c·at"},
	})
	if !(device.Charge{}).None() || c.None() || (device.Charge{}).At(5) != 0 || (device.Charge{}).Energy(5) != 0 {
		t.Error("only the zero charge is none")
	}
}

// TestTurnOnEnergy takes the energy from where it is burnt: the switch's own charge
// falls through vx, and the source at vb lifts the rectifier's from vb − vx to vb.
func TestTurnOnEnergy(t *testing.T) {
	c := device.ChargeOfCapacitance(smallSignal, statedAt)
	none := device.Charge{}
	const vb = 54.0
	for _, vx := range []float64{0, 1e-6, 0.3, 20, 53.9, 54} {
		sw := charged(func(v float64) float64 { return v }, 0, vx)
		re := charged(func(v float64) float64 { return vb - v }, vb-vx, vb)
		const burnt = "quadrature of what the channel burns"
		hold(t, []row{
			{"switch alone", device.TurnOnEnergy(c, none, vb, vx), sw, 1e-12, burnt},
			{"rectifier alone", device.TurnOnEnergy(none, c, vb, vx), re, 1e-7, burnt},
			{"both", device.TurnOnEnergy(c, c, vb, vx), sw + re, 1e-7, burnt},
		})
	}
	constant := device.ChargeOf(500e-12*40, 500e-12*40*40/2, 40, true)
	hold(t, []row{{"two constant capacitances", device.TurnOnEnergy(constant, constant, 40, 40), 500e-12 * 40 * 40, exact, "½·C·V² each"}})
	hoarder := device.ChargeOf(1e-9, 0.999e-9*25, 25, true)
	if got := device.TurnOnEnergy(none, hoarder, 50, 10); got != 0 {
		t.Errorf("a stated energy above what the source brings gives %g J, want 0", got)
	}
}

// TestTurnOnEnergyDigits compares with the formula as written, in 200 bits: near
// full soft switching it cancels away in ordinary numbers.
func TestTurnOnEnergyDigits(t *testing.T) {
	wide := func(x float64) *big.Float { return new(big.Float).SetPrec(200).SetFloat64(x) }
	root := func(x *big.Float) *big.Float { return new(big.Float).SetPrec(200).Sqrt(x) }
	times := func(a, b *big.Float) *big.Float { return new(big.Float).SetPrec(200).Mul(a, b) }
	minus := func(a, b *big.Float) *big.Float { return new(big.Float).SetPrec(200).Sub(a, b) }
	over := func(a, b *big.Float) *big.Float { return new(big.Float).SetPrec(200).Quo(a, b) }
	const q, e, at, vb = 33e-9, 0.4e-6, 50.0, 57.0
	third := over(times(wide(q), wide(at)), wide(3))
	checked := 0
	for vx := 1e-9; vx < vb; vx *= 7 {
		low := minus(wide(vb), wide(vx))
		charge := func(v *big.Float) *big.Float { return times(wide(q), root(over(v, wide(at)))) }
		energy := func(k, v *big.Float) *big.Float {
			r := over(v, wide(at))
			return times(k, times(r, root(r)))
		}
		work := times(minus(charge(wide(vb)), charge(low)), wide(vb))
		law, _ := minus(work, minus(energy(third, wide(vb)), energy(third, low))).Float64()
		stated, _ := minus(work, minus(energy(wide(e), wide(vb)), energy(wide(e), low))).Float64()
		hold(t, []row{
			{"law", device.TurnOnEnergy(device.Charge{}, device.ChargeOf(q, 0, at, false), vb, vx), law, 1e-14, "200 bits"},
			{"stated energy", device.TurnOnEnergy(device.Charge{}, device.ChargeOf(q, e, at, true), vb, vx), stated, 1e-14, "200 bits"},
		})
		checked++
	}
	if checked < 12 {
		t.Fatalf("only %d voltages", checked)
	}
}

func TestSoftVoltage(t *testing.T) {
	const vb, dead, qt = 40.0, 20e-9, 80e-9 // full at 4 A
	hold(t, []row{
		{"none", device.SoftVoltage(vb, 0, dead, qt), vb, 0, "nothing moved"},
		{"half", device.SoftVoltage(vb, 2, dead, qt), vb / 2, exact, "half the charge"},
		{"no charge", device.SoftVoltage(vb, 3, dead, 0), vb, 0, "nothing to move"},
	})
	for _, i := range []float64{4, math.Nextafter(4, 5), 4.1, 1e9} {
		if v := device.SoftVoltage(vb, i, dead, qt); math.Abs(v) > 1e-14 || v < 0 {
			t.Errorf("%.17g A leaves %g V, want none", i, v)
		}
	}
	if v := device.SoftVoltage(vb, 4*(1-1e-12), dead, qt); !(v > 0) {
		t.Errorf("just short of all charge %g V are left", v)
	}
}

func TestRinging(t *testing.T) {
	c := device.ChargeOfCapacitance(smallSignal, statedAt)
	const vb, rest, l = 60.0, 24.0, 22e-6
	r := device.NewRinging(c, c, vb, rest, l)
	node := 2 * c.At(vb) / vb // F, of both, by their charge
	hold(t, []row{
		{"no rest", r.Energy(0), device.TurnOnEnergy(c, c, vb, vb), exact, "the continuous value"},
		{"long rest", r.Energy(1), device.TurnOnEnergy(c, c, vb, rest) + node/2*36*36, exact, "turn-on at rest and what the ringing burnt"},
		{"a half-life", r.Energy(r.Tau * math.Ln2), (r.Start + r.Rest) / 2, exact, "half way"},
		{"time constant", r.Tau, math.Pi * math.Sqrt(l*node), exact, "half a period of L with Qt/Vb"},
	})
	for _, t3 := range []float64{0, 1e-6} {
		if got := device.NewRinging(device.Charge{}, device.Charge{}, vb, rest, l).Energy(t3); got != 0 {
			t.Errorf("without charge the ringing gives %g J after %g s", got, t3)
		}
	}
}

// TestChargeScaling holds V^1.5 of any junction, and that more charge costs more.
func TestChargeScaling(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		at := rapid.Float64Range(1, 400).Draw(t, "at")
		vb := rapid.Float64Range(1, 800).Draw(t, "vb")
		q := rapid.Float64Range(1e-10, 1e-6).Draw(t, "q")
		k := rapid.Float64Range(0.1, 10).Draw(t, "k")
		one := device.ChargeOf(q, 0, at, false)
		e := device.TurnOnEnergy(one, one, vb, vb)
		if off := device.TurnOnEnergy(one, one, k*vb, k*vb)/e/math.Pow(k, 1.5) - 1; math.Abs(off) > 1e-13 {
			t.Fatalf("k·V: off by %g", off)
		}
		more := device.ChargeOf(k*q, 0, at, false)
		if off := device.TurnOnEnergy(more, more, vb, vb)/e/k - 1; math.Abs(off) > 1e-13 {
			t.Fatalf("k·Q: off by %g", off)
		}
	})
}
