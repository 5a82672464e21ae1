package budget

import "lossbook/budget/stage"

// definitions say how the terms of the losses come about themselves: a row a term.
// Like the losses they note what they use, and what they note may have a row here.
// The entry tells whose term it is, where parts share a letter.
var definitions = map[string]func(s *situation, st *Step, e *entry){
	"P_out": outputPower, "P_switch": heatOfPart, "P_rectifier": heatOfPart, "P_inductor": heatOfPart, "P_input": heatOfPart, "P_output": heatOfPart,
	"P_snubber": heatOfPart, "P_drive": heatOfPart, "P_controller": heatOfPart, "P_layout": heatOfPart,
	"T_j": temperatureRise, "T_L": temperatureRise, "P_part": heatOfPart, "P_loss": wholeLoss,

	"I_L": meanCurrent, "I_s": stageCurrent, "I_o": outputCurrent, "P_stage": stageLoss, "P_aux": auxiliaryPower,
	"d_1": balanced, "d_2": balanced, "I_min": balanced, "I_max": balanced, "I_1": lowest, "I_2": highest, "d_3": restShare, "t_3": restingTime,
	"I_sw": switchRMS, "I_re": rectifierRMS, "I_mean": rectifierMean, "I_rms": inductorRMS, "I_C": capacitorRMS, "d": filteredShare, "I_ac": harmonicRMS, "Δλ": linkageSwing,
	"V_b": voltageWhenOff, "V_rest": restVoltage, "V_s": supplyVoltage, "Q_g": allGates,

	"R_DS": onResistance, "m_R": resistanceExponent, "k_R": resistanceMultiplier,
	"t_ri": currentRise, "t_fv": voltageFall, "t_rv": voltageRise, "t_fi": currentFall,
	"R_on": turnOnPath, "R_off": turnOffPath, "V_pl1": plateauOn, "V_pl2": plateauOff, "Q_th1": thresholdOn, "Q_th2": thresholdOff,
	"V_1": firstDrop, "V_2": secondDrop, "V_d": forwardVolt, "r_d": forwardOhm, "g": leakageGrowth,
	"k": slopeOfRecovery, "Q": recoveredCharge, "Q_b": recoveryTail, "t_a": recoveryRise, "Q_0": recoveryEntered, "Q_cap": recoveryCapacitive,

	"E_b": energyAtBlocking, "E_x": energyAtTurnOn, "E_0": energyAtRest, "E_r": energyFromRest, "V_x": voltageAtTurnOn, "τ": ringingTime, "L_0": inductanceAtZero,
	"Q_t": bothCharges, "Q_sw": holds(switchSide, false, "V_b"), "Q_re": holds(rectifierSide, false, "V_b"), "E_re": holds(rectifierSide, true, "V_b"),
	"E_sw": holds(switchSide, true, "V_b"), "E_sx": holds(switchSide, true, "V_x"), "E_sr": holds(switchSide, true, "V_rest"),
	"V_x2": restOf("V_x"), "Q_x2": holds(rectifierSide, false, "V_x2"), "E_x2": holds(rectifierSide, true, "V_x2"),
	"V_r2": restOf("V_rest"), "Q_r2": holds(rectifierSide, false, "V_r2"), "E_r2": holds(rectifierSide, true, "V_r2"),

	"R_dc": copperResistance, "F": windingFactor, "ct": temperatureFactor, "k_i": coreCoefficient, "c_α": sineIntegral, "k_ref": catalogueCoefficient,
	"ΔB": fluxSwing, "Δi": rippleAsFlux,
}

// Where the quantities between the entries and the losses come from.
const (
	byBalance   = "R. W. Erickson, D. Maksimović, Fundamentals of Power Electronics, chapters 2, 3 and 5"
	byShares    = "the same, appendix on rms values of commonly observed waveforms"
	byThermal   = "thermal resistances, solved together with the losses"
	byCopper    = "IEC 60028"
	byDataSheet = "straight line of the data sheet"
)

var (
	riseOfPart  = how("T_a + θ_enc·P_loss + θ_part·P_part", byThermal)
	partOfTotal = "the sum of this part’s losses at this point"
)

func temperatureRise(s *situation, st *Step, e *entry) {
	st.by(riseOfPart)
	st.Solved = true
	st.note("T_a", s.frame.Ambient, "°C")
	st.given("θ_enc", "enclosure_theta", s.m.enclosure)
	st.note("P_loss", s.loss, "W")
	st.given("θ_part", s.m.thetaPath(e.heats), s.m.theta[e.heats])
	st.note("P_part", s.heat[e.heats], "W")
}

