package budget

import (
	"math"
	"math/rand/v2"
)

// chance draws random but plausible designs; a seed gives the same design again.
type chance struct{ *rand.Rand }

func newChance(seed uint64) chance { return chance{rand.New(rand.NewPCG(seed, 1))} }

// between draws evenly in the logarithm.
func (c chance) between(low, high float64) float64 {
	return low * math.Exp(c.Float64()*math.Log(high/low))
}

func (c chance) num(low, high float64) Num { return N(c.between(low, high)) }

func (c chance) maybe(share float64) bool { return c.Float64() < share }

// design draws a design of any topology with most of the optional entries there now
// and then. Stress above 1 makes parts leakier and hotter than anyone would build
// them.
func (c chance) design(stress float64) *Design {
	d := &Design{Format: Format, Name: "random", Rectifier: "diode"}
	d.Topology = [...]string{"boost", "buck", "buck_boost"}[c.IntN(3)]
	vin, ratio := c.between(3, 200), c.between(1.1, 6)
	vout := vin * ratio
	switch d.Topology {
	case "buck":
		vout = vin / ratio
	case "buck_boost":
		vout = vin * c.between(0.2, 5)
	}
	power := c.between(0.5, 500)
	d.Frequency = c.num(4e4, 1.5e6)
	d.Input = Input{N(vin * 0.95), N(vin), N(vin * 1.05)}
	d.Output = Output{N(vout), N(power / vout)}
	d.Ambient = N(25 + 50*c.Float64())
	if c.maybe(0.4) {
		d.EnclosureTheta = N(c.between(1, 10) / power)
	}
	c.parts(d, vin, vout, power, stress)
	return d
}

func (c chance) parts(d *Design, vin, vout, power, stress float64) {
	block := map[string]float64{"boost": vout, "buck": vin, "buck_boost": vin + vout}[d.Topology]
	il := map[string]float64{"boost": power / vin, "buck": power / vout, "buck_boost": power/vin + power/vout}[d.Topology]
	r := 0.02 * block / il // a scale of resistance that costs a few per cent
	theta := c.between(2, 40) * stress / (0.02 * power)
	d.Drive = &Drive{Voltage: N(8), RSource: c.num(0.5, 5), RSink: c.num(0.5, 5), RGateOn: c.num(0.5, 10)}
	d.Drive.FedFrom = [...]string{"rail", "input", "output"}[c.IntN(3)]
	d.Switch = c.mosfet(block, il, r, theta, d.Frequency.V)
	if c.maybe(0.4) {
		d.Rectifier = "synchronous"
		d.SyncSwitch = c.mosfet(block, il, r, theta, d.Frequency.V)
		d.LightLoad = [...]string{"forced", "diode_emulation"}[c.IntN(2)]
		d.Drive.DeadTimeOn, d.Drive.DeadTimeOff = N(c.between(1e-3, 2e-2)/d.Frequency.V), N(c.between(1e-3, 2e-2)/d.Frequency.V)
	} else {
		d.Diode = c.diode(block, il, r, theta, stress)
	}
	d.Inductor = c.inductor(d, block, il, r, theta)
	d.InputCapacitor = &Capacitor{Capacitance: N(1e-5), ESR: c.num(0.02*r, r)}
	d.OutputCapacitor = &Capacitor{Capacitance: N(1e-5), ESR: c.num(0.02*r, r)}
	if c.maybe(0.5) {
		d.Controller = &Controller{Current: N(2e-3 * power / vin), FedFrom: [...]string{"input", "output"}[c.IntN(2)]}
	}
	for _, place := range []string{"input", "inductor", "switch", "rectifier", "output"} {
		if c.maybe(0.3) {
			d.Series = append(d.Series, SeriesResistance{place + " copper", place, c.num(0.01*r, 0.3*r)})
		}
	}
}

func (c chance) mosfet(block, il, r, theta, f float64) *MOSFET {
	q := c.between(0.003, 0.03) / f * il // charge that costs a share of the period
	m := &MOSFET{VdsRating: N(block * 1.5), RdsOn: c.num(0.05*r, r), RdsOnHotRatio: c.num(1.3, 2.3),
		VThreshold: N(2), VPlateau: N(3.5), QGS2: N(q * 0.1), QGD: N(q * 0.3), QG: N(q), ThetaJA: N(theta)}
	if c.maybe(0.3) {
		m.VPlateauCurrent = N(il)
	}
	if c.maybe(0.3) {
		m.LSource = c.num(1e-10, 3e-9)
	}
	if c.maybe(0.7) {
		m.QOSS, m.QOSSAt = N(q*c.between(0.3, 3)), N(block*c.between(0.5, 1))
	}
	c.recovery(&m.Recovery, q, il, f)
	return m
}

func (c chance) recovery(r *Recovery, q, il, f float64) {
	if !c.maybe(0.6) {
		return
	}
	r.QRR, r.QRRCurrent, r.QRRDidt = N(q*c.between(0.3, 3)), N(il), N(100*il*f*c.between(0.3, 3))
	if c.maybe(0.4) {
		r.QRRTau = N(c.between(0.002, 0.05) / f)
	}
}

func (c chance) diode(block, il, r, theta, stress float64) *Diode {
	d := &Diode{VRRM: N(block * 1.5), VF0: c.num(0.3, 0.7), VF0Slope: N(-0.0015 * c.Float64()), RD: c.num(0.05*r, 0.5*r), RDSlope: N(0.001), ThetaJA: N(theta)}
	if c.maybe(0.7) {
		d.ILeak, d.ILeakVoltage = N(il*c.between(1e-5, 3e-4)*stress), N(block)
		d.ILeakTemperature, d.ILeakDoubling = N(60), c.num(9, 14)
	}
	if c.maybe(0.6) {
		d.CJ, d.CJAt = N(il*c.between(1e-11, 3e-10)), N(block/2)
	}
	return d
}

func (c chance) inductor(d *Design, block, il, r, theta float64) *Inductor {
	l := &Inductor{Inductance: N(block / 4 / d.Frequency.V / (il * c.between(0.1, 3))), DCR: c.num(0.05*r, r), ThetaJA: N(theta)}
	if c.maybe(0.5) {
		l.ISat, l.SatDrop = N(il*c.between(0.8, 2)), N(0.3)
	}
	switch c.IntN(3) {
	case 0:
		l.ACCurve = Curve{{d.Frequency.V / 10, 1}, {d.Frequency.V, 3}, {d.Frequency.V * 10, 20}}
	case 1:
		l.Winding = &Winding{Conductor: "round", Diameter: c.num(2e-4, 1e-3), Layers: N(float64(1 + c.IntN(4))), Porosity: N(0.8)}
	}
	if c.maybe(0.8) {
		l.Core = &Core{ReferencePower: N(0.01 * block * il), ReferenceFrequency: d.Frequency, ReferenceRipple: N(il * 0.4), Alpha: c.num(1.2, 1.8), Beta: c.num(2, 2.8)}
		if c.maybe(0.4) {
			l.Core.CT0, l.Core.CT1, l.Core.CT2 = N(1.85), N(0.0185), N(0.0001)
		}
	}
	return l
}
