package budget

import "fmt"

// rules are what must hold between fields; each adds what it finds wrong. A new
// rule is one function and one row here.
var rules = []func(*verdict){
	inputOrder, ambientRange, gateVoltages, deadTimes, outputCharges, recoveryStated, leakageStated,
	saturationStated, windingGeometry, coreKind, coreTemperature, seriesNames,
}

func inputOrder(v *verdict) {
	in := v.design.Input
	if in.Min.Stated && in.Nominal.Stated && in.Min.V > in.Nominal.V {
		v.wrong("input.nominal", "must not be below the lowest input, %g V", in.Min.V)
	}
	if in.Nominal.Stated && in.Max.Stated && in.Nominal.V > in.Max.V {
		v.wrong("input.max", "must not be below the nominal input, %g V", in.Nominal.V)
	} else if in.Min.Stated && in.Max.Stated && in.Min.V > in.Max.V {
		v.wrong("input.max", "must not be below the lowest input, %g V", in.Min.V)
	}
}

func ambientRange(v *verdict) {
	if a := v.design.Ambient; a.Stated && a.V < absoluteZero {
		v.wrong("ambient", "must be %g °C or more", absoluteZero)
	}
}

// mosfets calls f for the MOSFETs in use.
func (d *Design) mosfets(f func(path string, m *MOSFET)) {
	if d.Switch != nil {
		f("switch", d.Switch)
	}
	if d.Rectifier == "synchronous" && d.SyncSwitch != nil {
		f("sync_switch", d.SyncSwitch)
	}
}

func gateVoltages(v *verdict) {
	v.design.mosfets(func(path string, m *MOSFET) {
		if !m.VPlateau.Stated {
			return
		}
		if m.VThreshold.Stated && m.VPlateau.V <= m.VThreshold.V {
			v.wrong(path+".v_plateau", "must be above the threshold, %g V", m.VThreshold.V)
		}
		if d := v.design.Drive; d != nil && d.Voltage.Stated && m.VPlateau.V >= d.Voltage.V {
			v.wrong(path+".v_plateau", "must be below the drive voltage, %g V", d.Voltage.V)
		}
	})
}

func deadTimes(v *verdict) {
	d, f := v.design.Drive, v.design.Frequency
	if d == nil || !f.Stated || f.V <= 0 {
		return
	}
	if limit := 1 / f.V / 2; d.DeadTimeOn.V+d.DeadTimeOff.V > limit {
		path := "drive.dead_time_on"
		if d.DeadTimeOff.V > d.DeadTimeOn.V {
			path = "drive.dead_time_off"
		}
		v.wrong(path, "both dead times together must be half a period at most, %.4g s", limit)
	}
}

// chargeEntries is one way of stating a junction's charge: the entries and where
// they stand.
type chargeEntries struct {
	charge, energy, at, capacitance, capacitanceAt           Num
	chargePath, energyPath, atPath, capPath, capacitancePath string
}

func outputCharges(v *verdict) {
	v.design.mosfets(func(path string, m *MOSFET) {
		v.charge(chargeEntries{m.QOSS, m.EOSS, m.QOSSAt, m.COSS, m.COSSAt,
			path + ".q_oss", path + ".e_oss", path + ".q_oss_at", path + ".c_oss", path + ".c_oss_at"})
	})
	if d := v.design.Diode; d != nil && v.design.uses("diode") {
		v.charge(chargeEntries{d.QC, d.EC, d.QCAt, d.CJ, d.CJAt,
			"diode.q_c", "diode.e_c", "diode.q_c_at", "diode.c_j", "diode.c_j_at"})
	}
}

func (v *verdict) charge(c chargeEntries) {
	if c.charge.V > 0 {
		v.needs(c.atPath, c.at, "the voltage the charge is given at")
	}
	if c.capacitance.V > 0 {
		v.needs(c.capacitancePath, c.capacitanceAt, "the voltage the capacitance is given at")
	}
	switch {
	case c.energy.V > 0 && c.charge.V <= 0:
		v.needs(c.chargePath, c.charge, "the charge that belongs to the energy")
	case c.energy.V > 0 && c.at.V > 0 && c.energy.V > c.charge.V*c.at.V:
		v.wrong(c.energyPath, "can't be more than charge times voltage, %.4g J", c.charge.V*c.at.V)
	}
}