func (m *Model) thetaPath(part heat) string {
	switch {
	case part == switchHeat:
		return "switch.theta_ja"
	case part == inductorHeat:
		return "inductor.theta_ja"
	case m.sync:
		return "sync_switch.theta_ja"
	}
	return "diode.theta_ja"
}

func heatOfPart(s *situation, st *Step, e *entry) { st.found(partOfTotal, "") }
func wholeLoss(s *situation, st *Step, e *entry)  { st.found("the sum of all losses at this point", "") }
func stageLoss(s *situation, st *Step, e *entry) {
	st.found("the sum of the stage’s losses at this point: all but those of drive, controller and input capacitor", "")
}

var powerOut = how("V_out·I_out", "the load")

func outputPower(s *situation, st *Step, e *entry) {
	st.by(powerOut)
	st.given("V_out", "output.voltage", s.m.vout)
	st.note("I_out", s.frame.Iout, "A")
}

// Currents

var meanCurrents = map[string]method{
	"boost":      how("I_s", byBalance),
	"buck":       how("I_o", byBalance),
	"buck_boost": how("I_s + I_o", byBalance),
}

func meanCurrent(s *situation, st *Step, e *entry) {
	st.by(meanCurrents[s.m.topology.Name])
	if s.m.topology.Name != "buck" {
		st.note("I_s", s.is, "A")
	}
	if s.m.topology.Name != "boost" {
		st.note("I_o", s.frame.io, "A")
	}
}

var inputBalance = how("(V_out·I_o + P_stage)/V_in", "balance of power: what the stage loses is drawn from its input too")

func stageCurrent(s *situation, st *Step, e *entry) {
	st.by(inputBalance)
	st.given("V_out", "output.voltage", s.m.vout)
	st.note("I_o", s.frame.io, "A")
	st.note("P_stage", s.guess, "W")
	st.note("V_in", s.frame.Vin, "V")
}

var outputBalance = how("I_out + P_aux/V_out", "balance of charge, with what drive and controller draw from the output")

func outputCurrent(s *situation, st *Step, e *entry) {
	st.by(outputBalance)
	st.note("I_out", s.frame.Iout, "A")
	st.note("P_aux", s.m.fedFromOutput(s.frame), "W")
	st.given("V_out", "output.voltage", s.m.vout)
}

func auxiliaryPower(s *situation, st *Step, e *entry) {
	st.found("what drive and controller draw from the output, where they are fed from it", "", "drive.fed_from", "controller.fed_from")
}

// balanced is what the flux balance gives as a whole.
func balanced(s *situation, st *Step, e *entry) {
	words := "from the balance of flux with the drops at the mean current: the inductor current rises while the switch conducts and falls for the rest of the period"
	if s.mode == DCM {
		words = "from the balance of flux, discontinuous: the inductor current rises from 0 while the switch conducts, falls back to it and rests"
	}
	st.found(words, byBalance, "inductor.inductance", "frequency")
}

func lowest(s *situation, st *Step, e *entry) {
	st.found("the lowest inductor current, from the balance of flux", byBalance, "inductor.inductance")
}
func highest(s *situation, st *Step, e *entry) {
	st.found("the peak inductor current, from the balance of flux", byBalance, "inductor.inductance")
}

func linkageSwing(s *situation, st *Step, e *entry) {
	st.found("voltage over time on the inductor while the switch conducts, from the balance of flux", byBalance, "inductor.inductance")
}

var restOfPeriod = how("1 − d_1 − d_2", "the period is the sum of its parts")

func restShare(s *situation, st *Step, e *entry) {
	if s.mode == CCM {
		st.found("in continuous conduction there is no time without current", byBalance)
		return
	}
	st.by(restOfPeriod)
	st.shares(s)
}

var restInTime = how("max(0, (1 − d_1 − d_2)/f)", "the period is the sum of its parts")

func restingTime(s *situation, st *Step, e *entry) {
	st.by(restInTime)
	st.shares(s)
	st.given("f", "frequency", s.m.frequency)
}

func (st *Step) shares(s *situation) {
	st.note("d_1", s.flow.D1, "")
	st.note("d_2", s.flow.D2, "")
}

var (
	rmsOfRise  = how("√(d_1·(I_min^2 + I_min·I_max + I_max^2)/3)", byShares)
	rmsOfFall  = how("√(d_2·(I_min^2 + I_min·I_max + I_max^2)/3)", byShares)
	rmsOfWhole = how("√((d_1 + d_2)·(I_min^2 + I_min·I_max + I_max^2)/3)", byShares)
	meanOfFall = how("d_2·(I_min + I_max)/2", byShares)
)

