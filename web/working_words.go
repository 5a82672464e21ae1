package web

import (
	"strings"
	"unicode"
	"unicode/utf8"

	"lossbook/web/quantity"
)

// termWords name the quantities that stand between the entries and the losses.
var termWords = map[string]string{
	"V_in": "input voltage", "I_out": "load current", "T_a": "ambient",
	"T_j": "junction temperature", "T_L": "temperature of the inductor", "P_part": "loss in this part", "P_loss": "loss of the whole converter",
	"I_L": "mean inductor current", "I_s": "input current of the stage", "I_o": "output current of the stage", "P_stage": "loss of the stage",
	"P_aux": "power drawn from the output", "P_out": "output power",
	"P_switch": "losses of the switch", "P_rectifier": "losses of the rectifier", "P_inductor": "losses of the inductor", "P_input": "loss of the input capacitor",
	"P_output": "loss of the output capacitor", "P_snubber": "loss of the snubber", "P_drive": "losses of the gate drive", "P_controller": "losses of the controller",
	"P_layout": "losses of copper and shunts",
	"d_1":      "share of the period in which the switch conducts", "d_2": "share of the period in which the rectifier conducts",
	"d_3": "share of the period without inductor current", "t_3": "time without inductor current", "d": "share of the period in which the filtered current flows",
	"I_min": "lowest inductor current", "I_max": "highest inductor current", "I_1": "current at turn-on", "I_2": "current at turn-off",
	"I_sw": "rms current of the switch", "I_re": "rms current of the rectifier", "I_mean": "mean current of the rectifier", "I_rms": "rms current of the inductor",
	"I_C": "ripple current of the capacitor", "I_ac": "rms ripple of the inductor current", "Δλ": "swing of flux linkage",
	"V_b": "blocking voltage", "V_rest": "voltage of the switch at rest", "V_s": "supply voltage", "Q_g": "charge of all driven gates",
	"R_DS": "on-resistance at its temperature", "m_R": "exponent of its rise with temperature", "k_R": "multiplier of the on-resistance",
	"t_ri": "rise of the current", "t_fv": "fall of the voltage", "t_rv": "rise of the voltage", "t_fi": "fall of the current",
	"R_on": "resistance of the gate’s path, on", "R_off": "resistance of the gate’s path, off", "V_pl1": "plateau at turn-on", "V_pl2": "plateau at turn-off",
	"Q_th1": "charge from threshold to plateau at turn-on", "Q_th2": "charge from threshold to plateau at turn-off",
	"V_1": "drop in the dead time before on", "V_2": "drop in the dead time after off", "V_d": "threshold of the diode at its temperature",
	"r_d": "slope of the diode at its temperature", "g": "growth of the leakage with temperature",
	"k": "slope of the recovering current", "Q": "recovered charge", "Q_b": "charge recovered while the voltage rises", "t_a": "time until the reverse current peaks",
	"Q_0": "stated recovery charge", "Q_cap": "capacitive charge in it",
	"E_b": "energy of turning on from the blocking voltage", "E_x": "energy of turning on", "E_0": "energy of turning on at rest, with the ringing",
	"E_r": "energy of turning on at rest", "V_x": "voltage of the switch when it turns on", "τ": "half a period of the ringing", "L_0": "inductance at no current",
	"Q_t": "charge of both junctions", "Q_sw": "charge of the switch when blocking", "Q_re": "charge of the rectifier when blocking",
	"E_sw": "energy in the switch when blocking", "E_re": "energy in the rectifier when blocking",
	"E_sx": "energy in the switch when it turns on", "V_x2": "voltage of the rectifier then", "Q_x2": "charge of the rectifier then", "E_x2": "energy in the rectifier then",
	"E_sr": "energy in the switch at rest", "V_r2": "voltage of the rectifier at rest", "Q_r2": "charge of the rectifier at rest", "E_r2": "energy in the rectifier at rest",
	"R_dc": "winding resistance at its temperature", "F": "mean factor of the winding’s resistance", "ct": "temperature factor of the core",
	"k_i": "coefficient of the core for straight segments", "c_α": "its integral over a sine", "k_ref": "coefficient from the reference loss",
	"ΔB": "swing of flux density", "Δi": "ripple that stands for the flux",
}

// feedsBack is said of a quantity that is solved together with what it causes.
const feedsBack = "It raises the losses that cause it; both are solved together, to 10 digits."

// showing writes a figure with its unit in the digits of a working.
func showing(v float64, unit quantity.Unit) string { return quantityOf(v, unit, shownDigits) }

// workingTitle names the figure.
func workingTitle(it Item) string {
	if it.Part == "layout" {
		return "Copper and shunts, " + it.Kind
	}
	title := capital(partWords[it.Part])
	if words := itemWords(it); words != partWords[it.Part] {
		return title + ", " + words
	}
	return title
}

// sentence begins with a capital letter, and ends.
func sentence(words string) string {
	if words == "" {
		return ""
	}
	return strings.TrimSuffix(capital(words), ".") + "."
}

func capital(words string) string {
	first, size := utf8.DecodeRuneInString(words)
	return string(unicode.ToUpper(first)) + words[size:]
}
