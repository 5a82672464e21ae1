package budget

import (
	"fmt"
	"math"

	"lossbook/budget/device"
	"lossbook/budget/magnetic"
)

func switchConduction(s *situation, it *Item) float64 {
	square := s.sw.MeanSquare()
	it.note("I_sw", math.Sqrt(square), "A")
	it.note("R_DS", s.rds, "Ω")
	it.outside(s.rdsOutside)
	return device.Conduction(square, s.rds)
}

func turnOn(s *situation, it *Item) float64 {
	switch {
	case s.mode == DCM:
		return it.none("The inductor current has ended before the switch turns on: there is none to take over.")
	case s.flow.Min <= 0:
		return it.none("The inductor current has reversed before the switch turns on: there is none to take over.")
	}
	it.note("V_b", s.frame.blocking, "V")
	it.note("I_1", s.flow.Min, "A")
	it.note("t_ri", s.on.Current, "s")
	it.note("t_fv", s.on.Voltage, "s")
	it.given("f", "frequency", s.m.frequency)
	return device.TurnOnLoss(s.frame.blocking, s.flow.Min, s.on) * s.m.frequency
}

func turnOff(s *situation, it *Item) float64 {
	current := max(s.flow.Max, 0)
	it.note("V_b", s.frame.blocking, "V")
	it.note("I_2", current, "A")
	it.note("t_fi", s.off.Current, "s")
	it.note("t_rv", s.off.Voltage, "s")
	it.note("E_b", s.frame.stored, "J")
	it.given("f", "frequency", s.m.frequency)
	return device.TurnOffLoss(s.frame.blocking, current, s.off, s.frame.stored) * s.m.frequency
}

func outputCharge(s *situation, it *Item) float64 {
	if s.frame.totalCharge == 0 {
		return it.none("Neither output charge nor capacitance is stated for switch and rectifier.")
	}
	if s.mode == DCM {
		return ringingCharge(s, it)
	}
	energy := s.frame.stored
	if s.flow.Min < 0 {
		energy = device.TurnOnEnergy(s.m.switchCharge, s.m.rectifierCharge, s.frame.blocking, s.turnOnVoltage())
	}
	it.note("E_x", energy, "J")
	it.given("f", "frequency", s.m.frequency)
	return energy * s.m.frequency
}

// turnOnVoltage is what the switch bears when it turns on in continuous conduction: a
// reversed current has discharged it.
func (s *situation) turnOnVoltage() float64 {
	if s.flow.Min >= 0 {
		return s.frame.blocking
	}
	return device.SoftVoltage(s.frame.blocking, -s.flow.Min, s.m.design.Drive.DeadTimeOn.V, s.frame.totalCharge)
}

var ringing = how("(E_b + (E_0 − E_b)·(1 − exp(−t_3/τ)))·f", byJunctions+"; a mean path through the ringing, without counting on a valley")

func ringingCharge(s *situation, it *Item) float64 {
	r := s.frame.ringing
	t3 := s.restTime()
	it.by(ringing)
	it.note("E_b", r.Start, "J")
	it.note("E_0", r.Rest, "J")
	it.note("t_3", t3, "s")
	it.note("τ", r.Tau, "s")
	it.given("f", "frequency", s.m.frequency)
	return r.Energy(t3) * s.m.frequency
}

// restTime is how long no current flows before the switch turns on, in s.
func (s *situation) restTime() float64 { return max(0, s.m.period*(1-s.flow.D1-s.flow.D2)) }

func switchRecovery(s *situation, it *Item) float64 {
	if s.reverse.Charge == 0 {
		return it.none(s.noRecovery())
	}
	it.note("V_b", s.frame.blocking, "V")
	it.note("I_min", s.flow.Min, "A")
	it.note("t_a", s.reverse.Rise, "s")
	it.note("Q", s.reverse.Charge, "C")
	it.note("Q_b", s.reverse.Tail, "C")
	it.given("f", "frequency", s.m.frequency)
	return s.reverse.SwitchEnergy(s.frame.blocking, s.flow.Min) * s.m.frequency
}

