package budget

import (
	"encoding/json"
	"math"
)

// Format is the only value of Design.Format this model reads.
const Format = "lossbook/1"

// ModelVersion names the physics a result was computed with. It changes with
// every change that moves a figure by more than rounding, so that a stored
// result can be told from a recomputed one.
const ModelVersion = "1"

// Num is a number an engineer may state or leave out. The zero Num is "not
// stated"; a stated 0 is a different thing, since an absent loss makes the
// budget a lower bound and a loss of 0 does not.
type Num struct {
	V      float64
	Stated bool
}

// N returns a stated number.
func N(v float64) Num { return Num{V: v, Stated: true} }

// IsZero reports whether the number is absent; it lets encoding/json leave the
// field out, so that a design written and read again is equal to itself.
func (n Num) IsZero() bool { return !n.Stated }

// MarshalJSON writes the shortest digits that read back as the same number.
func (n Num) MarshalJSON() ([]byte, error) { return json.Marshal(n.V) }

// UnmarshalJSON reads a stated number.
func (n *Num) UnmarshalJSON(b []byte) error {
	n.Stated = true
	return json.Unmarshal(b, &n.V)
}

// finite reports whether v is an ordinary number.
func finite(v float64) bool { return !math.IsNaN(v) && !math.IsInf(v, 0) }

// Curve is a list of rows [x, y] with x increasing: see the units of its field.
type Curve [][2]float64

// Design is a converter as it is entered: parts, operating range and source of
// each value. Units are SI base units and °C; voltages are magnitudes. Which
// fields are required, their units, defaults and domains stand in the table of
// Fields; Validate checks a design against it.
type Design struct {
	Format    string `json:"format"`
	Name      string `json:"name"`
	Note      string `json:"note,omitempty"`
	Topology  string `json:"topology"`
	Rectifier string `json:"rectifier"`
	LightLoad string `json:"light_load,omitempty"`

	Frequency      Num    `json:"frequency,omitzero"`
	Input          Input  `json:"input,omitzero"`
	Output         Output `json:"output,omitzero"`
	Ambient        Num    `json:"ambient,omitzero"`
	EnclosureTheta Num    `json:"enclosure_theta,omitzero"`

	Switch          *MOSFET            `json:"switch,omitempty"`
	Diode           *Diode             `json:"diode,omitempty"`
	SyncSwitch      *MOSFET            `json:"sync_switch,omitempty"`
	Inductor        *Inductor          `json:"inductor,omitempty"`
	InputCapacitor  *Capacitor         `json:"input_capacitor,omitempty"`
	OutputCapacitor *Capacitor         `json:"output_capacitor,omitempty"`
	Snubber         *Snubber           `json:"snubber,omitempty"`
	Drive           *Drive             `json:"drive,omitempty"`
	Controller      *Controller        `json:"controller,omitempty"`
	Series          []SeriesResistance `json:"series_resistances,omitempty"`

	Sources map[string]string `json:"sources,omitempty"`
}

// Input is the range of the input voltage.
type Input struct {
	Min     Num `json:"min,omitzero"`
	Nominal Num `json:"nominal,omitzero"`
	Max     Num `json:"max,omitzero"`
}

// Output is the output voltage (a magnitude) and the full-load current.
type Output struct {
	Voltage Num `json:"voltage,omitzero"`
	Current Num `json:"current,omitzero"`
}

// MOSFET holds the data-sheet values of a switch or of a synchronous
// rectifier.
type MOSFET struct {
	Part            string `json:"part,omitempty"`
	VdsRating       Num    `json:"vds_rating,omitzero"`
	IDRating        Num    `json:"id_rating,omitzero"`
	TjMax           Num    `json:"tj_max,omitzero"`
	ThetaJA         Num    `json:"theta_ja,omitzero"`
	RdsOn           Num    `json:"rds_on,omitzero"`
	RdsOnHotRatio   Num    `json:"rds_on_hot_ratio,omitzero"`
	RdsOnCurve      Curve  `json:"rds_on_curve,omitempty"`
	VThreshold      Num    `json:"v_threshold,omitzero"`
	VPlateau        Num    `json:"v_plateau,omitzero"`
	VPlateauCurrent Num    `json:"v_plateau_current,omitzero"`
	QGS2            Num    `json:"q_gs2,omitzero"`
	QGD             Num    `json:"q_gd,omitzero"`
	QG              Num    `json:"q_g,omitzero"`
	RGate           Num    `json:"r_gate,omitzero"`
	LSource         Num    `json:"l_source,omitzero"`
	QOSS            Num    `json:"q_oss,omitzero"`
	EOSS            Num    `json:"e_oss,omitzero"`
	QOSSAt          Num    `json:"q_oss_at,omitzero"`
	COSS            Num    `json:"c_oss,omitzero"`
	COSSAt          Num    `json:"c_oss_at,omitzero"`
	VSD             Num    `json:"v_sd,omitzero"`
	RSD             Num    `json:"r_sd,omitzero"`
	Recovery               // of the body diode
}

