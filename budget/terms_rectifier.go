package budget

import "lossbook/budget/device"

var (
	dropAt1 = how("V_SD + r_SD·|I_min|", byDataSheet)
	dropAt2 = how("V_SD + r_SD·I_2", byDataSheet)
)

// firstDrop is that of the switch's own body diode where a reversed current flows
// back through it.
func firstDrop(s *situation, st *Step, e *entry) {
	st.by(dropAt1)
	if s.flow.Min < 0 {
		st.body(s.m.switchBody, "switch")
	} else {
		st.body(s.m.rectifierBody, "sync_switch")
	}
	st.note("I_min", s.flow.Min, "A")
}

func secondDrop(s *situation, st *Step, e *entry) {
	st.by(dropAt2)
	st.body(s.m.rectifierBody, "sync_switch")
	st.note("I_2", max(s.flow.Max, 0), "A")
}

func (st *Step) body(d device.BodyDiode, path string) {
	st.given("V_SD", path+".v_sd", d.Voltage)
	st.given("r_SD", path+".r_sd", d.Resistance)
}

var (
	voltAt   = how("V_F0 + s_V·(T_j − 25)", byDataSheet+", moved with temperature")
	ohmAt    = how("r_25·(1 + s_r·(T_j − 25))", byDataSheet+", moved with temperature")
	growthAt = how("2^((T_j − T_IR)/ΔT_2)", byLeakage)
)

func forwardVolt(s *situation, st *Step, e *entry) {
	st.by(voltAt)
	st.given("V_F0", "diode.v_f0", s.m.forward.Threshold)
	st.given("s_V", "diode.v_f0_slope", s.m.forward.ThresholdSlope)
	st.note("T_j", s.temperature[rectifierHeat], "°C")
}

func forwardOhm(s *situation, st *Step, e *entry) {
	st.by(ohmAt)
	st.given("r_25", "diode.r_d", s.m.forward.Resistance)
	st.given("s_r", "diode.r_d_slope", s.m.forward.ResistanceSlope)
	st.note("T_j", s.temperature[rectifierHeat], "°C")
}

func leakageGrowth(s *situation, st *Step, e *entry) {
	st.by(growthAt)
	st.note("T_j", s.temperature[rectifierHeat], "°C")
	st.given("T_IR", "diode.i_leak_temperature", s.m.leakage.Temperature)
	st.given("ΔT_2", "diode.i_leak_doubling", s.m.leakage.Doubling)
}

// Recovery

const byRecovery = "scaled from the stated current and slope; exponents of 0.5 are common practice"

var (
	slopeAtTurnOn = how("I_min·(V_dr − (V_th + V_pl)/2)/(Q_gs2·R_on + L_s·I_min)", byGateCharge+"; plateau and charge as stated")
	chargeScaled  = how("Q_0·(I_min/I_Qrr)^a·(k/k_Qrr)^b", byRecovery)
	chargeBounded = how("min(Q_0·(I_min/I_Qrr)^a·(k/k_Qrr)^b, I_min·τ_rr)", byRecovery+"; at most what the lifetime stores")
	chargeOfBody  = how("min(Q_0·(I_min/I_Qrr)^a·(k/k_Qrr)^b, I_min·τ_rr)·(1 − exp(−t_on/τ_rr))", byRecovery+"; at most what the lifetime stores, and what the dead time lets it")
	tailOfCharge  = how("Q·S/(1 + S)", byTriangle)
	riseToPeak    = how("√(2·Q/(k·(1 + S)))", byTriangle)
	chargeStated  = how("Q_rr", "the data sheet")
	chargeLess    = how("max(0, Q_rr − Q_cap)", "the stated charge less what charges the junction, which the output charge holds")
)

func (m *Model) rectifierPath() string {
	if m.sync {
		return "sync_switch"
	}
	return "diode"
}

func slopeOfRecovery(s *situation, st *Step, e *entry) {
	g := s.m.gate
	st.by(slopeAtTurnOn)
	st.note("I_min", s.flow.Min, "A")
	st.given("V_dr", "drive.voltage", g.On)
	st.given("V_th", "switch.v_threshold", g.Threshold)
	st.given("V_pl", "switch.v_plateau", g.Plateau)
	st.given("Q_gs2", "switch.q_gs2", g.ThresholdCharge)
	st.note("R_on", g.ResistanceOn, "Ω")
	st.given("L_s", "switch.l_source", g.SourceInductor)
}

func recoveredCharge(s *situation, st *Step, e *entry) {
	r, path := s.m.recovery, s.m.rectifierPath()
	st.by(chargeScaled)
	st.note("Q_0", r.Charge, "C")
	st.note("I_min", s.flow.Min, "A")
	st.given("I_Qrr", path+".q_rr_current", r.Current)
	st.given("a", path+".q_rr_current_exponent", r.CurrentExponent)
	st.note("k", s.slope, "A/s")
	st.given("k_Qrr", path+".q_rr_didt", r.Slope)
	st.given("b", path+".q_rr_didt_exponent", r.SlopeExponent)
	if r.Tau == 0 {
		return
	}
	st.by(chargeBounded)
	st.given("τ_rr", path+".q_rr_tau", r.Tau)
	if r.DeadTimeBounds {
		st.by(chargeOfBody)
		st.given("t_on", "drive.dead_time_on", r.DeadTime)
	}
}

func recoveryTail(s *situation, st *Step, e *entry) {
	st.by(tailOfCharge)
	st.note("Q", s.reverse.Charge, "C")
	st.given("S", s.m.rectifierPath()+".softness", s.m.recovery.Softness)
}

func recoveryRise(s *situation, st *Step, e *entry) {
	st.by(riseToPeak)
	st.note("Q", s.reverse.Charge, "C")
	st.note("k", s.slope, "A/s")
	st.given("S", s.m.rectifierPath()+".softness", s.m.recovery.Softness)
}

func recoveryEntered(s *situation, st *Step, e *entry) {
	r := s.m.recoveryOfRectifier()
	st.by(chargeStated)
	st.given("Q_rr", s.m.rectifierPath()+".q_rr", r.QRR.V)
	if r.QRRVoltage.V > 0 {
		st.by(chargeLess)
		st.note("Q_cap", s.m.rectifierCharge.At(r.QRRVoltage.V), "C")
	}
}

func recoveryCapacitive(s *situation, st *Step, e *entry) {
	st.junction(s, rectifierSide, false, "V_Qrr", s.m.recoveryOfRectifier().QRRVoltage.V)
	st.Terms[len(st.Terms)-1].Path = s.m.rectifierPath() + ".q_rr_voltage"
}
