package budget

import (
	"cmp"
	"fmt"
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
	message            func() string // what it is and what helps; asked for if it is to be said
}

// read returns an observation when the value is beyond the caution.
func (g gauge) read(list []observation) []observation {
	level := Caution
	switch {
	case g.value > g.limit:
		level = Exceeded
	case !(g.value > g.caution):
		return list
	}
	return append(list, observation{Finding{Level: level, Part: g.part, Rule: g.rule, Value: g.value, Limit: g.limit, Unit: g.unit, Source: g.source,
		Message: g.message()}, g.aspect, g.value})
}

// share is a gauge of a value over its rating: caution at the share, exceeded above
// 1. Without a rating there is nothing to measure against.
func share(list []observation, g gauge, value, rating float64, what, unit, help string) []observation {
	if rating <= 0 {
		return list
	}
	g.value, g.limit = value/rating, 1
	percent := 100 * g.value
	g.message = func() string {
		return fmt.Sprintf("%s is %.3g %s, %.0f %% of the rated %.4g %s; %s", what, value, unit, percent, rating, unit, help)
	}
	return g.read(list)
}

// pointRules look at one settled point each. A new rule is one function and one row
// here.
var pointRules = []func(m *Model, b *Budget, s *situation) []observation{
	blockingVoltage, currentRating, junction, thermalGain, saturation, inductorHeatLimits,
	capacitorLimits, modulation, driveHeadroom, recoverySlope, outsideCurve, supplyLow,
	hazardVoltage, hotSurface, implausible, straightLine,
}

// Findings returns what is to be said of one point, worst first.
func (m *Model) Findings(b *Budget) []Finding { return plain(m.observe(b)) }

func (m *Model) observe(b *Budget) []observation {
	if b.State != Settled {
		return []observation{{Finding: Finding{Level: Exceeded, Part: b.Part, Rule: "unsettled", Message: b.Reason(), Source: "the balance of power and heat"}}}
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
	s.evaluate(b.guess, [3]float64{t.Switch, t.Rectifier, t.Inductor})
	return s
}

func plain(list []observation) []Finding {
	slices.SortStableFunc(list, func(a, b observation) int { return rank(a.Level) - rank(b.Level) })
	findings := make([]Finding, len(list))
	for i, o := range list {
		findings[i], findings[i].Aspect = o.Finding, o.aspect
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
