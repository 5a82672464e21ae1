package proof

import (
	"math"

	"lossbook/budget"
	"lossbook/budget/wave"
)

// Closed forms of a text book, asked of whole designs.

// windingResistance lets the model find by itself how far the output can go: beyond
// it no point settles.
func windingResistance(t *Trial) {
	const vin, ohm = 10.0, 1.0 // the load's resistance
	of := func(ratio float64) sheet {
		s := newSheet(t, "boost", vin, ratio*vin, ratio*vin/ohm, 1e5)
		s.Inductor.DCR = n(t.In("winding over load") * ohm)
		return s
	}
	t.Each(func(_ string, in func(string) float64) float64 {
		d := in("duty")
		ratio := boundary(1.0001, t.greatest(of)*(1-1e-12), func(ratio float64) bool { return of(ratio).solved().Duty < d })
		return of(ratio).solved().Efficiency
	})
	most := t.greatest(of)
	t.Is("greatest ratio", most)
	b := of(most).solved()
	t.Is("its duty", b.Duty)
	t.Is("its efficiency", b.Efficiency)
}

// greatest is the highest ratio at which a design still settles.
func (t *Trial) greatest(of func(ratio float64) sheet) float64 {
	return boundary(1.0001, 50, func(ratio float64) bool {
		s := of(ratio)
		b, _ := s.try(s.Output.Current.V)
		return b.State == budget.Settled
	})
}

// allDrops raises the output until the duty is the one given.
func allDrops(t *Trial) {
	vin, d := t.In("input voltage"), t.In("duty")
	for name, ideal := range map[string]float64{"boost": 1 / (1 - d), "buck_boost": d / (1 - d), "buck": d} {
		ohm := t.In("load of boost and inverting stage")
		if name == "buck" {
			ohm = t.In("load of the buck")
		}
		of := func(vout float64) sheet {
			s := newSheet(t, name, vin, vout, vout/ohm, 1e5).conducting(t.In("switch resistance"))
			s.Diode.VF0, s.Diode.RD, s.Inductor.DCR = n(t.In("diode voltage")), n(t.In("diode resistance")), n(t.In("winding resistance"))
			return s
		}
		low := math.Max(0.7*ideal*vin, vin*1.01)
		if name != "boost" {
			low = 0.7 * ideal * vin
		}
		vout := boundary(low, ideal*vin*0.999, func(v float64) bool { return of(v).solved().Duty < d })
		t.Is(name+", output", vout)
		t.Is(name+", efficiency", of(vout).solved().Efficiency)
	}
}

// discontinuous asks lossless designs for the output voltage at a duty, and for the
// inductance at which their mode changes.
func discontinuous(t *Trial) {
	const vin, ohm, f = 10.0, 20.0, 250e3
	of := func(topology string, ratio, k float64) sheet {
		s := newSheet(t, topology, vin, ratio*vin, ratio*vin/ohm, f)
		s.Inductor.Inductance = n(k * ohm / f / 2) // K = 2·L/(R·T)
		return s
	}
	d, k := t.In("duty"), t.In("K")
	for topology, span := range map[string][2]float64{"buck": {d, 0.999}, "boost": {1.001, 1 / (1 - d) * 3}, "buck_boost": {d / (1 - d), 5}} {
		t.Is(topology+", ratio", boundary(span[0], span[1], func(ratio float64) bool { return of(topology, ratio, k).solved().Duty < d }))
	}
	edge := func(topology string, ratio float64) float64 {
		return boundary(1e-3, 2, func(k float64) bool { return of(topology, ratio, k).solved().Mode == budget.DCM })
	}
	t.Is("buck, boundary", edge("buck", d))
	t.Is("boost, boundary", edge("boost", 1/(1-d)))
	t.Is("buck_boost, boundary", edge("buck_boost", d/(1-d)))
	t.Is("boost, greatest boundary", edge("boost", 1/(1-1.0/3)))
}

func rmsValues(t *Trial) {
	t.Each(func(_ string, in func(string) float64) float64 {
		return math.Sqrt(wave.Share{Min: in("from"), Max: in("to"), D: in("during")}.MeanSquare())
	})
}
