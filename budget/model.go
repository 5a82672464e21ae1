package budget

import (
	"errors"

	"lossbook/budget/device"
	"lossbook/budget/magnetic"
	"lossbook/budget/stage"
)

// Model is a design made ready; it is safe for concurrent use.
type Model struct {
	design   *Design // with defaults filled in
	topology stage.Topology
	sync     bool // a MOSFET as rectifier
	forced   bool // continuous at any load

	frequency, period float64
	vout              float64

	onResistance    device.Resistance
	syncResistance  device.Resistance
	forward         device.Forward
	leakage         device.Leakage
	gate            device.Gate
	recovery        device.Recovery
	switchBody      device.BodyDiode
	rectifierBody   device.BodyDiode
	switchCharge    device.Charge
	rectifierCharge device.Charge

	linkage  magnetic.Linkage
	law      stage.Linkage // the same, as the balances take it
	winding  magnetic.Winding
	core     magnetic.Core
	dcr      float64 // Ω at 20 °C
	spectrum *magnetic.Spectrum

	seriesOn, seriesOff float64 // Ω of copper and shunts in the two current paths
	gateCharge          float64 // C of all driven gates
	theta               [3]float64
	enclosure           float64
	entries             []entry
}

// Prepare checks the design and works out, once, everything that does not depend
// on the operating point. The error joins every FieldError of Validate.
func Prepare(d *Design) (*Model, error) {
	if wrong := Validate(d); len(wrong) > 0 {
		errs := make([]error, len(wrong))
		for i, e := range wrong {
			errs[i] = e
		}
		return nil, errors.Join(errs...)
	}
	full := d.filled()
	topology, _ := stage.ByName(full.Topology)
	m := &Model{
		design: full, topology: topology,
		sync:      full.Rectifier == "synchronous",
		frequency: full.Frequency.V, period: 1 / full.Frequency.V,
		vout:      full.Output.Voltage.V,
		enclosure: full.EnclosureTheta.V,
	}
	m.forced = m.sync && full.LightLoad != "diode_emulation"
	m.prepareSwitch(full.Switch, full.Drive)
	m.prepareRectifier()
	m.prepareInductor(full.Inductor)
	m.prepareSeries()
	m.entries = append(append([]entry{}, fixedEntries...), m.seriesEntries()...)
	return m, nil
}

func (m *Model) prepareSwitch(s *MOSFET, d *Drive) {
	m.onResistance = resistanceOf(s)
	m.switchCharge = chargeOf(s.QOSS, s.EOSS, s.QOSSAt, s.COSS, s.COSSAt)
	m.switchBody = device.BodyDiode{Voltage: s.VSD.V, Resistance: s.RSD.V}
	m.theta[switchHeat] = s.ThetaJA.V
	m.gateCharge = s.QG.V
	m.gate = device.Gate{
		Threshold: s.VThreshold.V, Plateau: s.VPlateau.V, PlateauCurrent: s.VPlateauCurrent.V,
		ThresholdCharge: s.QGS2.V, MillerCharge: s.QGD.V, SourceInductor: s.LSource.V,
		On: d.Voltage.V, Off: d.VoltageOff.V,
		ResistanceOn:  d.RSource.V + d.RGateOn.V + s.RGate.V,
		ResistanceOff: d.RSink.V + d.RGateOff.V + s.RGate.V,
	}
}

func (m *Model) prepareRectifier() {
	if m.sync {
		m.prepareSyncSwitch(m.design.SyncSwitch)
		return
	}
	d := m.design.Diode
	m.forward = device.Forward{Threshold: d.VF0.V, ThresholdSlope: d.VF0Slope.V, Resistance: d.RD.V, ResistanceSlope: d.RDSlope.V}
	m.leakage = device.Leakage{Current: d.ILeak.V, Voltage: d.ILeakVoltage.V, Temperature: d.ILeakTemperature.V, Doubling: d.ILeakDoubling.V}
	m.rectifierCharge = chargeOf(d.QC, d.EC, d.QCAt, d.CJ, d.CJAt)
	m.recovery = m.recoveryOf(d.Recovery)
	m.theta[rectifierHeat] = d.ThetaJA.V
}

