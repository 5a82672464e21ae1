package stage

// boost: the inductor lies at the input, the rectifier feeds the output.
// Source: Erickson & Maksimović, Fundamentals of Power Electronics, chapter 2.
var boost = Topology{
	Name: "boost", Title: "boost",
	OnVoltage:   func(vin, vout float64) float64 { return vin },
	OffVoltage:  func(vin, vout float64) float64 { return vout - vin },
	Blocking:    func(vin, vout float64) float64 { return vout },
	Rest:        func(vin, vout float64) float64 { return vin },
	MeanCurrent: func(is, io float64) float64 { return is },
	InputSees:   Inductor,
	OutputSees:  Rectifier,
	Reach: func(vin, vout float64) string {
		if vin >= vout {
			return "a boost stage gives only more than its input"
		}
		return ""
	},
}
