package budget

import (
	"fmt"
	"math"
)

// What follows remarks on the models, the supply, the hazards and the whole.

func recoverySlope(m *Model, b *Budget, s *situation) []observation {
	if s.slope == 0 || m.recovery.Slope == 0 {
		return nil
	}
	ratio := s.slope / m.recovery.Slope
	if !(ratio > 5) {
		return nil
	}
	return []observation{{Finding{Level: Note, Part: "rectifier", Rule: "recovery_slope", Value: ratio, Limit: 5, Source: practice,
		Message: fmt.Sprintf("the current falls %.3g times faster than where the recovery charge is stated: it is extrapolated", ratio)}, "", ratio}}
}

func outsideCurve(m *Model, b *Budget, s *situation) (list []observation) {
	for i := range b.Items {
		if it := &b.Items[i]; it.Outside {
			list = append(list, observation{Finding{Level: Note, Part: it.Part, Rule: "outside_curve", Value: it.Power, Unit: "W", Source: "the curve entered",
				Message: fmt.Sprintf("%s lies outside its curve, whose end value was held; more rows would cover it", words(it.Kind))}, it.Kind, it.Power})
		}
	}
	return list
}

func supplyLow(m *Model, b *Budget, s *situation) []observation {
	d := m.design.Drive
	if d.FedFrom == "" || d.FedFrom == "rail" {
		return nil
	}
	feed, swing := m.feed(d.FedFrom, b.Vin), d.Voltage.V-d.VoltageOff.V
	if !(feed < swing) {
		return nil
	}
	return []observation{{Finding{Level: Caution, Part: "drive", Rule: "supply_low", Value: feed, Limit: swing, Unit: "V", Source: practice,
		Message: fmt.Sprintf("the drive is fed from %.4g V, less than its swing of %.4g V; it needs a rail of its own or a lower drive voltage", feed, swing)}, "", -feed}}
}

// hazard is the voltage above which touchable parts can be hazardous, V dc; touch the
// temperature above which a metal surface burns within seconds, °C. Source: IEC
// 62368-1, ES1 and TS1 (from memory).
const (
	hazard = 60.0
	touch  = 60.0
)

func hazardVoltage(m *Model, b *Budget, s *situation) []observation {
	highest := math.Max(m.vout, math.Max(b.Vin, s.frame.blocking))
	if !(highest > hazard) {
		return nil
	}
	return []observation{{Finding{Level: Caution, Rule: "hazard_voltage", Value: highest, Limit: hazard, Unit: "V", Source: safety,
		Message: fmt.Sprintf("%.4g V dc stands in the stage: above %g V touchable parts can be hazardous, also after switching off while capacitors hold charge", highest, hazard)}, "", highest}}
}

func hotSurface(m *Model, b *Budget, s *situation) (list []observation) {
	for part, t := range s.temperature {
		if t > touch {
			list = append(list, observation{Finding{Level: Note, Part: partNames[part], Rule: "hot_surface", Value: t, Limit: touch, Unit: "°C", Source: safety,
				Message: fmt.Sprintf("it reaches %.0f °C: surfaces above about %g °C burn", t, touch)}, "", t})
		}
	}
	return list
}

// implausible says what no single rating does: that the whole can't be meant.
func implausible(m *Model, b *Budget, s *situation) []observation {
	if b.Iout == 0 || b.Loss <= b.Pout || b.Iout < plausibleShare*m.design.Output.Current.V {
		return nil
	}
	var worst entry
	most := 0.0
	for _, e := range m.entries {
		if p := e.power(s, nil); p > most {
			worst, most = e, p
		}
	}
	return []observation{{Finding{Level: Caution, Part: worst.part, Rule: "implausible", Value: b.Loss, Limit: b.Pout, Unit: "W", Source: practice,
		Message: fmt.Sprintf("more is lost than delivered, most of it in %s: look for an entry with a wrong prefix or unit", words(worst.kind))}, "", b.Loss / b.Pout}}
}

// plausibleShare is the share of full load below which a converter may well lose more
// than it delivers.
const plausibleShare = 0.2
