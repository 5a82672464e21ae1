package budget_test

import (
	"math"
	"math/rand/v2"

	"lossbook/budget"
)

// stages draws power stages whose currents can be had in both ways: nothing is lost
// but in resistances and the diode's drop, and nothing depends on temperature.
type stages struct{ *rand.Rand }

// between draws evenly in the logarithm.
func (r stages) between(low, high float64) float64 {
	return low * math.Exp(r.Float64()*math.Log(high/low))
}

// stage is one of them, as it is entered and as a circuit.
type stage struct {
	design  budget.Design
	point   budget.Point
	circuit circuit
}

// spice says how far a stage is from one with straight currents: the bounds between
// which the draws lie.
type spice struct {
	resistance [2]float64 // drop of each resistance at the mean current, as a share of the blocking voltage
	ripple     [2]float64 // peak to peak over mean inductor current
	charge     [2]float64 // ripple voltage of each capacitor by its charge, as a share of its voltage
	esr        [2]float64 // the same by its series resistance
	load       [2]float64 // as a share of full load
	saturation [2]float64 // share of the inductance that is lost at the mean current; 0 of none
}

// draw makes a stage of the topology and rectifier given; the load is drawn down from
// full load, of which all shares of the spice are.
func (r stages) draw(topology, rectifier string, s spice) stage {
	in := func(b [2]float64) float64 { return r.between(b[0], b[1]) }
	vin, power, f := r.between(3, 400), r.between(1, 1000), r.between(5e4, 2e6)
	vout := vin * r.between(1.15, 6)
	c := circuit{period: 1 / f, vin: vin, rectifies: rectifier != "forced"}
	switch topology {
	case "boost":
		c.on, c.off = path{in: true}, path{in: true, out: true}
	case "buck":
		vout = vin / r.between(1.15, 8)
		c.on, c.off = path{in: true, out: true}, path{out: true}
	case "buck_boost":
		vout = vin * r.between(0.2, 4)
		c.on, c.off = path{in: true}, path{out: true}
	}
	c.vout, c.load = vout, power/vout
	von := unit(c.on.in)*vin - unit(c.on.out)*vout
	voff := unit(c.off.out)*vout - unit(c.off.in)*vin
	mean, d := c.meanGuess(), voff/(von+voff)
	c.inductance = von * d * c.period / (mean * in(s.ripple))
	scale := (von + voff) / mean // Ω that drop the whole blocking voltage
	resistance := func() float64 { return scale * in(s.resistance) }
	winding, rds, rectifierOhm := resistance(), resistance(), resistance()
	at := map[string]float64{}
	for _, place := range []string{"inductor", "switch", "rectifier"} {
		if r.Float64() < 0.4 {
			at[place] = resistance() / 2
		}
	}
	c.on.resistance = winding + rds + at["inductor"] + at["switch"]
	c.off.resistance = winding + rectifierOhm + at["inductor"] + at["rectifier"]
	if rectifier == "diode" {
		c.off.drop = r.between(0.002, 0.05) * (von + voff)
	}
	c.guessOn, c.guessTotal = von, von+voff+c.off.drop
	drawn := map[bool]float64{true: d * (1 - d) * mean, false: d * (1 - d) / 8 * mean}
	square := unit(topology != "boost") + unit(topology == "boost")*0.3
	c.inputC = drawn[topology != "boost"] * c.period / (vin * in(s.charge))
	c.outputC = drawn[topology != "buck"] * c.period / (vout * in(s.charge))
	c.inputESR = in(s.esr) * vin / (mean * square)
	c.outputESR = in(s.esr) * vout / mean
	if s.saturation[0] > 0 {
		lost := in(s.saturation)
		c.kink = math.Sqrt(lost/(1-lost)) / mean
	}
	full := c.load
	c.load *= in(s.load)
	return stage{entered(topology, rectifier, &c, full, winding, rds, rectifierOhm, at), budget.Point{Vin: vin, Iout: c.load, Ambient: 20}, c}
}

// entered writes a stage as a design. Copper has its stated resistance at 20 °C.
func entered(topology, rectifier string, c *circuit, full, winding, rds, rectifierOhm float64, at map[string]float64) budget.Design {
	n := budget.N
	mosfet := func(ohm float64) *budget.MOSFET {
		return &budget.MOSFET{VdsRating: n(4 * (c.vin + c.vout)), RdsOn: n(ohm), VThreshold: n(2), VPlateau: n(3), QGS2: n(0), QGD: n(0), QG: n(0), ThetaJA: n(0)}
	}
	d := budget.Design{Format: budget.Format, Name: "two ways", Topology: topology, Rectifier: "synchronous",
		Frequency: n(1 / c.period), Input: budget.Input{Min: n(c.vin), Nominal: n(c.vin), Max: n(c.vin)}, Output: budget.Output{Voltage: n(c.vout), Current: n(full)},
		Switch: mosfet(rds), Inductor: &budget.Inductor{Inductance: n(c.inductance), DCR: n(winding), ThetaJA: n(0)},
		InputCapacitor:  &budget.Capacitor{Capacitance: n(c.inputC), ESR: n(c.inputESR)},
		OutputCapacitor: &budget.Capacitor{Capacitance: n(c.outputC), ESR: n(c.outputESR)},
		Drive:           &budget.Drive{Voltage: n(10), RSource: n(1), RSink: n(1)}}
	if c.kink > 0 {
		d.Inductor.ISat, d.Inductor.SatDrop = n(1/c.kink), n(0.5)
	}
	if rectifier == "diode" {
		d.Rectifier = "diode"
		d.Diode = &budget.Diode{VRRM: n(4 * (c.vin + c.vout)), VF0: n(c.off.drop), RD: n(rectifierOhm), ThetaJA: n(0)}
	} else {
		d.SyncSwitch, d.LightLoad = mosfet(rectifierOhm), rectifier
	}
	for _, place := range []string{"inductor", "switch", "rectifier"} {
		if at[place] > 0 {
			d.Series = append(d.Series, budget.SeriesResistance{Name: place + " copper", Location: place, Resistance: n(at[place])})
		}
	}
	return d
}
