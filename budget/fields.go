package budget

// Kind is the kind of entry a field takes.
type Kind uint8

// The kinds of entries.
const (
	Number Kind = iota
	Text
	Choice
	Rows // a Curve
)

// Domain is the set of numbers a field allows.
type Domain uint8

// The domains of numbers; limits beyond these stand in Validate.
const (
	AnyNumber Domain = iota
	Positive
	NotNegative
	NotPositive
)

// Field is one row of the table that names, form, validation, defaults and API
// description are read from.
type Field struct {
	Path     string   // JSON path from the design's root: "switch.rds_on"
	Key      string   // the last name of the path: "rds_on"
	Kind     Kind     //
	Unit     string   // of the stored value, "" for a plain number
	Symbol   string   // base and subscript apart by "_": "R_DS(on)"
	Name     string   // a short label that stands under its part's title
	Where    string   // where it is found, one line
	Required bool     // within its part; Part.Required says whether the part is
	Default  float64  // stands behind an absent number
	Domain   Domain   //
	Below    float64  // upper limit, inclusive, when not 0
	Options  []Option // of a Choice; the first is the default of an absent one
	XUnit    string   // of Rows: unit of x; Unit is that of y
	XName    string   // of Rows: what x and y are
	YName    string
}

// Option is one value of a choice, as the file writes it and as a person reads
// it.
type Option struct{ Value, Label string }

// Part is a group of fields: an object of the design file.
type Part struct {
	Path   string // "" for the design's own fields
	Name   string // its title on a sheet
	Of     string // the part of the loss it belongs to: "switch", "inductor", …
	List   bool   // an array of objects: series_resistances
	Needed bool   // no design does without; diode and sync_switch depend on the rectifier
	Fields []Field
}

// Parts is the whole table, in the order of a schematic. A test compares it
// with the members of Design.
func Parts() []Part { return parts }

// FieldAt returns the row of the table for a JSON path; indices of a list are
// ignored ("series_resistances[2].name").
func FieldAt(path string) (Field, bool) {
	f, ok := fieldIndex[withoutIndices(path)]
	return f, ok
}

