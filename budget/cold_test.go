package budget

import (
	"math"
	"testing"
)

// plainly follows plain substitution from the cold with a small damping: slow, and
// as sure as anything of where the cold leads. It reports failure by ok.
func plainly(p *problem) (x unknowns, ok bool) {
	const damping = 0.05
	for range 60000 {
		r, wrong := p.at(x)
		if wrong != sound {
			return x, false
		}
		if p.error(r) < 1e-10 {
			return x, true
		}
		for _, t := range p.s.temperature {
			if t > 3*hottest {
				return x, false
			}
		}
		x = x.plus(r.scaled(damping))
	}
	return x, false
}

// TestColdRoot holds the fast solver against plain substitution, for designs that are
// tame and for designs near to running away.
func TestColdRoot(t *testing.T) {
	settled, unsettled, undecided := 0, 0, 0
	for seed := range uint64(200) {
		c := newChance(seed)
		d := c.design([...]float64{1, 3, 8}[seed%3])
		m, err := Prepare(d)
		if err != nil {
			t.Fatalf("seed %d: %v", seed, err)
		}
		for _, share := range []float64{0, 0.03, 0.3, 1} {
			p := Point{d.Input.Nominal.V, share * d.Output.Current.V, d.Ambient.V}
			var quick, slow problem
			for _, mode := range []Mode{DCM, CCM} {
				if mode == DCM && m.forced {
					continue
				}
				var s, ref situation
				s.begin(m, p)
				ref.begin(m, p)
				s.mode, ref.mode = mode, mode
				quick.pose(&s, false)
				slow.pose(&ref, false)
				a := quick.solve()
				_, ok := plainly(&slow)
				if s.tooHot() != noHeat || s.impossible() != noHeat {
					a.settled = false
				}
				if ref.tooHot() != noHeat || ref.impossible() != noHeat {
					ok = false
				}
				switch {
				case a.settled && ok:
					settled++
					if off := math.Abs(s.loss-ref.loss) / ref.loss; off > 1e-7 && ref.loss > 0 {
						t.Errorf("seed %d share %g %s: loss %.12g, plainly %.12g (%d evaluations)", seed, share, mode, s.loss, ref.loss, a.iterations)
					}
				case !a.settled && !ok:
					unsettled++
				case a.settled: // substitution may go to and fro where the slope is steep
					undecided++
					t.Logf("seed %d share %g %s: settled at %.6g W after %d, plainly not (last %.6g W, T %v)", seed, share, mode, s.loss, a.iterations, ref.loss, ref.temperature)
				default:
					t.Errorf("seed %d share %g %s: plainly %.12g W, %v °C, but the solver gave up after %d (fault %d hot %v)", seed, share, mode, ref.loss, ref.temperature, a.iterations, a.wrong, a.hot)
				}
			}
		}
	}
	t.Logf("%d settled alike, %d unsettled alike, %d only by careful steps", settled, unsettled, undecided)
	if settled < 600 || unsettled < 20 {
		t.Error("too few of either to prove anything")
	}
}

// TestRunawayPart warms the air until a leaking diode runs away, with nothing else that
// heat warms: it is the diode that has to be named, also where every model ends just
// beside the last iterate.
func TestRunawayPart(t *testing.T) {
	d := lean()
	d.Rectifier, d.Input, d.Output = "diode", Input{N(15), N(15), N(15)}, Output{N(7.5), N(1)}
	d.Inductor.Core = nil
	d.Diode = &Diode{VRRM: N(100), VF0: N(0), ThetaJA: N(10.1), ILeak: N(0.21), ILeakVoltage: N(15), ILeakTemperature: N(125), ILeakDoubling: N(12.6)}
	m, err := Prepare(d)
	if err != nil {
		t.Fatal(err)
	}
	named := 0
	for air := 80.0; air < 130; air += 0.01 {
		var b Budget
		if m.At(Point{15, 1, air}, &b); b.State != Runaway {
			continue
		}
		if named++; b.Part != "rectifier" {
			t.Fatalf("at %.2f °C %q runs away: %s", air, b.Part, b.Reason())
		}
	}
	if named < 500 {
		t.Errorf("only %d points run away", named)
	}
}
