package budget

import (
	"math"
	"runtime"
	"slices"
	"testing"

	"pgregory.net/rapid"
)

// complainer is what a check needs of a test, whether rapid runs it or not.
type complainer interface {
	Helper()
	Errorf(format string, args ...any)
}

// drawn changes every number of a whole design, row by row of the table of fields, by
// up to a decade either way; a failure shrinks to the few that matter.
func drawn(t *rapid.T) *Design {
	d := full()
	d.Topology = rapid.SampledFrom([]string{"buck", "boost", "buck_boost"}).Draw(t, "topology")
	if d.Topology != "buck" {
		d.Output.Voltage = N(96)
	}
	if rapid.Bool().Draw(t, "diode") {
		diode(d)
		d.Diode.Recovery = d.SyncSwitch.Recovery
	} else {
		d.LightLoad = rapid.SampledFrom([]string{"forced", "diode_emulation"}).Draw(t, "light load")
	}
	for _, part := range parts {
		for _, field := range part.Fields {
			entry, there := d.Slot(field.Path, false)
			number, ok := entry.(*Num)
			if !there || !ok || !number.Stated || part.Path == "" {
				continue
			}
			was := *number
			number.V *= math.Pow(10, rapid.Float64Range(-1, 1).Draw(t, field.Path))
			if len(Validate(d)) > 0 {
				*number = was
			}
		}
	}
	return d
}

// asked draws a point of a design.
func asked(t *rapid.T, d *Design) Point {
	load := rapid.Float64Range(-3, 0.3).Draw(t, "load")
	return Point{d.Input.Nominal.V, d.Output.Current.V * math.Pow(10, load), rapid.Float64Range(-40, 85).Draw(t, "ambient")}
}

// prepared prepares a design that Validate accepts, which all that are drawn are.
func prepared(t *rapid.T, d *Design) *Model {
	m, err := Prepare(d)
	if err != nil {
		t.Fatalf("%v", err)
	}
	return m
}

// TestAnyBudgetIsInOrder holds what must be so of any point against drawn designs: no
// figure but numbers, losses that add up, energy that closes, an efficiency of 0 at no
// load alone, and without an answer a reason and no figures.
func TestAnyBudgetIsInOrder(t *testing.T) {
	states := map[State]int{}
	rapid.Check(t, func(t *rapid.T) {
		d := drawn(t)
		m, p := prepared(t, d), asked(t, d)
		for _, p := range []Point{p, {p.Vin, 0, p.Ambient}} {
			var b Budget
			m.At(p, &b)
			states[b.State]++
			everyNumber(&b, func(what string, v float64) {
				if !finite(v) {
					t.Errorf("%v: %s is %g", p, what, v)
				}
			})
			if b.State != Settled {
				if b.Reason() == "" || b.Loss != 0 || len(b.Items) != 0 {
					t.Errorf("%v: %s with %g W and the reason %q", p, b.State, b.Loss, b.Reason())
				}
				continue
			}
			inOrder(t, &b)
			if b.Efficiency >= 1 || (b.Efficiency == 0) != (p.Iout == 0) {
				t.Errorf("%v: efficiency %g", p, b.Efficiency)
			}
		}
	})
	if t.Logf("%v", states); states[Settled] < 50 {
		t.Error("too few settle to prove anything")
	}
}

// TestAnyBudgetIsReproducible asks for the same bits from one processor and from
// several, with points worked out side by side.
func TestAnyBudgetIsReproducible(t *testing.T) {
	defer runtime.GOMAXPROCS(runtime.GOMAXPROCS(0))
	compared := 0
	rapid.Check(t, func(rt *rapid.T) {
		d := drawn(rt)
		points := Grid(d)[:6]
		m := prepared(rt, d)
		runtime.GOMAXPROCS(1)
		want := snapshot(t, m, points, 1)
		runtime.GOMAXPROCS(4)
		if got := snapshot(t, prepared(rt, d), points, 4); !slices.Equal(got, want) {
			rt.Errorf("other bits beside others")
		}
		compared += len(want)
	})
	if compared < 100_000 {
		t.Errorf("only %d bytes were compared", compared)
	}
}

