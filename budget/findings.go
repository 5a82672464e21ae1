package budget

import (
	"cmp"
	"fmt"
	"math"
	"slices"
)

const (
	practice   = "common practice"
	controller = "the controller's data sheet"
	safety     = "IEC 62368-1 (from memory)"
	runaways   = "limit: ST AN869; caution: common practice"
)

// observation is a finding with what it takes to compare it with others of its
// kind.
type observation struct {
	Finding
	aspect   string  // tells findings of one rule and part apart
	severity float64 // larger is worse
}

// gauge measures a value against a limit: exceeded above it, a caution above the
// share.
type gauge struct {
	part, rule, aspect string
	value, caution     float64
	limit              float64
	unit               string
	source             string
	message            string // what it is and what helps
}

// read returns an observation when the value is beyond the caution.
func (g gauge) read(list []observation) []observation {
	o := observation{Finding{Part: g.part, Rule: g.rule, Value: g.value, Limit: g.limit, Unit: g.unit, Source: g.source, Message: g.message}, g.aspect, g.value}
	switch {
	case g.value > g.limit:
		o.Level = Exceeded
	case g.value > g.caution:
		o.Level = Caution
	default:
		return list
	}
	return append(list, o)
}

// share is a gauge of a value over its rating: caution at the share, exceeded above
// 1. Without a rating there is nothing to measure against.
func share(list []observation, g gauge, value, rating float64, what, unit, help string) []observation {
	if rating <= 0 {
		return list
	}
	g.value, g.limit = value/rating, 1
	g.message = fmt.Sprintf("%s is %.3g %s, %.0f %% of the rated %.4g %s; %s", what, value, unit, 100*g.value, rating, unit, help)
	return g.read(list)
}

// pointRules look at one settled point each. A new rule is one function and one row
// here.
var pointRules = []func(m *Model, b *Budget, s *situation) []observation{
	blockingVoltage, currentRating, junction, thermalGain, saturation, inductorHeatLimits,
	capacitorLimits, modulation, driveHeadroom, recoverySlope, outsideCurve, supplyLow,
	hazardVoltage, hotSurface, implausible,
}

// Findings returns what is to be said of one point, worst first.
func (m *Model) Findings(b *Budget) []Finding { return plain(m.observe(b)) }

func (m *Model) observe(b *Budget) []observation {
	if b.State != Settled {
		severity := 1.0
		if b.State == Runaway {
			severity = 2
		}
		return []observation{{Finding{Level: Exceeded, Part: b.Part, Rule: "unsettled", Message: b.Reason(), Source: "the balance of power and heat"}, "", severity}}
	}
	s := m.situationOf(b)
	var list []observation
	for _, rule := range pointRules {
		list = append(list, rule(m, b, s)...)
	}
	return list
}

// situationOf works out again everything behind a settled budget.
func (m *Model) situationOf(b *Budget) *situation {
	s := &situation{m: m, frame: m.frameAt(b.Point), mode: b.Mode}
	t := b.Temperatures
	s.evaluate(b.stageLoss, [3]float64{t.Switch, t.Rectifier, t.Inductor})
	return s
}

func plain(list []observation) []Finding {
	slices.SortStableFunc(list, func(a, b observation) int { return rank(a.Level) - rank(b.Level) })
	findings := make([]Finding, len(list))
	for i, o := range list {
		findings[i] = o.Finding
	}
	return findings
}

func rank(l Level) int { return slices.Index([]Level{Exceeded, Caution, Note}, l) }

// key tells which observations are of one kind.
type key struct{ rule, part, aspect string }

// Review returns what is to be said of the design: the worst of each rule over the
// points given, and what holds at every point.
func (m *Model) Review(points []Budget) []Finding {
	worst := map[key]int{}
	var list []observation
	for i := range points {
		at := points[i].Point
		for _, o := range m.observe(&points[i]) {
			o.At = &at
			k := key{o.Rule, o.Part, o.aspect}
			if j, seen := worst[k]; !seen {
				worst[k] = len(list)
				list = append(list, o)
			} else if worse(o, list[j]) {
				list[j] = o
			}
		}
	}
	list = append(list, m.designWide()...)
	return plain(list)
}

func worse(a, b observation) bool {
	if c := cmp.Compare(rank(a.Level), rank(b.Level)); c != 0 {
		return c < 0
	}
	return a.severity >= b.severity // the last of equals: the highest input and load come last
}

// highest returns the highest input voltage to reckon with at a point.
func (m *Model) highest(p Point) float64 { return math.Max(p.Vin, m.design.Input.Max.V) }

func blockingVoltage(m *Model, b *Budget, s *situation) (list []observation) {
	vb := m.topology.Blocking(m.highest(b.Point), m.vout)
	help := "a part rated higher leaves room for ringing and surges"
	list = share(list, gauge{part: "switch", rule: "blocking_voltage", caution: 0.8, source: "80 %: " + practice},
		vb, m.design.Switch.VdsRating.V, "the blocking voltage at the highest input", "V", help)
	rating := 0.0
	if m.sync {
		rating = m.design.SyncSwitch.VdsRating.V
	} else {
		rating = m.design.Diode.VRRM.V
	}
	return share(list, gauge{part: "rectifier", rule: "blocking_voltage", caution: 0.8, source: "80 %: " + practice},
		vb, rating, "the blocking voltage at the highest input", "V", help)
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
			message: fmt.Sprintf("the junction reaches %.0f °C of %.0f °C allowed; better cooling or a part with less loss lowers it", t, limit)}.read(list)
	}
	return list
}

func thermalGain(m *Model, b *Budget, s *situation) (list []observation) {
	for part, g := range m.gains(s) {
		if !finite(g) {
			continue // the models end here on both sides: there is no slope to speak of
		}
		list = gauge{part: partNames[part], rule: "thermal_gain", value: g, caution: 0.5, limit: 1, source: runaways,
			message: fmt.Sprintf("a kelvin of heating brings %.2g kelvin more; at 1 the part runs away: lower its thermal resistance or its temperature-dependent loss", g)}.read(list)
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
		message: fmt.Sprintf("the winding reaches %.0f °C of %.0f °C allowed; a larger inductor or more air lowers it", t, limit)}.read(list)
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
			message: fmt.Sprintf("the duty is %.3g of %.3g possible; the output sags where it is reached", b.Duty, limits.DutyMax.V)}.read(list)
	}
	if limits.OnTimeMin.V > 0 && b.OnTime > 0 {
		list = gauge{part: "controller", rule: "modulation", aspect: "on_time", value: limits.OnTimeMin.V / b.OnTime, caution: 0.9, limit: 1, source: controller,
			message: fmt.Sprintf("the on-time is %.3g ns, the shortest possible %.3g ns; below it the controller skips pulses, which this budget does not hold", 1e9*b.OnTime, 1e9*limits.OnTimeMin.V)}.read(list)
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
