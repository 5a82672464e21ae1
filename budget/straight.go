package budget

import (
	"fmt"
	"math"

	"lossbook/budget/stage"
	"lossbook/budget/wave"
)

// straightEnough is the share of a current that the second look must find changed
// before it is said: a little less than a hundredth, so that no current that is off by
// a hundredth of the exact one stays unsaid. What it misses and what it says for
// nothing is counted where it is compared with exact solutions.
const straightEnough = 0.009

// hopeless is the share above which the second look itself says little.
const hopeless = 0.5

const secondWay = "this model beside the exact periodic solution of the switched stage, testdata/exact"

// straightLine says where the currents are less straight than they are drawn: a budget
// takes the voltages of the capacitors and the drops of an interval as steady.
func straightLine(m *Model, b *Budget, s *situation) []observation {
	o := observation{Finding{Level: Note, Rule: "straight_line", Limit: straightEnough, Source: secondWay}, "", 0}
	l, possible := s.lookAgain()
	share, what := 0.0, ""
	if possible {
		share, what = l.farthest(s)
	}
	if o.Value = math.Abs(share); !possible {
		o.Value = math.Max(1, l.ripple)
	}
	switch {
	case !(o.Value < hopeless):
		if !(o.Value < beyondAll) {
			o.Value = beyondAll
		}
		o.Message = "the ripple of voltages and drops is too large for currents drawn as straight lines, which say little here; larger capacitors, less series resistance or more inductance would make it smaller"
	case o.Value > straightEnough:
		direction := "smaller"
		if share > 0 {
			direction = "larger"
		}
		o.Message = fmt.Sprintf("with the ripple of voltages and drops %s current would be about %.2g %% %s than drawn as a straight line; larger capacitors, less series resistance or more inductance make it straighter", what, 100*o.Value, direction)
	default:
		return nil
	}
	o.severity = o.Value
	return []observation{o}
}

// farthest returns the current that differs most from its straight line, and by which
// share. Where none flows there is no share.
func (l *look) farthest(s *situation) (share float64, what string) {
	in, out := s.m.topology.InputSees, s.m.topology.OutputSees
	for _, c := range []struct {
		what         string
		square, bent float64 // A²
	}{
		{"the inductor’s peak", s.flow.Max * s.flow.Max, l.flow.Max * l.flow.Max},
		{"the inductor’s rms", s.inductor.MeanSquare(), l.square(stage.Inductor)},
		{"the switch’s rms", s.sw.MeanSquare(), l.square(stage.Switch)},
		{"the rectifier’s rms", s.re.MeanSquare(), l.square(stage.Rectifier)},
		{"the input capacitor’s rms", s.inputAC, l.alternating(in)},
		{"the output capacitor’s rms", s.outputAC, l.alternating(out)},
	} {
		if c.square <= 0 {
			continue
		}
		if off := math.Sqrt(c.bent/c.square) - 1; math.Abs(off) > math.Abs(share) {
			share, what = off, c.what
		}
	}
	return share, what
}

// look holds the currents of a second look: the flow balanced again, and mean and
// variance (A, A²) of the current within the switch's and the rectifier's interval.
type look struct {
	flow           stage.Flow
	mean, variance [2]float64
	continuous     bool
	ripple         float64 // the largest shift of an interval's voltage, as a share of it
}

func (l *look) share(k int) float64 { return [2]float64{l.flow.D1, l.flow.D2}[k] }

// square returns the mean square of a branch's current in A².
func (l *look) square(at stage.Branch) (sum float64) {
	for k := range l.mean {
		if l.flows(at, k) {
			sum += l.share(k) * (l.mean[k]*l.mean[k] + l.variance[k])
		}
	}
	return sum
}

// alternating returns the mean square less the square of the mean, in A², without the
// difference of two large numbers.
func (l *look) alternating(at stage.Branch) (sum float64) {
	whole, rest := 0.0, 1.0
	for k := range l.mean {
		if l.flows(at, k) {
			whole += l.share(k) * l.mean[k]
			rest -= l.share(k)
		}
	}
	if at == stage.Inductor && l.continuous {
		rest = 0 // not what rounding leaves of it
	}
	for k := range l.mean {
		if beside := l.mean[k] - whole; l.flows(at, k) {
			sum += l.share(k) * (beside*beside + l.variance[k])
		}
	}
	return sum + math.Max(0, rest)*whole*whole
}

func (l *look) flows(at stage.Branch, k int) bool {
	return at == stage.Inductor || (at == stage.Switch) == (k == 0)
}