// wider returns the design for k times the current: every part k times as large, with
// 1/k of the resistance and inductance, k times the charge, and 1/k of the way to
// ambient. Every loss must then be k times as large, and nothing else move.
func wider(d *Design, k float64) *Design {
	c := *d
	up, down := func(n *Num) { n.V *= k }, func(n *Num) { n.V /= k }
	c.Output.Current.V *= k
	c.EnclosureTheta.V /= k
	recovery := func(r *Recovery) { up(&r.QRR); up(&r.QRRCurrent); up(&r.QRRDidt) }
	mosfet := func(m MOSFET) *MOSFET {
		for _, n := range []*Num{&m.RdsOn, &m.RGate, &m.LSource, &m.RSD, &m.ThetaJA} {
			down(n)
		}
		for _, n := range []*Num{&m.VPlateauCurrent, &m.QGS2, &m.QGD, &m.QG, &m.QOSS, &m.EOSS} {
			up(n)
		}
		recovery(&m.Recovery)
		return &m
	}
	c.Switch, c.SyncSwitch = mosfet(*d.Switch), mosfet(*d.SyncSwitch)
	rectifier := *d.Diode
	for _, n := range []*Num{&rectifier.CJ, &rectifier.ILeak} {
		up(n)
	}
	down(&rectifier.RD)
	down(&rectifier.ThetaJA)
	recovery(&rectifier.Recovery)
	l := *d.Inductor
	core := *l.Core
	down(&l.Inductance)
	down(&l.DCR)
	down(&l.ThetaJA)
	up(&l.ISat)
	up(&core.Volume) // by k² in length of the path: the same flux in the same area, with 1/k of the turns squared
	l.Core = &core
	in, out, snub := *d.InputCapacitor, *d.OutputCapacitor, *d.Snubber
	down(&in.ESR)
	down(&out.ESR)
	up(&snub.Capacitance)
	drive, control := *d.Drive, *d.Controller
	for _, n := range []*Num{&drive.RSource, &drive.RSink, &drive.RGateOn, &drive.RGateOff} {
		down(n)
	}
	up(&control.Current)
	up(&control.FixedLoss)
	c.Diode, c.Inductor, c.InputCapacitor, c.OutputCapacitor, c.Snubber, c.Drive, c.Controller = &rectifier, &l, &in, &out, &snub, &drive, &control
	c.Series = slices.Clone(d.Series)
	for i := range c.Series {
		down(&c.Series[i].Resistance)
	}
	return &c
}

// TestCurrentsScale holds a design against the same with k times the current.
func TestCurrentsScale(t *testing.T) {
	settled := 0
	rapid.Check(t, func(t *rapid.T) {
		d := drawn(t)
		p := asked(t, d)
		k := math.Pow(10, rapid.Float64Range(-1, 1).Draw(t, "k"))
		var a, b Budget
		prepared(t, d).At(p, &a)
		w := wider(d, k)
		if len(Validate(w)) > 0 {
			return // beyond what Validate takes
		}
		prepared(t, w).At(Point{p.Vin, k * p.Iout, p.Ambient}, &b)
		if a.State != b.State || a.Mode != b.Mode {
			t.Fatalf("%s and %s with %g of the current: %s %s", a.State, b.State, k, a.Reason(), b.Reason())
		}
		if a.State != Settled {
			return
		}
		settled++
		for i := range a.Items {
			if off := math.Abs(a.Items[i].Power*k - b.Items[i].Power); off > 1e-8*b.Loss {
				t.Errorf("%s.%s: %g W becomes %g W with %g of the current", a.Items[i].Part, a.Items[i].Kind, a.Items[i].Power, b.Items[i].Power, k)
			}
		}
		if math.Abs(a.Efficiency-b.Efficiency) > 1e-9 || math.Abs(a.Temperatures.Switch-b.Temperatures.Switch) > 1e-6 || math.Abs(a.Duty-b.Duty) > 1e-9 {
			t.Errorf("efficiency %g and %g, switch %g and %g °C, duty %g and %g", a.Efficiency, b.Efficiency, a.Temperatures.Switch, b.Temperatures.Switch, a.Duty, b.Duty)
		}
	})
	if settled < 30 {
		t.Errorf("only %d settled", settled)
	}
}