func (m *Model) prepareSyncSwitch(s *MOSFET) {
	m.syncResistance = resistanceOf(s)
	m.rectifierBody = device.BodyDiode{Voltage: s.VSD.V, Resistance: s.RSD.V}
	m.rectifierCharge = chargeOf(s.QOSS, s.EOSS, s.QOSSAt, s.COSS, s.COSSAt)
	m.recovery = m.recoveryOf(s.Recovery)
	m.recovery.DeadTime, m.recovery.DeadTimeBounds = m.design.Drive.DeadTimeOn.V, true
	m.theta[rectifierHeat] = s.ThetaJA.V
	m.gateCharge += s.QG.V
}

// recoveryOf takes the capacitive charge out of a stated recovery charge that
// holds it.
func (m *Model) recoveryOf(r Recovery) device.Recovery {
	charge := r.QRR.V
	if r.QRRVoltage.V > 0 {
		charge = max(0, charge-m.rectifierCharge.At(r.QRRVoltage.V))
	}
	return device.Recovery{
		Charge: charge, Current: r.QRRCurrent.V, Slope: r.QRRDidt.V,
		CurrentExponent: r.QRRCurrentExponent.V, SlopeExponent: r.QRRDidtExponent.V,
		Tau: r.QRRTau.V, Softness: r.Softness.V,
	}
}

func resistanceOf(s *MOSFET) device.Resistance {
	var c device.Bounded
	if fitted := newCurve(s.RdsOnCurve); fitted != nil {
		c = fitted
	}
	return device.NewResistance(s.RdsOn.V, s.RdsOnHotRatio.V, c)
}

// chargeOf takes the stated charge before the capacitance.
func chargeOf(q, e, at, c, cAt Num) device.Charge {
	switch {
	case q.V > 0:
		return device.ChargeOf(q.V, e.V, at.V, e.V > 0)
	case c.V > 0:
		return device.ChargeOfCapacitance(c.V, cAt.V)
	}
	return device.Charge{}
}

func (m *Model) prepareInductor(l *Inductor) {
	m.dcr = l.DCR.V
	m.theta[inductorHeat] = l.ThetaJA.V
	var area magnetic.Area
	if fitted := newCurve(l.LCurve); fitted != nil {
		area = fitted
	}
	m.linkage = magnetic.NewLinkage(l.Inductance.V, l.ISat.V, l.SatDrop.V, area)
	m.law = m.linkage
	m.winding = windingOf(l)
	m.spectrum = magnetic.NewSpectrum(m.winding, m.frequency)
	if l.Core != nil {
		m.core = coreOf(l.Core, l.Inductance.V, m.frequency)
	}
}

func windingOf(l *Inductor) magnetic.Winding {
	switch w := l.Winding; {
	case len(l.ACCurve) > 0:
		return magnetic.CurveWinding(newLogCurve(l.ACCurve))
	case w == nil:
		return magnetic.Winding{}
	case w.Conductor == "foil":
		return magnetic.FoilWinding(w.Thickness.V, w.Layers.V, w.Porosity.V)
	default:
		return magnetic.RoundWinding(w.Diameter.V, w.Layers.V, w.Porosity.V)
	}
}

func coreOf(c *Core, inductance, frequency float64) magnetic.Core {
	s := magnetic.Steinmetz{Alpha: c.Alpha.V, Beta: c.Beta.V, CT0: c.CT0.V, CT1: c.CT1.V, CT2: c.CT2.V}
	if !c.CT0.Stated {
		s.CT0 = 1
	}
	if c.ReferencePower.Stated {
		return magnetic.CatalogueCore(c.ReferencePower.V, c.ReferenceFrequency.V, c.ReferenceRipple.V, inductance, s, frequency)
	}
	return magnetic.MaterialCore(c.Volume.V, c.Area.V, c.Turns.V, c.K.V, s, frequency)
}

func (m *Model) prepareSeries() {
	for _, r := range m.design.Series {
		switch r.Location {
		case "inductor":
			m.seriesOn += r.Resistance.V
			m.seriesOff += r.Resistance.V
		case "switch":
			m.seriesOn += r.Resistance.V
		case "rectifier":
			m.seriesOff += r.Resistance.V
		}
	}
}