func recoveryStated(v *verdict) {
	path, r := "", Recovery{}
	switch d := v.design; {
	case d.Rectifier == "diode" && d.Diode != nil:
		path, r = "diode", d.Diode.Recovery
	case d.Rectifier == "synchronous" && d.SyncSwitch != nil:
		path, r = "sync_switch", d.SyncSwitch.Recovery
	}
	if !(r.QRR.V > 0) {
		return
	}
	v.needs(path+".q_rr_current", r.QRRCurrent, "the forward current the recovery charge is given at")
	v.needs(path+".q_rr_didt", r.QRRDidt, "the slope the recovery charge is given at")
	if s := v.design.Switch; s != nil && s.QGS2.Stated && s.QGS2.V == 0 && s.LSource.V == 0 {
		v.wrong("switch.q_gs2", "must be above 0 (or state the source inductance): it sets the slope at which the rectifier recovers")
	}
}

func leakageStated(v *verdict) {
	if d := v.design.Diode; d != nil && v.design.uses("diode") && d.ILeak.V > 0 {
		v.needs("diode.i_leak_voltage", d.ILeakVoltage, "the voltage the leakage is given at")
	}
}

func saturationStated(v *verdict) {
	l := v.design.Inductor
	if l == nil || !(l.SatDrop.V > 0) {
		return
	}
	if l.SatDrop.V >= 1 {
		v.wrong("inductor.sat_drop", "must be below 1: the share of the inductance that is lost at the saturation current")
	}
	v.needs("inductor.i_sat", l.ISat, "the current at which the drop is reached")
}

func windingGeometry(v *verdict) {
	if v.design.Inductor == nil || v.design.Inductor.Winding == nil {
		return
	}
	const path = "inductor.winding."
	w := v.design.Inductor.Winding
	if w.Layers.Stated && w.Layers.V > 0 && w.Layers.V < 1 {
		v.wrong(path+"layers", "must be 1 or more")
	}
	right, wrong, r, x := "diameter", "thickness", w.Diameter, w.Thickness
	switch w.Conductor {
	case "foil":
		right, wrong, r, x = wrong, right, x, r
	case "round":
	default:
		return
	}
	if !r.Stated {
		v.missing(path+right, "is needed: the %s of a %s conductor", right, w.Conductor)
	}
	if x.Stated {
		v.wrong(path+wrong, "must be left out: a %s conductor has a %s", w.Conductor, right)
	}
}

// named is a number with the name of its field.
type named struct {
	name string
	num  Num
}

func stated(list []named) (count int) {
	for _, n := range list {
		if n.num.Stated {
			count++
		}
	}
	return count
}

func coreKind(v *verdict) {
	if v.design.Inductor == nil || v.design.Inductor.Core == nil {
		return
	}
	c := v.design.Inductor.Core
	material := []named{{"volume", c.Volume}, {"area", c.Area}, {"turns", c.Turns}, {"k", c.K}}
	catalogue := []named{{"reference_power", c.ReferencePower}, {"reference_frequency", c.ReferenceFrequency}, {"reference_ripple", c.ReferenceRipple}}
	kind := catalogue
	switch m, k := stated(material), stated(catalogue); {
	case m > 0 && k > 0:
		for _, n := range material {
			if n.num.Stated {
				v.wrong("inductor.core."+n.name, "must be left out beside a reference loss: state the core by its material and size, or by a reference loss")
			}
		}
		return
	case m > 0:
		kind = material
	}
	for _, n := range kind {
		if !n.num.Stated {
			v.missing("inductor.core."+n.name, "is needed: a core is stated by reference_power, reference_frequency and reference_ripple, or by volume, area, turns and k")
		}
	}
}

func coreTemperature(v *verdict) {
	if v.design.Inductor == nil || v.design.Inductor.Core == nil {
		return
	}
	c := v.design.Inductor.Core
	factors := []named{{"ct0", c.CT0}, {"ct1", c.CT1}, {"ct2", c.CT2}}
	if n := stated(factors); n == 0 || n == len(factors) {
		return
	}
	for _, f := range factors {
		if !f.num.Stated {
			v.missing("inductor.core."+f.name, "is needed: ct0, ct1 and ct2 are stated together or not at all")
		}
	}
}

func seriesNames(v *verdict) {
	first := map[string]int{}
	for i, r := range v.design.Series {
		if r.Name == "" {
			continue
		}
		if before, taken := first[r.Name]; taken {
			v.wrong(fmt.Sprintf("series_resistances[%d].name", i), "is used twice, here and in row %d; each needs a name of its own", before+1)
			continue
		}
		first[r.Name] = i
	}
}
