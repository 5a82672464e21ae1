package budget

import (
	"math"
	"sync"

	"lossbook/budget/magnetic"
	"lossbook/budget/stage"
)

// desk is where one point is worked out; a pool keeps At free of allocation
// whoever calls it.
type desk struct {
	problem
	situation
	last situation // of the attempt with heat, while one without is made
}

var desks = sync.Pool{New: func() any { return new(desk) }}

// At fills b with what flows, what is lost and how hot the parts become at p. A
// Budget used again costs no allocation. The point must be one that ValidatePoints
// accepts.
func (m *Model) At(p Point, b *Budget) {
	b.reset(m, p)
	if m.topology.Reach(p.Vin, m.vout) != "" {
		b.State, b.reason = OutOfReach, reasonRatio
		return
	}
	d := desks.Get().(*desk)
	defer desks.Put(d)
	d.situation.begin(m, p)
	if a := d.settle(false); a.settled {
		b.conclude(&d.situation, a)
	} else {
		b.unsettled(d)
	}
}

// begin clears the situation for a point.
func (s *situation) begin(m *Model, p Point) {
	*s = situation{m: m, frame: m.frameAt(p)}
}

// conclude books a solution, unless it is one that can't be.
func (b *Budget) conclude(s *situation, a answer) {
	if part := s.impossible(); part != noHeat {
		b.State, b.reason, b.Part = Runaway, reasonImpossible, partNames[part]
	} else if part := s.tooHot(); part != noHeat {
		b.State, b.reason, b.Part = Runaway, reasonHot, partNames[part]
	} else {
		b.book(s, a)
	}
}

// settle tries the modes in their order. Discontinuous conduction, where it may be,
// stands if the current ends within the period; continuous, if it doesn't dip below
// zero where the rectifier can't let it.
func (d *desk) settle(held bool) answer {
	count, s, m := 0, &d.situation, d.situation.m
	if !m.forced && !s.cannotRest() {
		s.mode = DCM
		d.pose(s, held)
		a := d.solve()
		if a.settled && s.flow.D1+s.flow.D2 < 1 {
			return a
		}
		count = a.iterations
	}
	s.mode = CCM
	d.pose(s, held)
	a := d.solve()
	a.iterations += count
	if a.settled && !m.forced && s.flow.Min < -1e-6*s.il {
		a.settled, a.wrong = false, currentReverse
	}
	return a
}

// cannotRest proves, where it can, that discontinuous conduction can't stand: the
// stage's loss only adds to the mean current, and no part that stands is colder than
// ambient or hotter than any solution that counts.
func (s *situation) cannotRest() bool {
	m, f := s.m, &s.frame
	least := m.topology.MeanCurrent(m.vout*f.io/f.Vin, f.io)
	return stage.CannotRest(f.flux, m.worstBranches(f.Ambient), m.law, least)
}

// worstBranches returns the largest resistance and threshold of the off-path between
// the ambient and the hottest temperature that counts. Each of its parts is monotone
// in temperature, or a curve of which the largest row is taken.
func (m *Model) worstBranches(ambient float64) stage.Branches {
	worst := stage.Branches{Off: m.dcr*magnetic.CopperFactor(hottest) + m.seriesOff}
	if m.sync {
		worst.Off += m.syncResistance.Most(ambient, hottest)
		return worst
	}
	coldVolt, coldOhm := m.forward.At(ambient)
	hotVolt, hotOhm := m.forward.At(hottest)
	worst.Threshold = math.Max(coldVolt, hotVolt)
	worst.Off += math.Max(coldOhm, hotOhm)
	return worst
}

// unsettled tells out of reach from running away: whether there would be a solution
// if the parts stayed at ambient.
func (b *Budget) unsettled(d *desk) {
	s := &d.situation
	d.last = *s
	cold := d.settle(true)
	if !cold.settled {
		b.State, b.reason = OutOfReach, reasonOf[cold.wrong]
		b.current = math.Max(s.flow.Max, 0)
		return
	}
	b.State, b.reason = Runaway, reasonNoBalance
	b.Part = partNames[s.m.greatestGain(&d.last, s)]
}

// impossible returns the part whose model has left its meaning: a threshold, a slope
// or a core's temperature factor below zero; noHeat if none has.
func (s *situation) impossible() heat {
	switch m := s.m; {
	case !m.sync && (s.forwardVolt < 0 || s.forwardOhm < 0):
		return rectifierHeat
	case m.core.Known() && s.coreFactor < 0:
		return inductorHeat
	}
	return noHeat
}

func (s *situation) tooHot() heat {
	part := noHeat
	for i, t := range s.temperature {
		if t > hottest && (part == noHeat || t > s.temperature[part]) {
			part = heat(i)
		}
	}
	return part
}

var partNames = [3]string{"switch", "rectifier", "inductor"}

// gains returns (theta_ja + enclosure_theta)·dP/dT of the parts with the currents
// held: 1 is where a part heats itself as fast as it can shed heat. One that heat
// doesn't warm has none, however steep its loss.
func (m *Model) gains(s *situation) [3]float64 {
	var gains [3]float64
	for part := range gains {
		if theta := m.theta[part] + m.enclosure; theta > 0 {
			gains[part] = theta * s.heatSlope(part)
		}
	}
	return gains
}

// heatSlope returns dP/dT of a part in W/K by a central difference; where a model
// ends within a thousandth of a kelvin by a difference to the other side, and
// infinity where it ends on both.
func (s *situation) heatSlope(part int) float64 {
	const h = 1e-3 // K
	low, below := s.heatBeside(part, -h)
	high, above := s.heatBeside(part, h)
	switch {
	case below && above:
		return (high - low) / (2 * h)
	case above:
		return (high - s.heat[part]) / h
	case below:
		return (s.heat[part] - low) / h
	}
	return math.Inf(1)
}

// heatBeside returns what a part would lose a few kelvin beside its temperature.
func (s *situation) heatBeside(part int, kelvin float64) (watts float64, known bool) {
	probe := *s
	t := s.temperature
	t[part] += kelvin
	known = probe.warm(t) == sound && probe.account() == sound
	return probe.heat[part], known
}

// greatestGain names the part that runs away: that with the greatest gain at the
// last iterate, or cold where that iterate was beyond any number.
func (m *Model) greatestGain(last, cold *situation) heat {
	s := last
	if s.loss == 0 || math.IsInf(s.loss, 0) {
		s = cold
	}
	part, most := noHeat, math.Inf(-1)
	for i, g := range m.gains(s) {
		if g > most { // beyond any number a gain is none
			part, most = heat(i), g
		}
	}
	if part == noHeat {
		return m.greatestGain(cold, cold)
	}
	return part
}
