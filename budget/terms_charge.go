package budget

import (
	"math"
	"strings"

	"lossbook/budget/device"
)

// side is one of the two junctions.
type side bool

const (
	switchSide    side = false
	rectifierSide side = true
)

// stored is what is stated of a junction's charge: entries and their paths.
type stored struct {
	charge, energy, at, capacitance, capacitanceAt Num
	path                                           [5]string
}

func (m *Model) storedIn(of side) stored {
	part, path := m.design.Switch, "switch"
	if of == rectifierSide {
		part, path = m.design.SyncSwitch, "sync_switch"
	}
	if of == rectifierSide && !m.sync {
		d := m.design.Diode
		return stored{d.QC, d.EC, d.QCAt, d.CJ, d.CJAt, [5]string{"diode.q_c", "diode.e_c", "diode.q_c_at", "diode.c_j", "diode.c_j_at"}}
	}
	return stored{part.QOSS, part.EOSS, part.QOSSAt, part.COSS, part.COSSAt,
		[5]string{path + ".q_oss", path + ".e_oss", path + ".q_oss_at", path + ".c_oss", path + ".c_oss_at"}}
}

const bySquareRoot = "charge ∝ √V, as of an abrupt junction: common practice"

// The formulas of a junction are written once for any voltage, whose name stands for
// the blank in them: charge or energy, by what is stated.
const (
	chargeByCharge      = "q·√(%/V_q)"
	chargeByCapacitance = "2·C·V_C·√(%/V_C)"
	energyByEnergy      = "e·(%/V_q)^1.5"
	energyByCharge      = "q·V_q/3·(%/V_q)^1.5"
	energyByCapacitance = "⅔·C·V_C^2·(%/V_C)^1.5"
)

func atVoltage(energy bool, ofCharge, ofEnergy, name string) method {
	text := ofCharge
	if energy {
		text = ofEnergy
	}
	return how(strings.Replace(text, "%", name, 1), bySquareRoot)
}

// junction says what a junction holds at a voltage: its charge, or its energy.
func (st *Step) junction(s *situation, of side, energy bool, name string, volt float64) {
	j := s.m.storedIn(of)
	switch {
	case !(j.charge.V > 0) && !(j.capacitance.V > 0):
		st.found("neither charge nor capacitance is stated", "", j.path[0])
		return
	case !(j.charge.V > 0):
		st.by(atVoltage(energy, chargeByCapacitance, energyByCapacitance, name))
		st.given("C", j.path[3], j.capacitance.V)
		st.given("V_C", j.path[4], j.capacitanceAt.V)
	case energy && j.energy.V > 0:
		st.by(atVoltage(energy, "", energyByEnergy, name))
		st.given("e", j.path[1], j.energy.V)
		st.given("V_q", j.path[2], j.at.V)
	default:
		st.by(atVoltage(energy, chargeByCharge, energyByCharge, name))
		st.given("q", j.path[0], j.charge.V)
		st.given("V_q", j.path[2], j.at.V)
	}
	st.note(name, volt, "V")
}

// holds is the row of a junction's charge, or energy, at the voltage of that name.
func holds(of side, energy bool, name string) func(*situation, *Step, *entry) {
	return func(s *situation, st *Step, e *entry) { st.junction(s, of, energy, name, s.voltageOf(name)) }
}

// voltageOf is a voltage by its name in V: at blocking, at turn-on, at rest, and what
// the rectifier then still bears.
func (s *situation) voltageOf(name string) float64 {
	switch name {
	case "V_x":
		return s.turnOnVoltage()
	case "V_rest":
		return s.frame.rest
	case "V_x2":
		return math.Max(0, s.frame.blocking-s.turnOnVoltage())
	case "V_r2":
		return math.Max(0, s.frame.blocking-s.frame.rest)
	}
	return s.frame.blocking
}

// restOf is the row of what is left for the rectifier of the blocking voltage.
func restOf(name string) func(*situation, *Step, *entry) {
	return func(s *situation, st *Step, e *entry) {
		st.by(how("max(0, V_b − "+name+")", "the two junctions share the blocking voltage"))
		st.note("V_b", s.frame.blocking, "V")
		st.note(name, s.voltageOf(name), "V")
	}
}

