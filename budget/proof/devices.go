package proof

import (
	"math"
	"strings"

	"lossbook/budget"
	"lossbook/budget/device"
)

// Diodes, heat, accounts and cautions.

// runaway heats the air round a converter whose diode leaks until no point settles.
// Nothing but leakage heats the diode.
func runaway(t *Trial) {
	v, share, leak, hot := t.In("reverse voltage"), t.In("blocking share"), t.In("leakage"), t.In("at temperature")
	s := newSheet(t, "buck", v, share*v, 1, 1e5)
	s.Diode.ThetaJA = n(t.In("thermal resistance, diode") + t.In("thermal resistance, sink"))
	s.Diode.ILeak, s.Diode.ILeakVoltage, s.Diode.ILeakTemperature = n(leak), n(v), n(hot)
	s.Diode.ILeakDoubling = n(math.Ln2 / t.In("growth"))
	air := boundary(0, hot, func(air float64) bool {
		s.Ambient = n(air)
		b, _ := s.try(1)
		return b.State == budget.Settled
	})
	s.Ambient = n(air)
	b := s.solved()
	t.Is("leakage at the limit", b.item("rectifier.leakage")/(share*v))
	t.Is("junction at the limit", b.Temperatures.Rectifier)
	s.Ambient = n(air + 0.01)
	if b, _ := s.try(1); b.State != budget.Runaway || b.Part != "rectifier" {
		t.fail("just above the limit the point is %s of %q", b.State, b.Part)
	}
}

func forwardLines(t *Trial) {
	l := device.Leakage{Current: t.In("leakage"), Voltage: 1, Temperature: t.In("at temperature"), Doubling: math.Ln2 / t.In("growth")}
	t.Is("STPS10L40C, leakage", l.Current*l.Growth(t.In("hot")))
	t.Each(func(_ string, in func(string) float64) float64 {
		volt, ohm := device.Forward{Threshold: in("threshold"), Resistance: in("resistance")}.At(25)
		return volt + ohm*in("current")
	})
}

// recoveryTriangle gives the charge and asks for the times; the model's direction.
func recoveryTriangle(t *Trial) {
	slope, softness := t.In("slope"), t.In("softness")
	r := device.Recovery{Charge: t.In("charge"), Current: 1, Slope: slope, Softness: softness}.At(1, slope)
	t.Is("rise", r.Rise)
	t.Is("peak", slope*r.Rise)
	t.Is("recovery time", r.Rise*(1+softness))
}

// measuredAccounts enters the measured loss as a fixed one, and asks for what is
// drawn and for the efficiency: it checks the accounts, not the losses.
func measuredAccounts(t *Trial) {
	t.Each(func(figure string, in func(string) float64) float64 {
		s := newSheet(t, "boost", in("input voltage"), in("output voltage"), in("load"), 1e5)
		s.Controller.FixedLoss = n(in("loss"))
		b := s.solved()
		if strings.HasPrefix(figure, "efficiency") {
			return b.Efficiency
		}
		return b.Iin
	})
}

// cautions finds by halving where each of them begins.
func cautions(t *Trial) {
	quiet := func(s sheet, rule string) bool { _, found := s.solved().finding(rule); return !found }
	t.Is("voltage", boundary(30, 100, func(v float64) bool { return quiet(newSheet(t, "boost", 24, v, 1, 1e5), "hazard_voltage") }))
	t.Is("surface", boundary(20, 100, func(air float64) bool {
		s := newSheet(t, "boost", 12, 24, 1, 1e5)
		s.Ambient = n(air)
		return quiet(s, "hot_surface")
	}))
	t.Is("share of a voltage rating", 24/boundary(200, 24, func(rating float64) bool {
		s := newSheet(t, "boost", 12, 24, 1, 1e5)
		s.Switch.VdsRating = n(rating)
		return quiet(s, "blocking_voltage")
	}))
}
