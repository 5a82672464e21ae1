package budget

import (
	"slices"
	"strconv"
	"strings"

	"lossbook/budget/formula"
)

// Subtotal returns how the losses of some parts add up, in the order of the ledger.
// There is none of a point without figures.
func (m *Model) Subtotal(b *Budget, parts ...string) (Working, bool) {
	if b.State != Settled {
		return Working{}, false
	}
	st := Step{Term: Term{Name: "P", Unit: "W"}, Source: bySum}
	for _, it := range b.Items {
		if slices.Contains(parts, it.Part) {
			st.add(summand(it, parts, len(st.Terms)+1), it.Power)
		}
	}
	return totalled(st), true
}

// Loss returns how the whole loss of a budget adds up from its parts.
func (m *Model) Loss(b *Budget) (Working, bool) {
	if b.State != Settled {
		return Working{}, false
	}
	st := Step{Term: Term{Name: "P_loss", Unit: "W"}, Source: bySum}
	for i, it := range b.Items {
		if i > 0 && b.Items[i-1].Part == it.Part {
			st.Terms[len(st.Terms)-1].Value += it.Power
		} else {
			st.add("P_"+strings.TrimSuffix(it.Part, "_capacitor"), it.Power)
		}
	}
	w := totalled(st)
	w.follow(m.situationOf(b), &entry{})
	return w, true
}

const bySum = "the items of the ledger, added up"

func (st *Step) add(name string, power float64) { st.note(name, power, "W") }

// summand names an item within a sum: by its kind where only one part is added up, by
// its place among resistances, which have names of their own.
func summand(it Item, parts []string, place int) string {
	switch {
	case it.Part == layoutPart:
		return "P_" + strconv.Itoa(place)
	case len(parts) == 1 || it.Kind != "esr" && it.Kind != "rc":
		return "P_" + strings.ReplaceAll(it.Kind, "_", ",")
	}
	return "P_" + strings.TrimSuffix(it.Part, "_capacitor")
}

// totalled writes the sum of a step's terms; what is 0 is left out of it.
func totalled(st Step) Working {
	var names []string
	st.Terms = slices.DeleteFunc(st.Terms, func(t Term) bool { return t.Value == 0 })
	for _, t := range st.Terms {
		names = append(names, t.Name)
		st.Value += t.Value
	}
	if len(names) == 0 {
		st.found("Nothing is lost here.", "")
	} else {
		st.Formula = formula.Must(strings.Join(names, " + "))
	}
	return Working{Steps: []Step{st}}
}

var shareOfInput = how("P_out/(P_out + P_loss)", "input power is output power and all losses")

// EfficiencyWorking returns how the efficiency of a budget came about.
func (m *Model) EfficiencyWorking(b *Budget) (Working, bool) {
	if b.State != Settled {
		return Working{}, false
	}
	st := Step{Term: Term{Name: "η", Value: b.Efficiency}}
	st.by(shareOfInput)
	st.note("P_out", b.Pout, "W")
	st.note("P_loss", b.Loss, "W")
	if b.Pin == 0 {
		st = Step{Term: st.Term, Words: "Nothing is drawn."}
	}
	w := Working{Steps: []Step{st}}
	w.follow(m.situationOf(b), &entry{})
	return w, true
}

// TemperatureWorking returns how the temperature of a part came about: "switch",
// "rectifier" or "inductor".
func (m *Model) TemperatureWorking(b *Budget, part string) (Working, bool) {
	i := slices.Index(partNames[:], part)
	if b.State != Settled || i < 0 {
		return Working{}, false
	}
	s, e := m.situationOf(b), &entry{part: part, heats: heat(i)}
	st := Step{Term: Term{Name: [...]string{"T_j", "T_j", "T_L"}[i], Value: s.temperature[i], Unit: "°C"}}
	temperatureRise(s, &st, e)
	w := Working{Steps: []Step{st}}
	w.follow(s, e)
	return w, true
}
