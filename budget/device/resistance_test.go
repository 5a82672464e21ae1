package device_test

import (
	"math"
	"testing"

	"lossbook/budget/device"
	"pgregory.net/rapid"
)

// ramp is a straight curve of multipliers from 20 to 120 °C.
type ramp struct{}

func (ramp) At(x float64) (float64, bool) {
	held := math.Min(120, math.Max(20, x))
	return 0.8 + 0.01*held, held != x
}

func (ramp) Most() float64 { return 2 }

func TestResistance(t *testing.T) {
	at := func(r device.Resistance, tj float64) float64 { ohm, _ := r.At(tj); return ohm }
	power := device.NewResistance(8e-3, 1.8, nil)
	middle := math.Sqrt(298.15*423.15) - 273.15
	hold(t, []row{
		{"cold", at(power, 25), 8e-3, exact, "the stated value"},
		{"hot", at(power, 150), 1.8 * 8e-3, exact, "the stated ratio"},
		{"half way in the logarithm of kelvin", at(power, middle), 8e-3 * math.Sqrt(1.8), exact, "a power law's geometric mean"},
		{"as far below as hot is above", at(power, 298.15*298.15/423.15-273.15), 8e-3 / 1.8, exact, "a power law's reflection"},
		{"ratio 1", at(device.NewResistance(8e-3, 1, nil), 700), 8e-3, 0, "no dependence"},
		{"curve", at(device.NewResistance(8e-3, 1.8, ramp{}), 70), 8e-3 * 1.5, exact, "the curve goes before the ratio"},
		{"conduction", device.Conduction(2.5*2.5, 0.04), 0.25, exact, "I²·R by hand"},
	})
	if r := at(power, math.Nextafter(-273.15, 0)); math.IsNaN(r) || math.IsInf(r, 0) || r < 0 {
		t.Errorf("just above absolute zero the resistance is %g Ω", r)
	}
}

func TestResistanceOutside(t *testing.T) {
	r := device.NewResistance(1, 1, ramp{})
	for tj, want := range map[float64]bool{math.Nextafter(20, 0): true, 20: false, 120: false, math.Nextafter(120, 200): true} {
		if _, outside := r.At(tj); outside != want {
			t.Errorf("at %.17g °C outside is %v", tj, outside)
		}
	}
	if _, outside := device.NewResistance(1, 2, nil).At(1e4); outside {
		t.Error("the power law has no rows to be outside of")
	}
}

// TestResistanceMost asks that the bound is one, and a tight one for a power law.
func TestResistanceMost(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		from := rapid.Float64Range(-200, 300).Draw(t, "from")
		to := from + rapid.Float64Range(0, 800).Draw(t, "width")
		ratio := rapid.Float64Range(0.3, 3).Draw(t, "ratio")
		r := device.NewResistance(0.01, ratio, nil)
		most, largest := r.Most(from, to), 0.0
		for i := range 21 {
			ohm, _ := r.At(from + (to-from)*float64(i)/20)
			largest = math.Max(largest, ohm)
		}
		if !(most >= largest*(1-exact)) || most > largest*(1+exact) {
			t.Fatalf("bound %g, largest seen %g", most, largest)
		}
	})
	if got := device.NewResistance(0.01, 1, ramp{}).Most(30, 40); got != 0.02 {
		t.Errorf("a curve's bound is %g Ω, want that of its largest row", got)
	}
}