var parts = placed([]Part{
	{Path: "", Name: "Stage", Fields: []Field{
		{Key: "name", Kind: Text, Name: "Name", Where: "what this converter is for", Required: true},
		{Key: "note", Kind: Text, Name: "Note", Where: "anything a reader should know"},
		{Key: "topology", Kind: Choice, Name: "Topology", Where: "how switch, rectifier and inductor are connected", Required: true, Options: topologyOptions()},
		{Key: "rectifier", Kind: Choice, Name: "Rectifier", Where: "a diode, or a MOSFET driven in its place", Required: true,
			Options: []Option{{"diode", "diode"}, {"synchronous", "synchronous MOSFET"}}},
		{Key: "light_load", Kind: Choice, Name: "At light load", Where: "whether the controller lets the inductor current reverse (synchronous only)",
			Options: []Option{{"forced", "forced continuous"}, {"diode_emulation", "diode emulation"}}},
		{Key: "frequency", Unit: "Hz", Symbol: "f", Name: "Switching frequency", Where: "set at the controller", Required: true, Domain: Positive},
		{Key: "input.min", Unit: "V", Symbol: "V_in", Name: "Input, lowest", Where: "the supply's lowest voltage at the converter", Required: true, Domain: Positive},
		{Key: "input.nominal", Unit: "V", Symbol: "V_in", Name: "Input, nominal", Where: "the supply's usual voltage", Required: true, Domain: Positive},
		{Key: "input.max", Unit: "V", Symbol: "V_in", Name: "Input, highest", Where: "the supply's highest voltage", Required: true, Domain: Positive},
		{Key: "output.voltage", Unit: "V", Symbol: "V_out", Name: "Output voltage", Where: "magnitude, also of a negative rail", Required: true, Domain: Positive},
		{Key: "output.current", Unit: "A", Symbol: "I_out", Name: "Full load", Where: "100 % of the load grid", Required: true, Domain: Positive},
		{Key: "ambient", Unit: "°C", Symbol: "T_a", Name: "Ambient", Where: "air around the enclosure, or around the board without one", Default: 25},
		{Key: "enclosure_theta", Unit: "K/W", Symbol: "θ_enc", Name: "Enclosure to ambient", Where: "rise of the air at the parts per watt of the whole loss", Domain: NotNegative},
	}},
	{Path: "switch", Name: "Switch", Of: "switch", Needed: true, Fields: mosfetFields()},
	{Path: "diode", Name: "Diode", Of: "rectifier", Fields: diodeFields()},
	{Path: "sync_switch", Name: "Synchronous rectifier", Of: "rectifier", Fields: mosfetFields()},
	{Path: "inductor", Name: "Inductor", Of: "inductor", Needed: true, Fields: []Field{
		partName("value, type and size"),
		{Key: "inductance", Unit: "H", Symbol: "L", Name: "Inductance", Where: "at no current", Required: true, Domain: Positive},
		{Key: "i_sat", Unit: "A", Symbol: "I_sat", Name: "Saturation current", Where: "the current at which the stated drop is reached", Domain: NotNegative},
		{Key: "sat_drop", Symbol: "δ_sat", Name: "Drop at saturation", Where: "0.3 for a current given at 30 % drop", Domain: NotNegative},
		{Key: "l_curve", Kind: Rows, Unit: "H", XUnit: "A", XName: "current", YName: "inductance", Symbol: "L_(i)", Name: "Inductance over current", Where: "curve in the data sheet; takes precedence over inductance and saturation current"},
		{Key: "i_rms_rating", Unit: "A", Symbol: "I_rms", Name: "Rated rms current", Where: "the current for the stated temperature rise", Domain: NotNegative},
		{Key: "dcr", Unit: "Ω", Symbol: "R_dc", Name: "Winding resistance", Where: "at 20 °C; typical, or maximum for the worst case", Required: true, Domain: Positive},
		{Key: "ac_curve", Kind: Rows, Unit: "", XUnit: "Hz", XName: "frequency", YName: "resistance over dc", Symbol: "F_(f)", Name: "AC resistance factor", Where: "measured or from the maker's curve; takes precedence over the winding"},
		{Key: "theta_ja", Unit: "K/W", Symbol: "θ_L", Name: "Winding to ambient", Where: "temperature rise over the loss that causes it", Domain: NotNegative},
		{Key: "t_max", Unit: "°C", Symbol: "T_max", Name: "Highest temperature", Where: "operating range, self-heating included", Default: 125},
	}},
	{Path: "inductor.winding", Name: "Winding", Of: "inductor", Fields: []Field{
		{Key: "conductor", Kind: Choice, Name: "Conductor", Where: "round wire or foil", Required: true, Options: []Option{{"round", "round wire"}, {"foil", "foil"}}},
		{Key: "diameter", Unit: "m", Symbol: "d", Name: "Wire diameter", Where: "bare copper; for round wire", Domain: Positive},
		{Key: "thickness", Unit: "m", Symbol: "h", Name: "Foil thickness", Where: "for foil", Domain: Positive},
		{Key: "layers", Symbol: "m", Name: "Layers", Where: "in one winding section, counted from the face without field", Required: true, Domain: Positive},
		{Key: "porosity", Symbol: "η", Name: "Porosity", Where: "share of the layer's width that is copper", Default: 1, Domain: Positive, Below: 1},
	}},
	{Path: "inductor.core", Name: "Core", Of: "inductor", Fields: []Field{
		{Key: "reference_power", Unit: "W", Symbol: "P_ref", Name: "Reference loss", Where: "of a catalogue inductor, at a sine of reference frequency and ripple", Domain: NotNegative},
		{Key: "reference_frequency", Unit: "Hz", Symbol: "f_ref", Name: "Reference frequency", Where: "of that loss", Domain: Positive},
		{Key: "reference_ripple", Unit: "A", Symbol: "Δi_ref", Name: "Reference ripple", Where: "peak to peak, of that loss", Domain: Positive},
		{Key: "volume", Unit: "m³", Symbol: "V_e", Name: "Effective volume", Where: "core data sheet", Domain: Positive},
		{Key: "area", Unit: "m²", Symbol: "A_e", Name: "Effective area", Where: "core data sheet", Domain: Positive},
		{Key: "turns", Symbol: "N", Name: "Turns", Where: "of the winding", Domain: Positive},
		{Key: "k", Symbol: "k", Name: "Steinmetz k", Where: "for W/m³, Hz and tesla amplitude", Domain: NotNegative},
		{Key: "alpha", Symbol: "α", Name: "Steinmetz α", Where: "exponent of the frequency", Required: true, Domain: Positive, Below: 10},
		{Key: "beta", Symbol: "β", Name: "Steinmetz β", Where: "exponent of the flux density", Required: true, Domain: Positive, Below: 10},
		{Key: "ct0", Symbol: "ct_0", Name: "Temperature factor, ct0", Where: "factor = ct0 − ct1·T + ct2·T², T in °C; all three or none"},
		{Key: "ct1", Unit: "1/K", Symbol: "ct_1", Name: "Temperature factor, ct1", Where: "see ct0"},
		{Key: "ct2", Unit: "1/K²", Symbol: "ct_2", Name: "Temperature factor, ct2", Where: "see ct0"},
	}},
	{Path: "input_capacitor", Name: "Input capacitor", Of: "input_capacitor", Fields: capacitorFields()},
	{Path: "output_capacitor", Name: "Output capacitor", Of: "output_capacitor", Fields: capacitorFields()},
	{Path: "snubber", Name: "Snubber", Of: "snubber", Fields: []Field{
		{Key: "capacitance", Unit: "F", Symbol: "C_sn", Name: "Snubber capacitor", Where: "charged and discharged through its resistor each cycle", Required: true, Domain: Positive},
	}},
	{Path: "drive", Name: "Gate drive", Of: "drive", Needed: true, Fields: []Field{
		{Key: "voltage", Unit: "V", Symbol: "V_dr", Name: "Drive voltage", Where: "gate high, above the source", Required: true, Domain: Positive},
		{Key: "voltage_off", Unit: "V", Symbol: "V_off", Name: "Gate voltage when off", Where: "0, or negative", Domain: NotPositive},
		{Key: "r_source", Unit: "Ω", Symbol: "R_src", Name: "Driver, sourcing", Where: "pull-up resistance of the driver", Required: true, Domain: Positive},
		{Key: "r_sink", Unit: "Ω", Symbol: "R_snk", Name: "Driver, sinking", Where: "pull-down resistance of the driver", Required: true, Domain: Positive},
		{Key: "r_gate_on", Unit: "Ω", Symbol: "R_g,on", Name: "Gate resistor, on", Where: "in the path that turns on", Domain: NotNegative},
		{Key: "r_gate_off", Unit: "Ω", Symbol: "R_g,off", Name: "Gate resistor, off", Where: "in the path that turns off", Domain: NotNegative},
		{Key: "dead_time_on", Unit: "s", Symbol: "t_d,on", Name: "Dead time before on", Where: "both off before the switch turns on (synchronous)", Domain: NotNegative},
		{Key: "dead_time_off", Unit: "s", Symbol: "t_d,off", Name: "Dead time after off", Where: "both off after the switch turned off (synchronous)", Domain: NotNegative},
		{Key: "fed_from", Kind: Choice, Name: "Fed from", Where: "a rail of its own, or a regulator from input or output",
			Options: []Option{{"rail", "rail of its own"}, {"input", "input"}, {"output", "output"}}},
	}},
	{Path: "controller", Name: "Controller", Of: "controller", Fields: []Field{
		{Key: "current", Unit: "A", Symbol: "I_q", Name: "Supply current", Where: "while switching, without the gate's", Domain: NotNegative},
		{Key: "fed_from", Kind: Choice, Name: "Fed from", Where: "what its supply pin is connected to", Options: []Option{{"input", "input"}, {"output", "output"}}},
		{Key: "fixed_loss", Unit: "W", Symbol: "P_fix", Name: "Other fixed loss", Where: "dividers, indicators: drawn from the input", Domain: NotNegative},
		{Key: "duty_max", Symbol: "D_max", Name: "Highest duty", Where: "the controller's limit", Default: 1, Domain: Positive, Below: 1},
		{Key: "on_time_min", Unit: "s", Symbol: "t_on,min", Name: "Shortest on-time", Where: "the controller's limit", Domain: NotNegative},
	}},
	{Path: "series_resistances", Name: "Copper and shunts", Of: "layout", List: true, Fields: []Field{
		{Key: "name", Kind: Text, Name: "Name", Where: "what it is; its row in the ledger", Required: true},
		{Key: "location", Kind: Choice, Name: "Carries the current of", Where: "which branch it lies in", Required: true,
			Options: []Option{{"input", "input"}, {"inductor", "inductor"}, {"switch", "switch"}, {"rectifier", "rectifier"}, {"output", "output"}}},
		{Key: "resistance", Unit: "Ω", Symbol: "R", Name: "Resistance", Where: "at working temperature", Required: true, Domain: NotNegative},
	}},
})

