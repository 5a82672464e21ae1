package budget

import (
	"math"

	"lossbook/budget/device"
)

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
// terms shown are those computed with.
type entry struct {
	part, kind string
	heats      heat
	stage      bool // the stage's own balance carries it
	power      func(s *situation, it *Item) float64
}

// fixedEntries is the ledger without the series resistances, in its order. A new
// loss is one function in the package of its part and one row here.
var fixedEntries = []entry{
	{"switch", "conduction", switchHeat, true, switchConduction},
	{"switch", "turn_on", switchHeat, true, turnOn},
	{"switch", "turn_off", switchHeat, true, turnOff},
	{"switch", "output_charge", switchHeat, true, outputCharge},
	{"switch", "recovery", switchHeat, true, switchRecovery},
	{"rectifier", "conduction", rectifierHeat, true, rectifierConduction},
	{"rectifier", "dead_time", rectifierHeat, true, deadTime},
	{"rectifier", "recovery", rectifierHeat, true, rectifierRecovery},
	{"rectifier", "leakage", rectifierHeat, true, leakage},
	{"inductor", "winding_dc", inductorHeat, true, windingDC},
	{"inductor", "winding_ac", inductorHeat, true, windingAC},
	{"inductor", "core", inductorHeat, true, coreLoss},
	{"input_capacitor", "esr", noHeat, false, inputESR},
	{"output_capacitor", "esr", noHeat, true, outputESR},
	{"snubber", "rc", noHeat, true, snubberLoss},
	{"drive", "gate", noHeat, false, gateLoss},
	{"drive", "regulator", noHeat, false, regulatorLoss},
	{"controller", "supply", noHeat, false, supplyLoss},
	{"controller", "fixed", noHeat, false, fixedLoss},
}

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

// note records a term of the item; without an item it does nothing.
func (it *Item) note(name string, value float64, unit string) {
	if it == nil {
		return
	}
	it.terms[it.count] = Term{name, value, unit}
	it.count++
}

func (it *Item) outside(is bool) {
	if it != nil && is {
		it.Outside = true
	}
}

func switchConduction(s *situation, it *Item) float64 {
	square := s.sw.MeanSquare()
	it.note("I_sw", math.Sqrt(square), "A")
	it.note("R_DS", s.rds, "Ω")
	it.note("T_j", s.temperature[switchHeat], "°C")
	it.outside(s.rdsOutside)
	return device.Conduction(square, s.rds)
}

func turnOn(s *situation, it *Item) float64 {
	current := max(s.flow.Min, 0)
	if s.mode == DCM {
		current = 0
	}
	it.note("V_b", s.frame.blocking, "V")
	it.note("I_1", current, "A")
	it.note("t_ri", s.on.Current, "s")
	it.note("t_fv", s.on.Voltage, "s")
	it.note("f", s.m.frequency, "Hz")
	return device.TurnOnLoss(s.frame.blocking, current, s.on) * s.m.frequency
}

func turnOff(s *situation, it *Item) float64 {
	current := max(s.flow.Max, 0)
	it.note("V_b", s.frame.blocking, "V")
	it.note("I_2", current, "A")
	it.note("t_rv", s.off.Voltage, "s")
	it.note("t_fi", s.off.Current, "s")
	it.note("E_b", s.frame.stored, "J")
	it.note("f", s.m.frequency, "Hz")
	return device.TurnOffLoss(s.frame.blocking, current, s.off, s.frame.stored) * s.m.frequency
}

func outputCharge(s *situation, it *Item) float64 {
	if s.frame.totalCharge == 0 {
		return 0
	}
	it.note("V_b", s.frame.blocking, "V")
	it.note("Q_t", s.frame.totalCharge, "C")
	it.note("f", s.m.frequency, "Hz")
	if s.mode == DCM {
		return ringingCharge(s, it)
	}
	from := s.frame.blocking
	if s.flow.Min < 0 {
		from = device.SoftVoltage(from, -s.flow.Min, s.m.design.Drive.DeadTimeOn.V, s.frame.totalCharge)
	}
	energy := device.TurnOnEnergy(s.m.switchCharge, s.m.rectifierCharge, s.frame.blocking, from)
	it.note("V_x", from, "V")
	it.note("E_x", energy, "J")
	return energy * s.m.frequency
}

