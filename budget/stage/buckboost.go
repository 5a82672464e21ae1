package stage

// buckBoost: the inverting stage; the inductor is charged from the input and
// discharged into the output, whose voltage is negative (here a magnitude).
// Source: Erickson & Maksimović, Fundamentals of Power Electronics, chapter 2.
var buckBoost = Topology{
	Name: "buck_boost", Title: "inverting buck-boost", Inverting: true,
	OnVoltage:   func(vin, vout float64) float64 { return vin },
	OffVoltage:  func(vin, vout float64) float64 { return vout },
	Blocking:    func(vin, vout float64) float64 { return vin + vout },
	Rest:        func(vin, vout float64) float64 { return vin },
	MeanCurrent: func(is, io float64) float64 { return is + io },
	InputSees:   Switch,
	OutputSees:  Rectifier,
	Reach:       func(vin, vout float64) string { return "" },
}
