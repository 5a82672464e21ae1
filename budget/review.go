package budget

import (
	"fmt"
	"strings"
)

// designWide returns what does not belong to a single point.
func (m *Model) designWide() []observation {
	var list []observation
	list = append(list, m.notStated()...)
	list = append(list, m.noDeadTime()...)
	list = append(list, m.doubtful()...)
	list = append(list, m.ripple()...)
	return append(list, m.discontinuous()...)
}

// notStated names the losses that are 0 only because nothing was entered for them.
func (m *Model) notStated() (list []observation) {
	d := m.design
	list = unstated(list, "switch", []named{{"thermal resistance", d.Switch.ThetaJA}, {"output charge", either(d.Switch.QOSS, d.Switch.COSS)}})
	if m.sync {
		r := d.SyncSwitch
		list = unstated(list, "rectifier", []named{{"thermal resistance", r.ThetaJA}, {"output charge", either(r.QOSS, r.COSS)}, {"recovery charge", r.QRR}})
	} else {
		r := d.Diode
		list = unstated(list, "rectifier", []named{{"thermal resistance", r.ThetaJA}, {"capacitive charge", either(r.QC, r.CJ)}, {"recovery charge", r.QRR}, {"leakage", r.ILeak}})
	}
	list = unstated(list, "inductor", []named{{"thermal resistance", d.Inductor.ThetaJA}, {"core loss", Num{Stated: d.Inductor.Core != nil}}, {"ac resistance", Num{Stated: m.winding.Known()}}})
	list = unstated(list, "input_capacitor", []named{{"series resistance", orZero(d.InputCapacitor).ESR}})
	return unstated(list, "output_capacitor", []named{{"series resistance", orZero(d.OutputCapacitor).ESR}})
}

func either(a, b Num) Num { return Num{Stated: a.Stated || b.Stated} }

func unstated(list []observation, part string, entries []named) []observation {
	var absent []string
	for _, e := range entries {
		if !e.num.Stated {
			absent = append(absent, e.name)
		}
	}
	if len(absent) == 0 {
		return list
	}
	verb := "is"
	if len(absent) > 1 {
		verb = "are"
	}
	return append(list, observation{Finding: Finding{Level: Note, Part: part, Rule: "not_stated", Source: "the entries of the design",
		Message: fmt.Sprintf("%s %s not stated: the loss is a lower bound (a stated 0 says there is none)", listed(absent), verb)}})
}

func listed(words []string) string {
	last := len(words) - 1
	if last == 0 {
		return words[0]
	}
	return strings.Join(words[:last], ", ") + " and " + words[last]
}

func (m *Model) noDeadTime() []observation {
	if !m.sync || m.recovery.Tau == 0 || m.design.Drive.DeadTimeOn.V > 0 {
		return nil
	}
	return []observation{{Finding: Finding{Level: Note, Part: "rectifier", Rule: "no_dead_time", Source: "the recovery model",
		Message: "with a carrier lifetime and no dead time before the switch turns on, the body diode stores nothing and recovery is 0; state the dead time"}}}
}

// Usual bounds of the ripple over the mean inductor current. Source: common practice.
const (
	rippleLow  = 0.2
	rippleHigh = 0.4
)

func (m *Model) ripple() []observation {
	var b Budget
	m.At(m.nominal(1), &b)
	if b.State != Settled || b.Inductor.Mean == 0 {
		return nil
	}
	ratio := (b.Inductor.Max - b.Inductor.Min) / b.Inductor.Mean
	limit, help := rippleHigh, "a larger inductance or a higher frequency lowers it"
	switch {
	case ratio < rippleLow:
		limit, help = rippleLow, "a smaller inductor would do"
	case ratio <= rippleHigh:
		return nil
	}
	at := b.Point
	return []observation{{Finding: Finding{Level: Note, Part: "inductor", Rule: "ripple", Value: ratio, Limit: limit, Source: practice, At: &at,
		Message: fmt.Sprintf("the ripple is %.3g %% of the mean current at full load and nominal input, usual are %.0f to %.0f %%; %s", 100*ratio, 100*rippleLow, 100*rippleHigh, help)}}}
}

// nominal returns the point at a share of full load and the nominal input.
func (m *Model) nominal(share float64) Point {
	return Point{Vin: m.design.Input.Nominal.V, Iout: share * m.design.Output.Current.V, Ambient: m.design.Ambient.V}
}

// least is the share of full load below which discontinuous conduction is not worth a
// word, and the width to which its boundary is found.
const least = 0.002

// discontinuous finds the load below which the current is discontinuous at the
// nominal input, by halving: to 0.2 % of full load.
func (m *Model) discontinuous() []observation {
	if m.forced || !m.discontinuousAt(least) {
		return nil
	}
	message, low, high := "the current is discontinuous up to full load at the nominal input", 0.0, 1.0
	if !m.discontinuousAt(1) {
		for high-low > least {
			if mid := (low + high) / 2; m.discontinuousAt(mid) {
				low = mid
			} else {
				high = mid
			}
		}
		message = fmt.Sprintf("below %.3g %% of full load the current is discontinuous at the nominal input", 100*high)
	}
	at := m.nominal(high)
	return []observation{{Finding: Finding{Level: Note, Part: "inductor", Rule: "discontinuous", Value: high, Limit: 1, Source: practice, At: &at, Message: message}}}
}

func (m *Model) discontinuousAt(share float64) bool {
	var b Budget
	m.At(m.nominal(share), &b)
	return b.State == Settled && b.Mode == DCM
}

// words turns a kind into what a person reads: "turn_on" into "turn on".
func words(kind string) string { return strings.ReplaceAll(kind, "_", " ") }