func partName(where string) Field {
	return Field{Key: "part", Kind: Text, Name: "Part", Where: where}
}

func mosfetFields() []Field {
	return append([]Field{
		partName("what it is"),
		{Key: "vds_rating", Unit: "V", Symbol: "V_DS", Name: "Rated voltage", Where: "drain-source breakdown, absolute maximum", Required: true, Domain: Positive},
		{Key: "id_rating", Unit: "A", Symbol: "I_D", Name: "Rated current", Where: "continuous, at the case temperature you can hold", Domain: NotNegative},
		{Key: "rds_on", Unit: "Ω", Symbol: "R_DS(on)", Name: "On-resistance", Where: "at 25 °C and the drive voltage used", Required: true, Domain: Positive},
		{Key: "rds_on_hot_ratio", Symbol: "k_150", Name: "On-resistance, hot over cold", Where: "150 °C over 25 °C, normalised curve", Default: 1, Domain: Positive},
		{Key: "rds_on_curve", Kind: Rows, Unit: "", XUnit: "°C", XName: "junction temperature", YName: "multiplier", Symbol: "k_(T)", Name: "On-resistance over temperature", Where: "normalised curve; takes precedence over the hot ratio"},
		{Key: "v_threshold", Unit: "V", Symbol: "V_th", Name: "Threshold", Where: "gate threshold, typical", Required: true, Domain: Positive},
		{Key: "v_plateau", Unit: "V", Symbol: "V_pl", Name: "Plateau", Where: "flat part of the gate-charge curve", Required: true, Domain: Positive},
		{Key: "v_plateau_current", Unit: "A", Symbol: "I_pl", Name: "Plateau given at", Where: "drain current of the gate-charge curve; lets plateau and charge follow the current", Domain: NotNegative},
		{Key: "q_gs2", Unit: "C", Symbol: "Q_gs2", Name: "Threshold to plateau", Where: "gate charge from threshold to the plateau's start", Required: true, Domain: NotNegative},
		{Key: "q_gd", Unit: "C", Symbol: "Q_gd", Name: "Miller charge", Where: "length of the plateau, at about the blocking voltage", Required: true, Domain: NotNegative},
		{Key: "q_g", Unit: "C", Symbol: "Q_g", Name: "Total gate charge", Where: "at the drive's swing", Required: true, Domain: NotNegative},
		{Key: "r_gate", Unit: "Ω", Symbol: "R_g", Name: "Internal gate resistance", Where: "dynamic characteristics", Domain: NotNegative},
		{Key: "l_source", Unit: "H", Symbol: "L_s", Name: "Common source inductance", Where: "common to gate and power loop; of the package", Domain: NotNegative},
		{Key: "q_oss", Unit: "C", Symbol: "Q_oss", Name: "Output charge", Where: "the better entry; takes precedence over the capacitance", Domain: NotNegative},
		{Key: "e_oss", Unit: "J", Symbol: "E_oss", Name: "Output energy", Where: "stored energy at the same voltage; without it a third of charge times voltage", Domain: NotNegative},
		{Key: "q_oss_at", Unit: "V", Symbol: "V_Qoss", Name: "Output charge given at", Where: "its test voltage", Domain: NotNegative},
		{Key: "c_oss", Unit: "F", Symbol: "C_oss", Name: "Output capacitance", Where: "small-signal; understates the charge of many parts", Domain: NotNegative},
		{Key: "c_oss_at", Unit: "V", Symbol: "V_Coss", Name: "Output capacitance given at", Where: "its test voltage", Domain: NotNegative},
		{Key: "v_sd", Unit: "V", Symbol: "V_SD", Name: "Body diode", Where: "forward voltage, used in the dead times", Default: 0.8, Domain: NotNegative},
		{Key: "r_sd", Unit: "Ω", Symbol: "r_SD", Name: "Body diode, slope", Where: "slope of its forward curve", Domain: NotNegative},
	}, append(recoveryFields(), thermalFields()...)...)
}

