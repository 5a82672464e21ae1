package budget

import (
	"math"
	"testing"
)

// leap looks for a second solution above the one of a budget: with one part held at a
// temperature and everything else substituted until it follows, it returns how many
// kelvin above its answer the part would again lose more than it sheds. That is beyond
// a solution that no cold start reaches. It returns 0 where there is none below 1500 °C.
func leap(b *Budget, part int) float64 {
	var s situation
	s.begin(b.model, b.Point)
	s.mode = b.Mode
	var p problem
	p.pose(&s, false)
	x := unknowns{b.guess}
	from := [3]float64{b.Temperatures.Switch, b.Temperatures.Rectifier, b.Temperatures.Inductor}
	if p.rise[part] == 0 {
		return 0
	}
	for i, t := range from {
		if p.rise[i] > 0 {
			x[i+1] = (t - s.frame.Ambient) / p.rise[i]
		}
	}
	for up := 0.5; from[part]+up < 1500; up *= 1.3 {
		x[part+1] = (from[part] + up - s.frame.Ambient) / p.rise[part]
		r, ok := p.follow(&x, part)
		if !ok {
			return 0
		}
		if r > 1e-3*x[part+1] {
			return up
		}
	}
	return 0
}

// follow substitutes all unknowns but a part's own until they stand still, and returns
// by how much the part's heat exceeds what it sheds, in W.
func (p *problem) follow(x *unknowns, part int) (excess float64, ok bool) {
	for range 400 {
		r, wrong := p.at(*x)
		if wrong != sound {
			return 0, false
		}
		excess, r[part+1] = r[part+1], 0
		if r.norm() < 1e-8*x.norm() {
			return excess, true
		}
		*x = x.plus(r.scaled(0.7))
	}
	return 0, false
}

// leaky draws designs whose heat bends upward: Schottky diodes that leak, cores whose
// loss falls before it rises, resistances that rise faster than temperature.
func (c chance) leaky() *Design {
	d := c.design(c.between(0.5, 6))
	if d.Diode != nil {
		d.Diode.ILeak, d.Diode.ILeakVoltage = N(d.Output.Current.V*c.between(1e-5, 3e-2)), d.Diode.VRRM
		d.Diode.ILeakTemperature, d.Diode.ILeakDoubling = N(c.between(25, 100)), c.num(7, 16)
		d.Diode.VF0Slope = N(-0.002)
	}
	if d.Inductor.Core != nil {
		d.Inductor.Core.ReferencePower.V *= c.between(0.3, 5)
		d.Inductor.Core.CT0, d.Inductor.Core.CT1, d.Inductor.Core.CT2 = N(2.2), N(0.0275), N(0.000145)
	}
	d.Switch.RdsOnHotRatio = c.num(1.5, 2.8)
	return d
}

// TestColdestOfSeveral takes points that have a second, hotter solution, near ones
// first of all: the answer must be where plain damped substitution from the cold comes
// to rest, to ten digits.
func TestColdestOfSeveral(t *testing.T) {
	double, near, settled, alone := map[string]int{}, 0, 0, 0
	for seed := range uint64(900) {
		c := newChance(seed)
		d := c.leaky()
		m, err := Prepare(d)
		if err != nil {
			t.Fatalf("seed %d: %v", seed, err)
		}
		for _, share := range []float64{0.2, 1} {
			var b Budget
			m.At(Point{d.Input.Nominal.V, share * d.Output.Current.V, d.Ambient.V}, &b)
			if b.State != Settled {
				if b.State == Runaway && b.reason == reasonNoBalance {
					alone++
					missed(t, seed, share, m, &b)
				}
				continue
			}
			settled++
			for part, name := range partNames {
				up := leap(&b, part)
				if up == 0 {
					continue
				}
				double[name]++
				if up < 60 {
					near++
				}
				beside, ok := substituted(&b)
				if off := math.Abs(b.Loss-beside.loss) / b.Loss; !ok || off > 1e-10 {
					t.Errorf("seed %d share %g: loss %.12g W, by substitution %.12g (%t)", seed, share, b.Loss, beside.loss, ok)
				}
				break
			}
		}
	}
	t.Logf("%d settled; a second solution by %v, %d of them within 60 K; %d run away", settled, double, near, alone)
	if double["switch"]+double["rectifier"]+double["inductor"] < 500 || near < 30 || double["inductor"]+double["rectifier"] < 100 || alone < 50 {
		t.Error("too few to prove anything")
	}
}

// missed asks of a point that runs away that substitution finds no solution either, in
// any mode that could stand.
func missed(t *testing.T, seed uint64, share float64, m *Model, b *Budget) {
	t.Helper()
	for _, mode := range []Mode{DCM, CCM} {
		if mode == DCM && m.forced {
			continue
		}
		b.Mode = mode
		s, ok := substituted(b)
		if rests := s.flow.D1 + s.flow.D2; !ok || mode == DCM && rests >= 1 || mode == CCM && !m.forced && s.flow.Min < 0 {
			continue
		}
		if s.tooHot() == noHeat && s.impossible() == noHeat {
			t.Errorf("seed %d share %g: runs away, but substitution settles at %g W, %v °C", seed, share, s.loss, s.temperature)
		}
	}
}