func rectifierRecovery(s *situation, it *Item) float64 {
	if s.reverse.Charge == 0 {
		return it.none(s.noRecovery())
	}
	it.note("V_b", s.frame.blocking, "V")
	it.note("Q_b", s.reverse.Tail, "C")
	it.given("f", "frequency", s.m.frequency)
	return s.reverse.RectifierEnergy(s.frame.blocking) * s.m.frequency
}

// noRecovery says why nothing recovers.
func (s *situation) noRecovery() string {
	switch r := s.m.recoveryOfRectifier(); {
	case !(r.QRR.V > 0):
		return "No recovery charge is stated for the rectifier."
	case s.m.recovery.Charge == 0:
		return "The stated recovery charge is all capacitive, which the output charge holds already."
	case s.mode == DCM:
		return "The rectifier’s current has ended by itself before the switch turns on."
	case s.flow.Min <= 0:
		return "The rectifier carries no forward current when the switch turns on."
	}
	return "The dead time leaves the body diode no time to store charge."
}

// recoveryOfRectifier is what is stated of the rectifier's recovery.
func (m *Model) recoveryOfRectifier() Recovery {
	if m.sync {
		return m.design.SyncSwitch.Recovery
	}
	return m.design.Diode.Recovery
}

var channel = how("I_re^2·R_DS", byRMS)

func rectifierConduction(s *situation, it *Item) float64 {
	square := s.re.MeanSquare()
	if s.m.sync {
		it.by(channel)
		it.note("I_re", math.Sqrt(square), "A")
		it.note("R_DS", s.rdsRectifier, "Ω")
		it.outside(s.rdsRectifierOutside)
		return device.Conduction(square, s.rdsRectifier)
	}
	it.note("V_d", s.forwardVolt, "V")
	it.note("I_mean", s.re.Mean(), "A")
	it.note("r_d", s.forwardOhm, "Ω")
	it.note("I_re", math.Sqrt(square), "A")
	return device.ForwardLoss(s.forwardVolt, s.forwardOhm, s.re.Mean(), square)
}

func deadTime(s *situation, it *Item) float64 {
	if !s.m.sync {
		return it.none("A diode takes over by itself: there is no dead time.")
	}
	drive := s.m.design.Drive
	first := s.m.rectifierBody
	if s.flow.Min < 0 {
		first = s.m.switchBody // a reversed current flows back through the switch
	}
	before, after := math.Abs(s.flow.Min), max(s.flow.Max, 0)
	it.note("I_min", s.flow.Min, "A")
	it.note("V_1", first.Voltage+first.Resistance*before, "V")
	it.given("t_on", "drive.dead_time_on", drive.DeadTimeOn.V)
	it.note("I_2", after, "A")
	it.note("V_2", s.m.rectifierBody.Voltage+s.m.rectifierBody.Resistance*after, "V")
	it.given("t_off", "drive.dead_time_off", drive.DeadTimeOff.V)
	it.given("f", "frequency", s.m.frequency)
	return (first.Loss(before, drive.DeadTimeOn.V) + s.m.rectifierBody.Loss(after, drive.DeadTimeOff.V)) * s.m.frequency
}

func leakage(s *situation, it *Item) float64 {
	switch {
	case s.m.sync:
		return it.none("A MOSFET’s leakage is not part of the budget.")
	case s.m.leakage.Current == 0:
		return it.none("No leakage is stated for the diode.")
	}
	f := &s.frame
	d3 := 1 - s.flow.D1 - s.flow.D2
	if s.mode == CCM {
		d3 = 0
	}
	it.given("I_R", "diode.i_leak", s.m.leakage.Current)
	it.note("g", s.growth, "")
	it.given("V_R", "diode.i_leak_voltage", s.m.leakage.Voltage)
	it.note("d_1", s.flow.D1, "")
	it.note("V_b", f.blocking, "V")
	it.note("d_3", d3, "")
	it.note("V_rest", f.rest, "V")
	return s.m.leakage.Loss(s.growth, s.flow.D1, f.blocking, d3, f.blocking-f.rest)
}