func diodeFields() []Field {
	return append([]Field{
		partName("what it is"),
		{Key: "v_rrm", Unit: "V", Symbol: "V_RRM", Name: "Rated voltage", Where: "repetitive peak reverse voltage", Required: true, Domain: Positive},
		{Key: "i_f_rating", Unit: "A", Symbol: "I_F", Name: "Rated current", Where: "average forward current", Domain: NotNegative},
		{Key: "v_f0", Unit: "V", Symbol: "V_F0", Name: "Threshold", Where: "where the straight line through the forward curve meets zero current, 25 °C", Required: true, Domain: NotNegative},
		{Key: "v_f0_slope", Unit: "V/K", Symbol: "dV_F0/dT", Name: "Threshold, per kelvin", Where: "from the forward curves at two temperatures; usually negative"},
		{Key: "r_d", Unit: "Ω", Symbol: "r_d", Name: "Slope", Where: "of that straight line", Domain: NotNegative},
		{Key: "r_d_slope", Unit: "1/K", Symbol: "α_rd", Name: "Slope, per kelvin", Where: "relative change of the slope"},
		{Key: "q_c", Unit: "C", Symbol: "Q_c", Name: "Capacitive charge", Where: "takes precedence over the capacitance", Domain: NotNegative},
		{Key: "e_c", Unit: "J", Symbol: "E_c", Name: "Capacitive energy", Where: "at the same voltage; without it a third of charge times voltage", Domain: NotNegative},
		{Key: "q_c_at", Unit: "V", Symbol: "V_Qc", Name: "Charge given at", Where: "its test voltage", Domain: NotNegative},
		{Key: "c_j", Unit: "F", Symbol: "C_j", Name: "Junction capacitance", Where: "small-signal", Domain: NotNegative},
		{Key: "c_j_at", Unit: "V", Symbol: "V_Cj", Name: "Capacitance given at", Where: "its reverse voltage", Domain: NotNegative},
		{Key: "i_leak", Unit: "A", Symbol: "I_R", Name: "Leakage", Where: "reverse current, at the hottest condition given", Domain: NotNegative},
		{Key: "i_leak_voltage", Unit: "V", Symbol: "V_IR", Name: "Leakage: at voltage", Where: "the reverse voltage it is given at", Domain: NotNegative},
		{Key: "i_leak_temperature", Unit: "°C", Symbol: "T_IR", Name: "Leakage: at temperature", Where: "the junction temperature it is given at", Default: 25},
		{Key: "i_leak_doubling", Unit: "K", Symbol: "ΔT_2", Name: "Leakage doubles every", Where: "from two curves, ΔT·ln 2/ln ratio", Default: 10, Domain: Positive},
	}, append(recoveryFields(), thermalFields()...)...)
}

