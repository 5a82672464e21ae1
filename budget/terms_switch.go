package budget

import "math"

// mosfetOf is the MOSFET an entry belongs to, with its path.
func (m *Model) mosfetOf(e *entry) (*MOSFET, string) {
	if e.heats == rectifierHeat {
		return m.design.SyncSwitch, "sync_switch"
	}
	return m.design.Switch, "switch"
}

var (
	resistanceByLaw   = how("R_25·((T_j + 273.15)/298.15)^m_R", "power law of the absolute temperature through the two stated values: common practice")
	resistanceByCurve = how("R_25·k_R", "the entered curve")
	exponentOfRatio   = how("ln(k_150)/ln(423.15/298.15)", "through the values at 25 °C and 150 °C")
)

func onResistance(s *situation, st *Step, e *entry) {
	part, path := s.m.mosfetOf(e)
	ohm := s.rds
	if e.heats == rectifierHeat {
		ohm = s.rdsRectifier
	}
	st.given("R_25", path+".rds_on", part.RdsOn.V)
	if len(part.RdsOnCurve) > 0 {
		st.by(resistanceByCurve)
		st.note("k_R", ohm/part.RdsOn.V, "")
		return
	}
	st.by(resistanceByLaw)
	st.note("T_j", s.temperature[e.heats], "°C")
	st.note("m_R", math.Log(part.RdsOnHotRatio.V)/math.Log(423.15/298.15), "")
}

func resistanceExponent(s *situation, st *Step, e *entry) {
	part, path := s.m.mosfetOf(e)
	st.by(exponentOfRatio)
	st.given("k_150", path+".rds_on_hot_ratio", part.RdsOnHotRatio.V)
}

func resistanceMultiplier(s *situation, st *Step, e *entry) {
	_, path := s.m.mosfetOf(e)
	st.found("the entered curve at the junction temperature, "+curveWords, byCurves, path+".rds_on_curve")
}

const (
	curveWords = "held flat beyond its rows"
	byCurves   = "monotone cubic through the rows, F. N. Fritsch and J. Butland, SIAM J. Sci. Stat. Comput. 5 (1984) (from memory)"
)

// Transitions

var (
	riseOfCurrent = how("(Q_th1·R_on + L_s·I_1)/(V_dr − (V_th + V_pl1)/2)", byGateCharge)
	fallOfVoltage = how("Q_gd·R_on/(V_dr − V_pl1)", byGateCharge)
	riseOfVoltage = how("Q_gd·R_off/(V_pl2 − V_off)", byGateCharge)
	fallOfCurrent = how("(Q_th2·R_off + L_s·I_2)/((V_th + V_pl2)/2 − V_off)", byGateCharge)
	pathOn        = how("R_src + R_g,on + R_g", "the drive’s path to the gate")
	pathOff       = how("R_snk + R_g,off + R_g", "the drive’s path from the gate")
)

func currentRise(s *situation, st *Step, e *entry) {
	st.by(riseOfCurrent)
	st.threshold(s, "Q_th1", max(s.flow.Min, 0))
	st.note("R_on", s.m.gate.ResistanceOn, "Ω")
	st.given("L_s", "switch.l_source", s.m.gate.SourceInductor)
	st.note("I_1", max(s.flow.Min, 0), "A")
	st.given("V_dr", "drive.voltage", s.m.gate.On)
	st.given("V_th", "switch.v_threshold", s.m.gate.Threshold)
	st.plateau(s, "V_pl1", s.on.Plateau)
}

func voltageFall(s *situation, st *Step, e *entry) {
	st.by(fallOfVoltage)
	st.given("Q_gd", "switch.q_gd", s.m.gate.MillerCharge)
	st.note("R_on", s.m.gate.ResistanceOn, "Ω")
	st.given("V_dr", "drive.voltage", s.m.gate.On)
	st.plateau(s, "V_pl1", s.on.Plateau)
}