func windingDC(s *situation, it *Item) float64 {
	it.note("I_L", s.il, "A")
	it.note("R_dc", s.rdcr, "Ω")
	return s.il * s.il * s.rdcr
}

// windingShare is the share of winding_ac that must lie beyond the rows of its
// curve before the item is marked: a curve that ends at the twentieth harmonic of
// a triangle leaves out nothing that counts.
const windingShare = 0.01

func windingAC(s *situation, it *Item) float64 {
	sum := s.weighedRipple()
	if it != nil {
		it.outside(s.windingBeyond() || s.m.linkage.Outside(max(math.Abs(s.flow.Min), math.Abs(s.flow.Max))))
	}
	if it.asked() {
		windingTerms(s, it, sum)
	}
	return sum * s.rdcr
}

// shortestRun is the share of the period of a rise or fall from which on the sum over
// the harmonics is taken from a table; for shorter ones that loses digits.
const shortestRun = 1.0 / 256

// weighedRipple returns the sum over the harmonics of the inductor current, mean square
// times the winding's factor, in A². A table is worth its making in continuous
// conduction, where one piece of it serves all loads at an input voltage; in
// discontinuous each point would need its own.
func (s *situation) weighedRipple() float64 {
	t, w := s.temperature[inductorHeat], s.flow.Triangle
	if s.mode == CCM && w.D1 >= shortestRun && w.D2 >= shortestRun {
		if sum, possible := s.m.spectrum.Cosines(w.D1, t); possible {
			return w.Weighed(sum)
		}
	}
	square := s.harmonics()
	sum, _ := s.m.spectrum.Weigh(&square, t)
	return sum
}

// harmonics returns the mean square of each harmonic of the inductor current, in A².
func (s *situation) harmonics() (square [magnetic.Harmonics]float64) {
	s.flow.Harmonics(square[:])
	return square
}

// windingBeyond tells whether the loss lies to more than a hundredth beyond the rows
// of the winding's curve.
func (s *situation) windingBeyond() bool {
	if !s.m.spectrum.Ends() {
		return false
	}
	square := s.harmonics()
	sum, beyond := s.m.spectrum.Weigh(&square, s.temperature[inductorHeat])
	return beyond > windingShare*sum
}

func windingTerms(s *situation, it *Item, sum float64) {
	ripple := 0.0 // of the harmonics that the loss is summed over
	for _, square := range s.harmonics() {
		ripple += square
	}
	if ripple == 0 {
		it.none("No current flows in the inductor.")
		return
	}
	it.note("I_ac", math.Sqrt(ripple), "A")
	it.note("F", sum/ripple, "")
	it.note("R_dc", s.rdcr, "Ω")
}

func coreLoss(s *situation, it *Item) float64 {
	switch {
	case !s.m.core.Known():
		return it.none("Nothing is stated about the core’s loss.")
	case s.flow.Linkage == 0:
		return it.none("No current flows in the inductor.")
	}
	if it.asked() {
		coreTerms(s, it)
	}
	return s.m.core.Loss(s.flow.Linkage, s.flow.D1, s.flow.D2, s.coreFactor)
}

func esr(it *Item, square float64, c *Capacitor, path string) float64 {
	if c == nil {
		return it.none("No capacitor is entered here.")
	}
	it.note("I_C", math.Sqrt(square), "A")
	it.given("R_ESR", path, c.ESR.V)
	return square * c.ESR.V
}

func inputESR(s *situation, it *Item) float64 {
	return esr(it, s.inputAC, s.m.design.InputCapacitor, "input_capacitor.esr")
}

