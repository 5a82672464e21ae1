package stage

// buck: the switch lies at the input, the inductor feeds the output.
// Source: Erickson & Maksimović, Fundamentals of Power Electronics, chapter 2.
var buck = Topology{
	Name: "buck", Title: "buck",
	OnVoltage:   func(vin, vout float64) float64 { return vin - vout },
	OffVoltage:  func(vin, vout float64) float64 { return vout },
	Blocking:    func(vin, vout float64) float64 { return vin },
	Rest:        func(vin, vout float64) float64 { return vin - vout },
	MeanCurrent: func(is, io float64) float64 { return io },
	InputSees:   Switch,
	OutputSees:  Inductor,
	Reach: func(vin, vout float64) string {
		if vin <= vout {
			return "a buck stage gives only less than its input"
		}
		return ""
	},
}