func recoveryFields() []Field {
	return []Field{
		{Key: "q_rr", Unit: "C", Symbol: "Q_rr", Name: "Recovery charge", Where: "reverse recovery; 0 for a Schottky diode", Domain: NotNegative},
		{Key: "q_rr_current", Unit: "A", Symbol: "I_Qrr", Name: "Recovery: at current", Where: "the forward current it is given at", Domain: NotNegative},
		{Key: "q_rr_didt", Unit: "A/s", Symbol: "di/dt", Name: "Recovery: at slope", Where: "the slope of current it is given at", Domain: NotNegative},
		{Key: "q_rr_voltage", Unit: "V", Symbol: "V_Qrr", Name: "Recovery: at voltage", Where: "give it only when the stated charge holds the capacitive charge too", Domain: NotNegative},
		{Key: "q_rr_tau", Unit: "s", Symbol: "τ_rr", Name: "Carrier lifetime", Where: "bounds the charge at low current and in short dead times", Domain: NotNegative},
		{Key: "q_rr_current_exponent", Symbol: "a", Name: "Recovery over current, exponent", Where: "common practice 0.5", Default: 0.5, Domain: NotNegative, Below: 3},
		{Key: "q_rr_didt_exponent", Symbol: "b", Name: "Recovery over slope, exponent", Where: "common practice 0.5", Default: 0.5, Domain: NotNegative, Below: 3},
		{Key: "softness", Symbol: "S", Name: "Softness", Where: "fall time over rise time of the reverse current", Default: 0.5, Domain: Positive},
	}
}

func thermalFields() []Field {
	return []Field{
		{Key: "theta_ja", Unit: "K/W", Symbol: "θ_JA", Name: "Junction to ambient", Where: "on your board, not on the maker's", Domain: NotNegative},
		{Key: "tj_max", Unit: "°C", Symbol: "T_j,max", Name: "Highest junction temperature", Where: "absolute maximum", Default: 150},
	}
}

func capacitorFields() []Field {
	return []Field{
		partName("pieces, value and type"),
		{Key: "capacitance", Unit: "F", Symbol: "C", Name: "Capacitance", Where: "all pieces, at the working voltage", Required: true, Domain: Positive},
		{Key: "esr", Unit: "Ω", Symbol: "R_ESR", Name: "Series resistance", Where: "all pieces, at the switching frequency", Domain: NotNegative},
		{Key: "voltage_rating", Unit: "V", Symbol: "V_R", Name: "Rated voltage", Where: "of one piece", Domain: NotNegative},
		{Key: "ripple_rating", Unit: "A", Symbol: "I_R", Name: "Rated ripple current", Where: "rms, all pieces, at the switching frequency", Domain: NotNegative},
	}
}
