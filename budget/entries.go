package budget

// heat names the part whose temperature a loss raises.
type heat int8

const (
	noHeat        heat = -1
	switchHeat    heat = 0
	rectifierHeat heat = 1
	inductorHeat  heat = 2
)

// entry is one row of the ledger. Its power function returns the loss in W and, if
// an item is given, notes there the terms it used; one function does both, so the
// terms shown are those computed with. Its method is the formula of the loss in those
// terms; where a function takes another way, it says so to the item.
type entry struct {
	part, kind string
	heats      heat
	stage      bool     // the stage's own balance carries it
	follows    property // of its part's temperature, and in proportion
	power      func(s *situation, it *Item) float64
	method     method
}

// fixedEntries is the ledger without the series resistances, in its order. A new
// loss is one function in the package of its part and one row here.
var fixedEntries = []entry{
	{"switch", "conduction", switchHeat, true, ofChannel, switchConduction, how("I_sw^2·R_DS", byRMS)},
	{"switch", "turn_on", switchHeat, true, steady, turnOn, how("½·V_b·I_1·(t_ri + t_fv)·f", byGateCharge)},
	{"switch", "turn_off", switchHeat, true, steady, turnOff, how("½·V_b·I_2·t_fi·f + max(0, ½·V_b·I_2·t_rv − E_b)·f", byGateCharge+"; what the junctions store meanwhile is not lost yet")},
	{"switch", "output_charge", switchHeat, true, steady, outputCharge, how("E_x·f", byJunctions)},
	{"switch", "recovery", switchHeat, true, steady, switchRecovery, how("(V_b·(I_min·t_a + Q) − V_b·Q_b/3)·f", byTriangle)},
	{"rectifier", "conduction", rectifierHeat, true, ofRectifier, rectifierConduction, how("V_d·I_mean + r_d·I_re^2", "forward characteristic as a straight line: common practice")},
	{"rectifier", "dead_time", rectifierHeat, true, steady, deadTime, how("(|I_min|·V_1·t_on + I_2·V_2·t_off)·f", "forward line of the body diode: common practice")},
	{"rectifier", "recovery", rectifierHeat, true, steady, rectifierRecovery, how("V_b·Q_b/3·f", byTriangle)},
	{"rectifier", "leakage", rectifierHeat, true, ofLeakage, leakage, how("I_R·g/V_R·(d_1·V_b^2 + d_3·(V_b − V_rest)^2)", byLeakage)},
	{"inductor", "winding_dc", inductorHeat, true, ofCopper, windingDC, how("I_L^2·R_dc", byRMS)},
	{"inductor", "winding_ac", inductorHeat, true, ofCopper, windingAC, how("I_ac^2·F·R_dc", "P. L. Dowell, Effects of eddy currents in transformer windings, Proc. IEE 113 (1966), harmonic by harmonic")},
	{"inductor", "core", inductorHeat, true, ofCore, coreLoss, how("ct·V_e·k_i·ΔB^β·f^α·(d_1^(1 − α) + d_2^(1 − α))", bySteinmetz)},
	{"input_capacitor", "esr", noHeat, false, steady, inputESR, how("I_C^2·R_ESR", byRMS)},
	{"output_capacitor", "esr", noHeat, true, steady, outputESR, how("I_C^2·R_ESR", byRMS)},
	{"snubber", "rc", noHeat, true, steady, snubberLoss, how("C_sn·V_b^2·f", "½·C·V² is lost in the resistor at each charge and at each discharge")},
	{"drive", "gate", noHeat, false, steady, gateLoss, how("Q_g·(V_dr − V_off)·f", byGateDrive)},
	{"drive", "regulator", noHeat, false, steady, regulatorLoss, how("Q_g·f·max(V_s − (V_dr − V_off), 0)", "a linear regulator drops what the gates don't need")},
	{"controller", "supply", noHeat, false, steady, supplyLoss, how("I_q·V_s", "supply current at supply voltage")},
	{"controller", "fixed", noHeat, false, steady, fixedLoss, how("P_fix", "as entered")},
}

// Where the formulas come from.
const (
	byRMS        = "Joule’s law with the rms current"
	byGateCharge = "L. Balogh, Design and Application Guide for High Speed MOSFET Gate Drive Circuits, TI SLUA618 (from memory)"
	byGateDrive  = "the charge that the drive moves each period through its swing"
	byJunctions  = "balance of energy between the two junctions and the loop that feeds them; capacitance ∝ 1/√V is common practice"
	byTriangle   = "the reverse current as a triangle with the softness of JEDEC JESD282; its rise against the whole voltage"
	byLeakage    = "ST AN869 (exponential in temperature); proportional to voltage by common practice"
	bySteinmetz  = "K. Venkatachalam et al., Accurate prediction of ferrite core loss with nonsinusoidal waveforms using only Steinmetz parameters, IEEE COMPEL 2002"
)

// Row names one item of the ledger.
type Row struct{ Part, Kind string }

// Ledger returns the items of a design's budget in their order: what every design
// has, then its series resistances.
func Ledger(d *Design) []Row {
	var rows []Row
	for _, e := range fixedEntries {
		rows = append(rows, Row{e.part, e.kind})
	}
	for _, r := range d.Series {
		rows = append(rows, Row{layoutPart, r.Name})
	}
	return rows
}

const layoutPart = "layout"
