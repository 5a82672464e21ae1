package budget

import "fmt"

// doubtful names entries that contradict each other or that another one displaces.
func (m *Model) doubtful() (list []observation) {
	m.design.mosfets(func(path string, s *MOSFET) {
		if parts := s.QGS2.V + s.QGD.V; s.QG.V < parts*(1-rounding) {
			list = append(list, observation{aspect: "gate", Finding: Finding{Level: Caution, Part: partOf(path), Rule: "gate_charge", Value: s.QG.V, Limit: parts, Unit: "C", Source: "the gate-charge curve",
				Message: "the total gate charge is less than threshold-to-plateau and Miller charge together; one of the three is wrong"}})
		}
	})
	list = append(list, m.displaced()...)
	return append(list, m.nothingToRecover()...)
}

// rounding is by how much a sum of entries may miss what was meant as their sum.
const rounding = 1e-9

func partOf(path string) string {
	if path == "sync_switch" {
		return "rectifier"
	}
	return path
}

// nothingToRecover says that the capacitive charge leaves nothing of a stated
// recovery charge.
func (m *Model) nothingToRecover() []observation {
	stated := orZero(m.design.Diode).Recovery
	if m.sync {
		stated = m.design.SyncSwitch.Recovery
	}
	if stated.QRR.V == 0 || m.recovery.Charge > 0 {
		return nil
	}
	held := m.rectifierCharge.At(stated.QRRVoltage.V)
	return []observation{{Finding: Finding{Level: Caution, Part: "rectifier", Rule: "recovery_charge", Value: stated.QRR.V, Limit: held, Unit: "C", Source: "the recovery model",
		Message: "the stated recovery charge is no more than the capacitive charge at its voltage, so recovery counts as 0; leave that voltage out if the charge holds no capacitive part"}}}
}

// displaced names entries that count for nothing beside another one.
func (m *Model) displaced() (list []observation) {
	l, s := m.design.Inductor, m.design.Switch
	for _, e := range []struct {
		part, unused, by string
		is               bool
	}{
		{"switch", "the hot ratio", "the curve of on-resistance", s.RdsOnHotRatio.Stated && len(s.RdsOnCurve) > 0},
		{"switch", "the output capacitance", "the output charge", s.QOSS.V > 0 && s.COSS.V > 0},
		{"inductor", "the saturation current's drop", "the curve of inductance", l.SatDrop.V > 0 && len(l.LCurve) > 0},
		{"inductor", "the winding", "the curve of ac resistance", l.Winding != nil && len(l.ACCurve) > 0},
	} {
		if e.is {
			list = append(list, observation{aspect: e.unused, Finding: Finding{Level: Note, Part: e.part, Rule: "not_used", Source: "the entries of the design",
				Message: fmt.Sprintf("%s is not used: %s takes precedence", e.unused, e.by)}})
		}
	}
	if first := firstInductance(l); first > 0 && (first > 2*l.Inductance.V || first < l.Inductance.V/2) {
		list = append(list, observation{Finding: Finding{Level: Caution, Part: "inductor", Rule: "inductance", Value: l.Inductance.V, Limit: first, Unit: "H", Source: "the entries of the design",
			Message: "the inductance and the start of its curve are more than a factor of 2 apart; the curve is used, one of them is wrong"}})
	}
	return list
}

func firstInductance(l *Inductor) float64 {
	if len(l.LCurve) == 0 {
		return 0
	}
	return l.LCurve[0][1]
}