var (
	wholeTurnOn = how("E_sw + Q_re·V_b − E_re", byJunctions)
	turnOnFromX = how("max(0, E_sx + (Q_re − Q_x2)·V_b − (E_re − E_x2))", byJunctions)
	turnOnFromR = how("max(0, E_sr + (Q_re − Q_r2)·V_b − (E_re − E_r2))", byJunctions)
	softTurnOn  = how("V_b·(1 − min(1, |I_min|·t_on/Q_t))", "the reversed current discharges the switch during the dead time")
	restEnergy  = how("E_r + ½·Q_t/V_b·(V_b − V_rest)^2", byJunctions+"; the ringing burns what it swings with")
	halfRinging = how("π·√(L_0·Q_t/V_b)", "half a period of inductance and mean capacitance")
	sumOfBoth   = how("Q_sw + Q_re", "both junctions at the blocking voltage")
)

func energyAtBlocking(s *situation, st *Step, e *entry) {
	st.by(wholeTurnOn)
	st.note("E_sw", s.m.switchCharge.Energy(s.frame.blocking), "J")
	st.note("Q_re", s.m.rectifierCharge.At(s.frame.blocking), "C")
	st.note("V_b", s.frame.blocking, "V")
	st.note("E_re", s.m.rectifierCharge.Energy(s.frame.blocking), "J")
}

func energyAtTurnOn(s *situation, st *Step, e *entry) {
	if s.flow.Min >= 0 {
		energyAtBlocking(s, st, e)
		return
	}
	st.by(turnOnFromX)
	st.energies(s, "E_sx", "V_x", "Q_x2", "E_x2", "V_x2")
}

func energyFromRest(s *situation, st *Step, e *entry) {
	st.by(turnOnFromR)
	st.energies(s, "E_sr", "V_rest", "Q_r2", "E_r2", "V_r2")
}

// energies are the terms of turning on from a voltage: what the switch holds there,
// and what the rectifier holds at blocking and at what is left for it.
func (st *Step) energies(s *situation, own, from, charge, energy, left string) {
	sw, re, vb := s.m.switchCharge, s.m.rectifierCharge, s.frame.blocking
	st.note(own, sw.Energy(s.voltageOf(from)), "J")
	st.note("Q_re", re.At(vb), "C")
	st.note(charge, re.At(s.voltageOf(left)), "C")
	st.note("V_b", vb, "V")
	st.note("E_re", re.Energy(vb), "J")
	st.note(energy, re.Energy(s.voltageOf(left)), "J")
}

func voltageAtTurnOn(s *situation, st *Step, e *entry) {
	st.by(softTurnOn)
	st.note("V_b", s.frame.blocking, "V")
	st.note("I_min", s.flow.Min, "A")
	st.given("t_on", "drive.dead_time_on", s.m.design.Drive.DeadTimeOn.V)
	st.note("Q_t", s.frame.totalCharge, "C")
}

func energyAtRest(s *situation, st *Step, e *entry) {
	st.by(restEnergy)
	st.note("E_r", device.TurnOnEnergy(s.m.switchCharge, s.m.rectifierCharge, s.frame.blocking, s.frame.rest), "J")
	st.note("Q_t", s.frame.totalCharge, "C")
	st.note("V_b", s.frame.blocking, "V")
	st.note("V_rest", s.frame.rest, "V")
}

func ringingTime(s *situation, st *Step, e *entry) {
	st.by(halfRinging)
	st.note("L_0", s.m.linkage.Slope(0), "H")
	st.note("Q_t", s.frame.totalCharge, "C")
	st.note("V_b", s.frame.blocking, "V")
}

func inductanceAtZero(s *situation, st *Step, e *entry) {
	if len(s.m.design.Inductor.LCurve) > 0 {
		st.found("the entered curve at no current, "+curveWords, byCurves, "inductor.l_curve")
		return
	}
	st.by(inductanceEntered)
	st.given("L", "inductor.inductance", s.m.design.Inductor.Inductance.V)
}

var inductanceEntered = how("L", "as entered")

func bothCharges(s *situation, st *Step, e *entry) {
	st.by(sumOfBoth)
	st.note("Q_sw", s.m.switchCharge.At(s.frame.blocking), "C")
	st.note("Q_re", s.m.rectifierCharge.At(s.frame.blocking), "C")
}