func outputESR(s *situation, it *Item) float64 {
	return esr(it, s.outputAC, s.m.design.OutputCapacitor, "output_capacitor.esr")
}

func snubberLoss(s *situation, it *Item) float64 {
	if s.m.design.Snubber == nil {
		return it.none("No snubber is entered.")
	}
	c, v := s.m.design.Snubber.Capacitance.V, s.frame.blocking
	it.given("C_sn", "snubber.capacitance", c)
	it.note("V_b", v, "V")
	it.given("f", "frequency", s.m.frequency)
	return c * v * v * s.m.frequency
}

func gateLoss(s *situation, it *Item) float64 {
	d := s.m.design.Drive
	it.note("Q_g", s.m.gateCharge, "C")
	it.given("V_dr", "drive.voltage", d.Voltage.V)
	it.given("V_off", "drive.voltage_off", d.VoltageOff.V)
	it.given("f", "frequency", s.m.frequency)
	return s.frame.gate
}

func regulatorLoss(s *situation, it *Item) float64 {
	d := s.m.design.Drive
	if d.FedFrom != "input" && d.FedFrom != "output" {
		return it.none("The drive is fed from a rail of its own, whose voltage it uses whole.")
	}
	it.note("Q_g", s.m.gateCharge, "C")
	it.given("f", "frequency", s.m.frequency)
	it.note("V_s", s.m.feed(d.FedFrom, s.frame.Vin), "V")
	it.given("V_dr", "drive.voltage", d.Voltage.V)
	it.given("V_off", "drive.voltage_off", d.VoltageOff.V)
	return s.frame.regulator
}

func supplyLoss(s *situation, it *Item) float64 {
	if s.m.design.Controller == nil {
		return it.none("No controller is entered.")
	}
	it.given("I_q", "controller.current", s.m.design.Controller.Current.V)
	it.note("V_s", s.m.controllerFeed(s.frame.Vin), "V")
	return s.frame.supply
}

func fixedLoss(s *situation, it *Item) float64 {
	if s.m.design.Controller == nil {
		return it.none("No controller is entered.")
	}
	it.given("P_fix", "controller.fixed_loss", s.frame.fixed)
	return s.frame.fixed
}

// branch is where a series resistance can lie: the name of the current there, the
// formula with it, and its mean square in A². What the capacitors carry does not flow
// through input and output.
type branch struct {
	current string
	method  method
	square  func(s *situation) float64
}

var branches = map[string]branch{
	"input":     {"I_s", how("R·I_s^2", byRMS+"; the mean, since the input capacitor carries the rest"), func(s *situation) float64 { return s.is * s.is }},
	"output":    {"I_out", how("R·I_out^2", byRMS+"; the mean, since the output capacitor carries the rest"), func(s *situation) float64 { return s.frame.Iout * s.frame.Iout }},
	"switch":    {"I_sw", how("R·I_sw^2", byRMS), func(s *situation) float64 { return s.sw.MeanSquare() }},
	"rectifier": {"I_re", how("R·I_re^2", byRMS), func(s *situation) float64 { return s.re.MeanSquare() }},
	"inductor":  {"I_rms", how("R·I_rms^2", byRMS), func(s *situation) float64 { return s.inductor.MeanSquare() }},
}

// seriesEntries makes one row of each series resistance: R·I² of the place it lies
// in.
func (m *Model) seriesEntries() []entry {
	var rows []entry
	for i, r := range m.design.Series {
		at, path := branches[r.Location], fmt.Sprintf("series_resistances[%d].resistance", i)
		rows = append(rows, entry{layoutPart, r.Name, noHeat, true, steady, func(s *situation, it *Item) float64 {
			square := at.square(s)
			it.given("R", path, r.Resistance.V)
			it.note(at.current, math.Sqrt(square), "A")
			return square * r.Resistance.V
		}, at.method})
	}
	return rows
}