func ringingCharge(s *situation, it *Item) float64 {
	r := s.frame.ringing
	t3 := max(0, s.m.period*(1-s.flow.D1-s.flow.D2))
	it.note("t_3", t3, "s")
	it.note("τ", r.Tau, "s")
	it.note("E_b", r.Start, "J")
	it.note("E_0", r.Rest, "J")
	return r.Energy(t3) * s.m.frequency
}

func switchRecovery(s *situation, it *Item) float64 {
	if s.reverse.Charge == 0 {
		return 0
	}
	recoveryTerms(s, it)
	it.note("t_a", s.reverse.Rise, "s")
	return s.reverse.SwitchEnergy(s.frame.blocking, s.flow.Min) * s.m.frequency
}

func rectifierRecovery(s *situation, it *Item) float64 {
	if s.reverse.Charge == 0 {
		return 0
	}
	recoveryTerms(s, it)
	return s.reverse.RectifierEnergy(s.frame.blocking) * s.m.frequency
}

func recoveryTerms(s *situation, it *Item) {
	it.note("V_b", s.frame.blocking, "V")
	it.note("I_min", s.flow.Min, "A")
	it.note("k", s.slope, "A/s")
	it.note("Q", s.reverse.Charge, "C")
	it.note("Q_b", s.reverse.Tail, "C")
	it.note("f", s.m.frequency, "Hz")
}

func rectifierConduction(s *situation, it *Item) float64 {
	square := s.re.MeanSquare()
	it.note("I_re", math.Sqrt(square), "A")
	it.note("T_j", s.temperature[rectifierHeat], "°C")
	if s.m.sync {
		it.note("R_DS", s.rdsRectifier, "Ω")
		it.outside(s.rdsRectifierOutside)
		return device.Conduction(square, s.rdsRectifier)
	}
	it.note("V_d", s.forwardVolt, "V")
	it.note("I_mean", s.re.Mean(), "A")
	it.note("r_d", s.forwardOhm, "Ω")
	return device.ForwardLoss(s.forwardVolt, s.forwardOhm, s.re.Mean(), square)
}

func deadTime(s *situation, it *Item) float64 {
	if !s.m.sync {
		return 0
	}
	drive := s.m.design.Drive
	first := s.m.rectifierBody
	if s.flow.Min < 0 {
		first = s.m.switchBody // a reversed current flows back through the switch
	}
	before, after := math.Abs(s.flow.Min), max(s.flow.Max, 0)
	it.note("I_min", s.flow.Min, "A")
	it.note("V_1", first.Voltage+first.Resistance*before, "V")
	it.note("t_on", drive.DeadTimeOn.V, "s")
	it.note("I_2", after, "A")
	it.note("V_2", s.m.rectifierBody.Voltage+s.m.rectifierBody.Resistance*after, "V")
	it.note("t_off", drive.DeadTimeOff.V, "s")
	it.note("f", s.m.frequency, "Hz")
	return (first.Loss(before, drive.DeadTimeOn.V) + s.m.rectifierBody.Loss(after, drive.DeadTimeOff.V)) * s.m.frequency
}

func leakage(s *situation, it *Item) float64 {
	if s.m.sync || s.m.leakage.Current == 0 {
		return 0
	}
	f := &s.frame
	d3 := 1 - s.flow.D1 - s.flow.D2
	if s.mode == CCM {
		d3 = 0
	}
	it.note("I_R", s.m.leakage.Current, "A")
	it.note("growth", s.growth, "")
	it.note("T_j", s.temperature[rectifierHeat], "°C")
	it.note("V_b", f.blocking, "V")
	it.note("d_1", s.flow.D1, "")
	it.note("V_rest", f.blocking-f.rest, "V")
	it.note("d_3", d3, "")
	it.note("V_R", s.m.leakage.Voltage, "V")
	return s.m.leakage.Loss(s.growth, s.flow.D1, f.blocking, d3, f.blocking-f.rest)
}

func windingDC(s *situation, it *Item) float64 {
	it.note("I_L", s.il, "A")
	it.note("R_dc", s.rdcr, "Ω")
	it.note("T_L", s.temperature[inductorHeat], "°C")
	return s.il * s.il * s.rdcr
}

// windingShare is the share of winding_ac that must lie beyond the rows of its
// curve before the item is marked: a curve that ends at the twentieth harmonic of
// a triangle leaves out nothing that counts.
const windingShare = 0.01