func voltageRise(s *situation, st *Step, e *entry) {
	st.by(riseOfVoltage)
	st.given("Q_gd", "switch.q_gd", s.m.gate.MillerCharge)
	st.note("R_off", s.m.gate.ResistanceOff, "Ω")
	st.plateau(s, "V_pl2", s.off.Plateau)
	st.given("V_off", "drive.voltage_off", s.m.gate.Off)
}

func currentFall(s *situation, st *Step, e *entry) {
	st.by(fallOfCurrent)
	st.threshold(s, "Q_th2", max(s.flow.Max, 0))
	st.note("R_off", s.m.gate.ResistanceOff, "Ω")
	st.given("L_s", "switch.l_source", s.m.gate.SourceInductor)
	st.note("I_2", max(s.flow.Max, 0), "A")
	st.given("V_th", "switch.v_threshold", s.m.gate.Threshold)
	st.plateau(s, "V_pl2", s.off.Plateau)
	st.given("V_off", "drive.voltage_off", s.m.gate.Off)
}

// plateau is an entry, unless it follows the current.
func (st *Step) plateau(s *situation, name string, volt float64) {
	if s.m.gate.PlateauCurrent == 0 {
		st.given(name, "switch.v_plateau", volt)
		return
	}
	st.note(name, volt, "V")
}

// threshold is the charge from threshold to plateau: an entry, unless it follows the
// current.
func (st *Step) threshold(s *situation, name string, current float64) {
	g := s.m.gate
	if g.PlateauCurrent == 0 {
		st.given(name, "switch.q_gs2", g.ThresholdCharge)
		return
	}
	st.note(name, g.ThresholdCharge*(current/g.PlateauCurrent), "C")
}

const byTransfer = "the straight transfer characteristic through the stated point"

var (
	plateauAt1   = how("V_th + (V_pl − V_th)·I_1/I_pl", byTransfer)
	plateauAt2   = how("V_th + (V_pl − V_th)·I_2/I_pl", byTransfer)
	thresholdAt1 = how("Q_gs2·I_1/I_pl", byTransfer)
	thresholdAt2 = how("Q_gs2·I_2/I_pl", byTransfer)
)

func plateauOn(s *situation, st *Step, e *entry) {
	st.plateauTerms(s, plateauAt1, "I_1", max(s.flow.Min, 0))
}
func plateauOff(s *situation, st *Step, e *entry) {
	st.plateauTerms(s, plateauAt2, "I_2", max(s.flow.Max, 0))
}
func thresholdOn(s *situation, st *Step, e *entry) {
	st.thresholdTerms(s, thresholdAt1, "I_1", max(s.flow.Min, 0))
}
func thresholdOff(s *situation, st *Step, e *entry) {
	st.thresholdTerms(s, thresholdAt2, "I_2", max(s.flow.Max, 0))
}

func (st *Step) plateauTerms(s *situation, m method, name string, current float64) {
	st.by(m)
	st.given("V_th", "switch.v_threshold", s.m.gate.Threshold)
	st.given("V_pl", "switch.v_plateau", s.m.gate.Plateau)
	st.note(name, current, "A")
	st.given("I_pl", "switch.v_plateau_current", s.m.gate.PlateauCurrent)
}

func (st *Step) thresholdTerms(s *situation, m method, name string, current float64) {
	st.by(m)
	st.given("Q_gs2", "switch.q_gs2", s.m.gate.ThresholdCharge)
	st.note(name, current, "A")
	st.given("I_pl", "switch.v_plateau_current", s.m.gate.PlateauCurrent)
}

func turnOnPath(s *situation, st *Step, e *entry) {
	d := s.m.design
	st.by(pathOn)
	st.given("R_src", "drive.r_source", d.Drive.RSource.V)
	st.given("R_g,on", "drive.r_gate_on", d.Drive.RGateOn.V)
	st.given("R_g", "switch.r_gate", d.Switch.RGate.V)
}

func turnOffPath(s *situation, st *Step, e *entry) {
	d := s.m.design
	st.by(pathOff)
	st.given("R_snk", "drive.r_sink", d.Drive.RSink.V)
	st.given("R_g,off", "drive.r_gate_off", d.Drive.RGateOff.V)
	st.given("R_g", "switch.r_gate", d.Switch.RGate.V)
}