// lookAgain balances the flow once more with what straight lines leave out, to first
// order: the capacitors' voltages move, drops move with the current, the inductance
// falls with it, and the source feeds the loss of the input capacitor too. If voltage
// over inductance, and so the current's slope, falls by the share β of its mean during
// an interval, with a quadratic part of γ from the capacitors, the current is no line
// from Imin to Imax but
//
//	mean = (Imin + Imax)/2 ± β·Δi/12      variance = Δi²/12·(1 − γ/15) + (β·Δi/12)²/5
//
// + while it rises, − while it falls. Without a solution the ripple alone is told.
func (s *situation) lookAgain() (l look, possible bool) {
	w, m := s.flow, s.m
	l.flow, l.continuous = w, s.mode == CCM
	if w.Linkage == 0 {
		return l, true
	}
	is := s.is + s.inputAC*orZero(m.design.InputCapacitor).ESR.V/s.frame.Vin
	v := s.voltages(is)
	ways := s.branches()
	steady := [2]float64{w.Linkage / (w.D1 * m.period), w.Linkage / (w.D2 * m.period)}
	drop := [2]float64{ways.On * w.Swing(), ways.Off * w.Swing()}
	softer := s.softening()
	β := [2]float64{-softer, softer}
	for k := range β {
		β[k] += (drop[k] - v.rise[k]) / steady[k]
		l.ripple = math.Max(l.ripple, math.Abs(v.mean[k])/steady[k])
	}
	flux := stage.Drive{On: s.frame.flux.On + v.mean[0], Off: s.frame.flux.Off + v.mean[1], Period: m.period}
	il, wrong := m.topology.MeanCurrent(is, s.frame.io), stage.NoFault
	if s.mode == DCM {
		il /= 1 + (w.D1*β[0]-w.D2*β[1])/(w.D1+w.D2)/6
		l.flow, wrong = stage.Discontinuous(flux, ways, m.law, il)
	} else {
		l.flow, wrong = stage.Continuous(flux, ways, m.law, il)
	}
	if wrong != stage.NoFault {
		return l, false
	}
	l.curve(β, [2]float64{v.hump[0] / steady[0], v.hump[1] / steady[1]})
	return l, true
}

// softening returns by which share of its mean the reciprocal of the inductance is
// larger at the highest current than at the lowest.
func (s *situation) softening() float64 {
	w, law := s.flow, s.m.law
	return w.Linkage / w.Swing() * (1/law.Slope(w.Max) - 1/law.Slope(w.Min))
}

// curve puts the parabolas on the flow's lines. In continuous conduction the whole
// current shifts so that its mean stays.
func (l *look) curve(β, γ [2]float64) {
	swing, line := l.flow.Swing(), (l.flow.Max+l.flow.Min)/2
	beside := [2]float64{β[0] * swing / 12, -β[1] * swing / 12}
	if l.continuous {
		shift := l.flow.D1*beside[0] + l.flow.D2*beside[1]
		line, l.flow.Max, l.flow.Min = line-shift, l.flow.Max-shift, l.flow.Min-shift
	}
	for k := range beside {
		l.mean[k] = line + beside[k]
		l.variance[k] = math.Max(0, swing*swing/12*(1-γ[k]/15)+beside[k]*beside[k]/5)
	}
}

// motion is what a voltage does during the two intervals, in V: by how much its mean
// differs from that of the period, how far it rises from start to end, and its
// quadratic part.
type motion struct{ mean, rise, hump [2]float64 }

// voltages returns how the voltage that drives the inductor moves, up in the first
// interval and down in the second, drops aside.
func (s *situation) voltages(is float64) (v motion) {
	t, io := s.m.topology, s.frame.io
	in := s.move(s.m.design.InputCapacitor, t.InputSees, is, -1)
	out := s.move(s.m.design.OutputCapacitor, t.OutputSees, io, 1)
	if t.OutputSees == stage.Inductor {
		v.add(0, in, 1, out, -1)
	} else {
		v.add(0, in, 1, out, 0)
	}
	if t.InputSees == stage.Inductor {
		v.add(1, out, 1, in, -1)
	} else {
		v.add(1, out, 1, in, 0)
	}
	return v
}

// add sums two motions during one interval.
func (v *motion) add(k int, a motion, x float64, b motion, y float64) {
	v.mean[k] = x*a.mean[k] + y*b.mean[k]
	v.rise[k] = x*a.rise[k] + y*b.rise[k]
	v.hump[k] = x*a.hump[k] + y*b.hump[k]
}

// move returns the motion of a capacitor that carries sign times the difference
// between a branch's current and a steady one, in A. Without capacitance stated the
// voltage is steady.
func (s *situation) move(c *Capacitor, at stage.Branch, steady, sign float64) (v motion) {
	if c == nil || !(c.Capacitance.V > 0) {
		return v
	}
	w := s.flow
	line := [3]wave.Share{{Min: w.Min, Max: w.Max, D: w.D1}, {Min: w.Max, Max: w.Min, D: w.D2}, {D: math.Max(0, 1-w.D1-w.D2)}}
	var mean [3]float64
	volts, whole := 0.0, 0.0
	for k, part := range line {
		if at == stage.Switch && k != 0 || at == stage.Rectifier && k != 1 {
			part.Min, part.Max = 0, 0
		}
		from, to := sign*(part.Min-steady), sign*(part.Max-steady)
		per := s.m.period * part.D / c.Capacitance.V // V that an ampere adds meanwhile
		mean[k] = volts + per*(from/3+to/6) + c.ESR.V*(from+to)/2
		whole += part.D * mean[k]
		volts += per * (from + to) / 2
		if k < len(v.rise) {
			v.rise[k] = per*(from+to)/2 + c.ESR.V*(to-from)
			v.hump[k] = per * (to - from) / 2
		}
	}
	for k := range v.mean {
		v.mean[k] = mean[k] - whole
	}
	return v
}