func windingAC(s *situation, it *Item) float64 {
	sum, beyond := s.m.spectrum.Weigh(&s.harmonics, s.temperature[inductorHeat])
	if it != nil {
		windingTerms(s, it, sum, beyond)
	}
	return sum * s.rdcr
}

func windingTerms(s *situation, it *Item, sum, beyond float64) {
	ripple := 0.0
	for _, square := range s.harmonics {
		ripple += square
	}
	it.note("I_ac", math.Sqrt(ripple), "A")
	it.note("R_dc", s.rdcr, "Ω")
	if ripple > 0 {
		it.note("F", sum/ripple, "")
	}
	it.outside(beyond > windingShare*sum || s.m.linkage.Outside(max(math.Abs(s.flow.Min), math.Abs(s.flow.Max))))
}

func coreLoss(s *situation, it *Item) float64 {
	if !s.m.core.Known() {
		return 0
	}
	it.note("Δλ", s.flow.Linkage, "V·s")
	it.note("d_1", s.flow.D1, "")
	it.note("d_2", s.flow.D2, "")
	it.note("f", s.m.frequency, "Hz")
	it.note("ct", s.coreFactor, "")
	return s.m.core.Loss(s.flow.Linkage, s.flow.D1, s.flow.D2, s.coreFactor)
}

func esr(it *Item, square float64, c *Capacitor) float64 {
	if c == nil {
		return 0
	}
	it.note("I_C", math.Sqrt(square), "A")
	it.note("R_ESR", c.ESR.V, "Ω")
	return square * c.ESR.V
}

func inputESR(s *situation, it *Item) float64 {
	return esr(it, s.inputAC, s.m.design.InputCapacitor)
}

func outputESR(s *situation, it *Item) float64 {
	return esr(it, s.outputAC, s.m.design.OutputCapacitor)
}

func snubberLoss(s *situation, it *Item) float64 {
	if s.m.design.Snubber == nil {
		return 0
	}
	c, v := s.m.design.Snubber.Capacitance.V, s.frame.blocking
	it.note("C_sn", c, "F")
	it.note("V_b", v, "V")
	it.note("f", s.m.frequency, "Hz")
	return c * v * v * s.m.frequency
}

func gateLoss(s *situation, it *Item) float64 {
	d := s.m.design.Drive
	it.note("Q_g", s.m.gateCharge, "C")
	it.note("V_dr", d.Voltage.V, "V")
	it.note("V_off", d.VoltageOff.V, "V")
	it.note("f", s.m.frequency, "Hz")
	return s.frame.gate
}

func regulatorLoss(s *situation, it *Item) float64 {
	d := s.m.design.Drive
	it.note("Q_g", s.m.gateCharge, "C")
	it.note("V_s", s.m.feed(d.FedFrom, s.frame.Vin), "V")
	it.note("V_dr", d.Voltage.V, "V")
	it.note("V_off", d.VoltageOff.V, "V")
	it.note("f", s.m.frequency, "Hz")
	return s.frame.regulator
}

func supplyLoss(s *situation, it *Item) float64 {
	it.note("I_q", orZero(s.m.design.Controller).Current.V, "A")
	it.note("V_s", s.m.controllerFeed(s.frame.Vin), "V")
	return s.frame.supply
}

func fixedLoss(s *situation, it *Item) float64 {
	it.note("P_fix", s.frame.fixed, "W")
	return s.frame.fixed
}

// seriesEntries makes one row of each series resistance: R·I² of the place it lies
// in.
func (m *Model) seriesEntries() []entry {
	var rows []entry
	for _, r := range m.design.Series {
		rows = append(rows, entry{layoutPart, r.Name, noHeat, true, func(s *situation, it *Item) float64 {
			square := s.squareAt(r.Location)
			it.note("I", math.Sqrt(square), "A")
			it.note("R", r.Resistance.V, "Ω")
			return square * r.Resistance.V
		}})
	}
	return rows
}

// squareAt returns the mean square of the current at a place of the stage, in A².
// What the capacitors carry does not flow through input and output.
func (s *situation) squareAt(location string) float64 {
	switch location {
	case "input":
		return s.is * s.is
	case "output":
		return s.frame.Iout * s.frame.Iout
	case "switch":
		return s.sw.MeanSquare()
	case "rectifier":
		return s.re.MeanSquare()
	}
	return s.inductor.MeanSquare()
}