func (st *Step) extremes(s *situation) {
	st.note("I_min", s.flow.Min, "A")
	st.note("I_max", s.flow.Max, "A")
}

func switchRMS(s *situation, st *Step, e *entry) {
	st.by(rmsOfRise)
	st.note("d_1", s.flow.D1, "")
	st.extremes(s)
}

func rectifierRMS(s *situation, st *Step, e *entry) {
	st.by(rmsOfFall)
	st.note("d_2", s.flow.D2, "")
	st.extremes(s)
}

func rectifierMean(s *situation, st *Step, e *entry) {
	st.by(meanOfFall)
	st.note("d_2", s.flow.D2, "")
	st.extremes(s)
}

func inductorRMS(s *situation, st *Step, e *entry) {
	st.by(rmsOfWhole)
	st.shares(s)
	st.extremes(s)
}

var rippleOfShare = how("√(d·(1 − d)·((I_min + I_max)/2)^2 + d·(I_max − I_min)^2/12)", byShares+": the square of the rms less that of the mean")

// capacitorRMS is what is left of the current that the capacitor filters when its
// mean has gone through.
func capacitorRMS(s *situation, st *Step, e *entry) {
	st.by(rippleOfShare)
	st.note("d", s.of(s.filteredBy(e)).D, "")
	st.extremes(s)
}

// filteredBy is the branch whose current the entry's capacitor filters.
func (s *situation) filteredBy(e *entry) stage.Branch {
	if e.part == "input_capacitor" {
		return s.m.topology.InputSees
	}
	return s.m.topology.OutputSees
}

var (
	shareOfRise  = how("d_1", "the capacitor filters the switch’s current")
	shareOfFall  = how("d_2", "the capacitor filters the rectifier’s current")
	shareOfWhole = how("d_1 + d_2", "the capacitor filters the inductor’s current")
	wholePeriod  = how("1", "the capacitor filters the inductor’s current, which flows all the time")
)

func filteredShare(s *situation, st *Step, e *entry) {
	switch branch := s.filteredBy(e); {
	case branch == stage.Switch:
		st.by(shareOfRise)
		st.note("d_1", s.flow.D1, "")
	case branch == stage.Rectifier:
		st.by(shareOfFall)
		st.note("d_2", s.flow.D2, "")
	case s.mode == DCM:
		st.by(shareOfWhole)
		st.shares(s)
	default:
		st.by(wholePeriod)
	}
}

func harmonicRMS(s *situation, st *Step, e *entry) {
	st.found("rms of harmonics 1 to 50 of the inductor current, a triangle between its extremes", "the triangle’s Fourier series")
}

// Voltages and what the drive is fed from

var (
	blockingVoltages = map[string]method{"boost": how("V_out", byBalance), "buck": how("V_in", byBalance), "buck_boost": how("V_in + V_out", byBalance)}
	restVoltages     = map[string]method{"boost": how("V_in", byBalance), "buck": how("V_in − V_out", byBalance), "buck_boost": how("V_in", byBalance)}
)

func voltageWhenOff(s *situation, st *Step, e *entry) { st.voltages(s, blockingVoltages) }
func restVoltage(s *situation, st *Step, e *entry)    { st.voltages(s, restVoltages) }

// voltages takes the formula of the topology with those of the two voltages that it
// holds.
func (st *Step) voltages(s *situation, methods map[string]method) {
	st.by(methods[s.m.topology.Name])
	for _, name := range st.Formula.Names() {
		if name == "V_in" {
			st.note(name, s.frame.Vin, "V")
		} else {
			st.given(name, "output.voltage", s.m.vout)
		}
	}
}

func supplyVoltage(s *situation, st *Step, e *entry) {
	st.found("the voltage of the place that "+e.part+" is fed from", "", e.part+".fed_from")
}

var gatesOfBoth = how("Q_g1 + Q_g2", "both gates are driven once each period")
var gateOfSwitch = how("Q_g1", "one gate is driven once each period")

func allGates(s *situation, st *Step, e *entry) {
	st.by(gateOfSwitch)
	st.given("Q_g1", "switch.q_g", s.m.design.Switch.QG.V)
	if s.m.sync {
		st.by(gatesOfBoth)
		st.given("Q_g2", "sync_switch.q_g", s.m.design.SyncSwitch.QG.V)
	}
}