// Diode holds the data-sheet values of a diode rectifier.
type Diode struct {
	Part             string `json:"part,omitempty"`
	VRRM             Num    `json:"v_rrm,omitzero"`
	IFRating         Num    `json:"i_f_rating,omitzero"`
	TjMax            Num    `json:"tj_max,omitzero"`
	ThetaJA          Num    `json:"theta_ja,omitzero"`
	VF0              Num    `json:"v_f0,omitzero"`
	VF0Slope         Num    `json:"v_f0_slope,omitzero"`
	RD               Num    `json:"r_d,omitzero"`
	RDSlope          Num    `json:"r_d_slope,omitzero"`
	QC               Num    `json:"q_c,omitzero"`
	EC               Num    `json:"e_c,omitzero"`
	QCAt             Num    `json:"q_c_at,omitzero"`
	CJ               Num    `json:"c_j,omitzero"`
	CJAt             Num    `json:"c_j_at,omitzero"`
	ILeak            Num    `json:"i_leak,omitzero"`
	ILeakVoltage     Num    `json:"i_leak_voltage,omitzero"`
	ILeakTemperature Num    `json:"i_leak_temperature,omitzero"`
	ILeakDoubling    Num    `json:"i_leak_doubling,omitzero"`
	Recovery
}

// Recovery is the reverse recovery of a diode or of a MOSFET's body diode as a
// data sheet states it.
type Recovery struct {
	QRR                Num `json:"q_rr,omitzero"`
	QRRCurrent         Num `json:"q_rr_current,omitzero"`
	QRRDidt            Num `json:"q_rr_didt,omitzero"`
	QRRVoltage         Num `json:"q_rr_voltage,omitzero"`
	QRRTau             Num `json:"q_rr_tau,omitzero"`
	QRRCurrentExponent Num `json:"q_rr_current_exponent,omitzero"`
	QRRDidtExponent    Num `json:"q_rr_didt_exponent,omitzero"`
	Softness           Num `json:"softness,omitzero"`
}

// Inductor holds inductance and saturation, winding and core.
type Inductor struct {
	Part       string   `json:"part,omitempty"`
	Inductance Num      `json:"inductance,omitzero"`
	ISat       Num      `json:"i_sat,omitzero"`
	SatDrop    Num      `json:"sat_drop,omitzero"`
	LCurve     Curve    `json:"l_curve,omitempty"`
	IRMSRating Num      `json:"i_rms_rating,omitzero"`
	TMax       Num      `json:"t_max,omitzero"`
	ThetaJA    Num      `json:"theta_ja,omitzero"`
	DCR        Num      `json:"dcr,omitzero"`
	ACCurve    Curve    `json:"ac_curve,omitempty"`
	Winding    *Winding `json:"winding,omitempty"`
	Core       *Core    `json:"core,omitempty"`
}

// Winding is the geometry behind Dowell's factor.
type Winding struct {
	Conductor string `json:"conductor,omitempty"`
	Diameter  Num    `json:"diameter,omitzero"`
	Thickness Num    `json:"thickness,omitzero"`
	Layers    Num    `json:"layers,omitzero"`
	Porosity  Num    `json:"porosity,omitzero"`
}

// Core is a core by its material and size, or by a catalogue's reference loss.
type Core struct {
	Volume             Num `json:"volume,omitzero"`
	Area               Num `json:"area,omitzero"`
	Turns              Num `json:"turns,omitzero"`
	K                  Num `json:"k,omitzero"`
	ReferencePower     Num `json:"reference_power,omitzero"`
	ReferenceFrequency Num `json:"reference_frequency,omitzero"`
	ReferenceRipple    Num `json:"reference_ripple,omitzero"`
	Alpha              Num `json:"alpha,omitzero"`
	Beta               Num `json:"beta,omitzero"`
	CT0                Num `json:"ct0,omitzero"`
	CT1                Num `json:"ct1,omitzero"`
	CT2                Num `json:"ct2,omitzero"`
}

// Capacitor is the input or the output capacitor, all pieces together.
type Capacitor struct {
	Part          string `json:"part,omitempty"`
	Capacitance   Num    `json:"capacitance,omitzero"`
	ESR           Num    `json:"esr,omitzero"`
	VoltageRating Num    `json:"voltage_rating,omitzero"`
	RippleRating  Num    `json:"ripple_rating,omitzero"`
}

// Snubber is a resistor and capacitor across the switch or rectifier; its loss
// needs only the capacitance.
type Snubber struct {
	Capacitance Num `json:"capacitance,omitzero"`
}

// Drive is the gate drive of the switch and of the synchronous rectifier.
type Drive struct {
	Voltage     Num    `json:"voltage,omitzero"`
	VoltageOff  Num    `json:"voltage_off,omitzero"`
	RSource     Num    `json:"r_source,omitzero"`
	RSink       Num    `json:"r_sink,omitzero"`
	RGateOn     Num    `json:"r_gate_on,omitzero"`
	RGateOff    Num    `json:"r_gate_off,omitzero"`
	DeadTimeOn  Num    `json:"dead_time_on,omitzero"`
	DeadTimeOff Num    `json:"dead_time_off,omitzero"`
	FedFrom     string `json:"fed_from,omitempty"`
}

// Controller is what the control circuit draws, and its limits.
type Controller struct {
	Current   Num    `json:"current,omitzero"`
	FedFrom   string `json:"fed_from,omitempty"`
	FixedLoss Num    `json:"fixed_loss,omitzero"`
	DutyMax   Num    `json:"duty_max,omitzero"`
	OnTimeMin Num    `json:"on_time_min,omitzero"`
}

// SeriesResistance is copper, a shunt or a fuse in one branch of the stage.
type SeriesResistance struct {
	Name       string `json:"name"`
	Location   string `json:"location"`
	Resistance Num    `json:"resistance,omitzero"`
}
