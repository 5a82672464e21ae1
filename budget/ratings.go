package budget

import (
	"fmt"
	"math"
)

// What follows measures currents, voltages and temperatures against ratings.

// highest returns the highest input voltage to reckon with at a point.
func (m *Model) highest(p Point) float64 { return math.Max(p.Vin, m.design.Input.Max.V) }

func blockingVoltage(m *Model, b *Budget, s *situation) (list []observation) {
	vb := m.topology.Blocking(m.highest(b.Point), m.vout)
	help := "a part rated higher leaves room for ringing and surges"
	list = share(list, gauge{part: "switch", rule: "blocking_voltage", caution: 0.8, source: "80 %: " + practice},
		vb, m.design.Switch.VdsRating.V, "the blocking voltage at the highest input", "V", help)
	rating := orZero(m.design.Diode).VRRM
	if m.sync {
		rating = m.design.SyncSwitch.VdsRating
	}
	return share(list, gauge{part: "rectifier", rule: "blocking_voltage", caution: 0.8, source: "80 %: " + practice},
		vb, rating.V, "the blocking voltage at the highest input", "V", help)
}

func currentRating(m *Model, b *Budget, s *situation) (list []observation) {
	g := gauge{part: "switch", rule: "current_rating", caution: 0.8, source: practice}
	list = share(list, g, b.SwitchRMS, m.design.Switch.IDRating.V, "the rms current", "A", "a larger part, or two in parallel, would carry it with room")
	g.part = "rectifier"
	if m.sync {
		return share(list, g, b.RectifierRMS, m.design.SyncSwitch.IDRating.V, "the rms current", "A", "a larger part, or two in parallel, would carry it with room")
	}
	return share(list, g, b.RectifierMean, m.design.Diode.IFRating.V, "the mean current", "A", "a larger diode would carry it with room")
}

// limits returns the highest temperature of each part in °C, by its entry or its
// default.
func (m *Model) limits() [3]float64 {
	rectifier := orZero(m.design.Diode).TjMax.V
	if m.sync {
		rectifier = m.design.SyncSwitch.TjMax.V
	}
	return [3]float64{m.design.Switch.TjMax.V, rectifier, m.design.Inductor.TMax.V}
}

func junction(m *Model, b *Budget, s *situation) (list []observation) {
	for part := switchHeat; part <= rectifierHeat; part++ {
		t, limit := s.temperature[part], m.limits()[part]
		list = gauge{part: partNames[part], rule: "junction", value: t, caution: limit - 25, limit: limit, unit: "°C", source: practice,
			message: func() string {
				return fmt.Sprintf("the junction reaches %.0f °C of %.0f °C allowed; better cooling or a part with less loss lowers it", t, limit)
			}}.read(list)
	}
	return list
}

func thermalGain(m *Model, b *Budget, s *situation) (list []observation) {
	for part, g := range m.gains(s) {
		if !finite(g) {
			continue // the models end here on both sides: there is no slope to speak of
		}
		list = gauge{part: partNames[part], rule: "thermal_gain", value: g, caution: 0.5, limit: 1, source: runaways,
			message: func() string {
				return fmt.Sprintf("a kelvin of heating brings %.2g kelvin more; at 1 the part runs away: lower its thermal resistance or its temperature-dependent loss", g)
			}}.read(list)
	}
	return list
}

func saturation(m *Model, b *Budget, s *situation) []observation {
	return share(nil, gauge{part: "inductor", rule: "saturation", caution: 0.8, source: practice},
		b.Inductor.Max, m.design.Inductor.ISat.V, "the peak current", "A", "a larger core or less ripple keeps it from saturating")
}

func inductorHeatLimits(m *Model, b *Budget, s *situation) (list []observation) {
	l := m.design.Inductor
	list = share(list, gauge{part: "inductor", rule: "inductor_heat", aspect: "rms", caution: 0.9, source: practice},
		b.Inductor.RMS, l.IRMSRating.V, "the rms current", "A", "a larger inductor runs cooler")
	t, limit := b.Temperatures.Inductor, l.TMax.V
	return gauge{part: "inductor", rule: "inductor_heat", aspect: "temperature", value: t, caution: limit - 10, limit: limit, unit: "°C", source: practice,
		message: func() string {
			return fmt.Sprintf("the winding reaches %.0f °C of %.0f °C allowed; a larger inductor or more air lowers it", t, limit)
		}}.read(list)
}

func capacitorLimits(m *Model, b *Budget, s *situation) (list []observation) {
	for _, c := range []struct {
		part         string
		c            *Capacitor
		ripple, volt float64
	}{
		{"input_capacitor", m.design.InputCapacitor, b.InputCapRMS, m.highest(b.Point)},
		{"output_capacitor", m.design.OutputCapacitor, b.OutputCapRMS, m.vout},
	} {
		if c.c == nil {
			continue
		}
		g := gauge{part: c.part, rule: "capacitor", aspect: "ripple", caution: 0.8, source: practice}
		list = share(list, g, c.ripple, c.c.RippleRating.V, "the ripple current", "A rms", "more pieces in parallel share it")
		g.aspect = "voltage"
		list = share(list, g, c.volt, c.c.VoltageRating.V, "the voltage", "V", "a higher rating leaves room for surges")
	}
	return list
}

func modulation(m *Model, b *Budget, s *situation) (list []observation) {
	limits := orZero(m.design.Controller)
	if m.design.Controller == nil {
		limits.DutyMax.V = fieldIndex["controller.duty_max"].Default
	}
	if limits.DutyMax.V > 0 {
		list = gauge{part: "controller", rule: "modulation", aspect: "duty", value: b.Duty / limits.DutyMax.V, caution: 0.9, limit: 1, source: controller,
			message: func() string {
				return fmt.Sprintf("the duty is %.3g of %.3g possible; the output sags where it is reached", b.Duty, limits.DutyMax.V)
			}}.read(list)
	}
	if limits.OnTimeMin.V > 0 && b.OnTime > 0 {
		list = gauge{part: "controller", rule: "modulation", aspect: "on_time", value: limits.OnTimeMin.V / b.OnTime, caution: 0.9, limit: 1, source: controller,
			message: func() string {
				return fmt.Sprintf("the on-time is %.3g ns, the shortest possible %.3g ns; below it the controller skips pulses, which this budget does not hold", 1e9*b.OnTime, 1e9*limits.OnTimeMin.V)
			}}.read(list)
	}
	return list
}

// headroom is what a drive should have above the plateau, in V.
const headroom = 2

func driveHeadroom(m *Model, b *Budget, s *situation) (list []observation) {
	list = m.headroomOf(list, "switch", s.off.Plateau)
	if m.sync {
		list = m.headroomOf(list, "rectifier", m.design.SyncSwitch.VPlateau.V)
	}
	return list
}

func (m *Model) headroomOf(list []observation, part string, plateau float64) []observation {
	left := m.design.Drive.Voltage.V - plateau
	if !(left < headroom) {
		return list
	}
	o := observation{Finding{Level: Caution, Part: part, Rule: "drive_headroom", Value: left, Unit: "V", Source: practice,
		Message: fmt.Sprintf("the drive voltage is only %.2g V above the plateau at the peak current; a higher drive turns on faster and lower in resistance", left)}, "", -left}
	if left < 0 {
		o.Level = Exceeded
	}
	return append(list, o)
}
