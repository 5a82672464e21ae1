package budget

import (
	"math"
	"testing"
)

// polished carries plain substitution on from an answer until it stands still, which
// is as near to the solution as the numbers allow.
func polished(b *Budget) (loss float64, t [3]float64, ok bool) {
	var s situation
	s.begin(b.model, b.Point)
	s.mode = b.Mode
	var p problem
	p.pose(&s, false)
	x := unknowns{b.guess}
	for i, t := range [3]float64{b.Temperatures.Switch, b.Temperatures.Rectifier, b.Temperatures.Inductor} {
		if p.rise[i] > 0 {
			x[i+1] = (t - s.frame.Ambient) / p.rise[i]
		}
	}
	ok = p.polish(x)
	return s.loss, s.temperature, ok
}

// polish substitutes from x until nothing moves any more but the last digits. The
// situation is left where that is.
func (p *problem) polish(x unknowns) bool {
	before := math.Inf(1)
	for range 20000 {
		r, wrong := p.at(x)
		if wrong != sound {
			return false
		}
		now := r.norm()
		if now == 0 || now >= before && now < 1e-13*x.norm() {
			return true
		}
		before = now
		x = x.plus(r)
	}
	return false
}

// TestErrorsHold asks that an answer is as near to the solution as it says: of the loss,
// and of each temperature. What rounding takes from either way comes on top.
func TestErrorsHold(t *testing.T) {
	checked, told := 0, 0
	for seed := range uint64(400) {
		d := newChance(seed).design([...]float64{1, 3, 6}[seed%3])
		if seed%2 == 0 { // unheated, the loss is all that is solved for
			d.EnclosureTheta, d.Switch.ThetaJA, d.Inductor.ThetaJA = N(0), N(0), N(0)
			if d.Diode != nil {
				d.Diode.ThetaJA = N(0)
			} else {
				d.SyncSwitch.ThetaJA = N(0)
			}
		}
		m, err := Prepare(d)
		if err != nil {
			t.Fatal(err)
		}
		for _, share := range []float64{0.05, 0.5, 1} {
			var b Budget
			m.At(Point{d.Input.Nominal.V, share * d.Output.Current.V, d.Ambient.V}, &b)
			if b.State != Settled {
				continue
			}
			loss, temperatures, ok := polished(&b)
			if !ok {
				continue
			}
			kept := [...]float64{b.Loss, b.Temperatures.Switch, b.Temperatures.Rectifier, b.Temperatures.Inductor}
			said := [...]float64{b.LossError, b.HeatErrors.Switch, b.HeatErrors.Rectifier, b.HeatErrors.Inductor}
			for i, want := range [...]float64{loss, temperatures[0], temperatures[1], temperatures[2]} {
				rounding := 1e-14 * math.Abs(want)
				off := math.Abs(kept[i] - want)
				checked++
				if off > 2*said[i]+rounding {
					t.Errorf("seed %d share %g: figure %d is %.17g, %.2g off, but says %.2g", seed, share, i, kept[i], off, said[i])
				}
				if said[i] > rounding && off > said[i]/10 {
					told++
				}
			}
		}
	}
	t.Logf("%d figures, of which %d are as far off as they say", checked, told)
	if checked < 2000 || told < 300 {
		t.Error("too few to prove anything")
	}
}
