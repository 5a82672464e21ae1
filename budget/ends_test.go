package budget

import (
	"math"
	"testing"
)

// heated is the quiet design with a switch of a given thermal resistance whose loss
// does not follow its temperature.
func heated(theta float64) *Design {
	d := quiet()
	d.Switch.RdsOnHotRatio, d.Switch.ThetaJA = N(1), N(theta)
	d.SyncSwitch.ThetaJA, d.Inductor.ThetaJA = N(0), N(0)
	return d
}

// TestHottest puts a part just below and just above 1000 °C, beyond which no solution
// counts, through a thermal resistance that takes it there.
func TestHottest(t *testing.T) {
	m, b := solved(t, heated(1), easy)
	watts := (b.Temperatures.Switch - 25) / m.theta[switchHeat]
	for celsius, want := range map[float64]State{999.9: Settled, 1000.1: Runaway} {
		m, err := Prepare(heated((celsius - 25) / watts))
		if err != nil {
			t.Fatal(err)
		}
		if m.At(easy, b); b.State != want || want == Runaway && (b.reason != reasonHot || b.Part != "switch") {
			t.Errorf("at %g °C: %s (%s), want %s", celsius, b.State, b.Reason(), want)
		}
	}
}

// TestHottestPart asks for the hotter of two parts that are both too hot.
func TestHottestPart(t *testing.T) {
	for _, c := range []struct {
		temperature [3]float64
		want        heat
	}{{[3]float64{1001, 1002, 25}, rectifierHeat}, {[3]float64{1003, 1002, 1002}, switchHeat}, {[3]float64{25, 1001, 1005}, inductorHeat}, {[3]float64{1000, 1000, 1000}, noHeat}, {[3]float64{0, 0, 1000.5}, inductorHeat}} {
		if got := (&situation{temperature: c.temperature}).tooHot(); got != c.want {
			t.Errorf("%v: part %d, want %d", c.temperature, got, c.want)
		}
	}
}

// TestImpossibleEnds puts each model on the end of its meaning, and beside it.
func TestImpossibleEnds(t *testing.T) {
	diode := &Model{}
	m, _ := solved(t, quiet(), easy)
	for _, c := range []struct {
		name string
		s    situation
		want heat
	}{
		{"a drop of nothing", situation{m: diode}, noHeat},
		{"a drop below it", situation{m: diode, forwardVolt: -1e-3}, rectifierHeat},
		{"a slope below it", situation{m: diode, forwardVolt: 0.3, forwardOhm: -1e-3}, rectifierHeat},
		{"a MOSFET has no drop", situation{m: m, forwardVolt: -1, coreFactor: 1}, noHeat},
		{"a core's factor of nothing", situation{m: m}, noHeat},
		{"a core's factor just above", situation{m: m, coreFactor: 5e-3}, noHeat},
		{"a core's factor below", situation{m: m, coreFactor: -1e-3}, inductorHeat},
		{"no core", situation{m: &Model{sync: true}, coreFactor: -1}, noHeat},
	} {
		if got := c.s.impossible(); got != c.want {
			t.Errorf("%s: part %d, want %d", c.name, got, c.want)
		}
	}
}

// TestSlopeAtTheEnds takes a slope where the probe has only one side: just above where
// copper's straight line meets zero, and just below where a leakage grows beyond any
// loss worth following.
func TestSlopeAtTheEnds(t *testing.T) {
	m, b := solved(t, quiet(), easy)
	s := m.situationOf(b)
	for _, above := range []float64{5e-4, 1e-5} {
		if wrong := s.evaluate(b.guess, [3]float64{25, 25, 20 - 1/0.00393 + above}); wrong != sound {
			t.Fatal(wrong)
		}
		want := (windingDC(s, nil) + windingAC(s, nil)) / above // both in proportion to the resistance
		if got := s.heatSlope(2); math.Abs(got-want) > 1e-6*want {
			t.Errorf("%g K above the end: %g W/K, want %g", above, got, want)
		}
	}

	d := quietDiode()
	d.Diode.ILeak, d.Diode.ILeakDoubling, d.Diode.ILeakTemperature = N(1e-3), N(0.2), N(25)
	m, err := Prepare(d)
	if err != nil {
		t.Fatal(err)
	}
	var diode situation
	diode.begin(m, easy)
	at := func(celsius float64) float64 {
		if wrong := diode.evaluate(1, [3]float64{25, celsius, 25}); wrong != sound {
			return math.Inf(1)
		}
		return leakage(&diode, nil)
	}
	low, high := 25.0, 60.0 // °C: the last that has an answer
	for range 60 {
		if mid := (low + high) / 2; math.IsInf(at(mid), 1) {
			high = mid
		} else {
			low = mid
		}
	}
	watts := at(low)
	if want := watts * (1 - math.Exp2(-1e-3/0.2)) / 1e-3; watts < 1e29 || math.Abs(diode.heatSlope(1)-want) > 1e-6*want {
		t.Errorf("%g W at %g °C: %g W/K, want %g", watts, low, diode.heatSlope(1), want)
	}
}

// TestGreatestGainOfNoIterate asks that the part is named by the iterate without heat,
// where the last with heat was no answer: nothing, or beyond any number.
func TestGreatestGainOfNoIterate(t *testing.T) {
	d := quiet()
	d.Switch.ThetaJA, d.SyncSwitch.ThetaJA, d.Inductor.ThetaJA = N(0.1), N(0.1), N(40)
	m, b := solved(t, d, easy)
	cold := m.situationOf(b)
	for _, loss := range []float64{0, math.Inf(1), math.Inf(-1)} {
		last := situation{m: m, frame: cold.frame}
		last.loss = loss
		if got := m.greatestGain(&last, cold); got != inductorHeat {
			t.Errorf("a last loss of %g W: part %d, want the inductor", loss, got)
		}
	}
	last := *cold
	last.loss = 0.01 // an iterate like others
	if got := m.greatestGain(&last, &situation{m: m, frame: cold.frame}); got != inductorHeat {
		t.Errorf("a last loss of 0.01 W: part %d, want the inductor", got)
	}
}
