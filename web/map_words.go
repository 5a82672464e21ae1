package web

import (
	"fmt"
	"math"
	"strings"

	"lossbook/budget"
	"lossbook/web/view"
)

// limitWords names what a limit is about, by the rule of its finding and, where a
// rule has several, by the aspect.
var limitWords = map[string]string{
	"blocking_voltage": "blocking voltage", "current_rating": "current", "junction": "junction temperature",
	"thermal_gain": "heat that feeds itself", "saturation": "saturation", "inductor_heat.rms": "rms current",
	"inductor_heat.temperature": "temperature", "capacitor.ripple": "ripple current", "capacitor.voltage": "voltage",
	"modulation.duty": "duty", "modulation.on_time": "shortest on-time", "drive_headroom": "drive above the plateau",
	"supply_low": "supply below the drive", "hazard_voltage": "hazardous voltage", "implausible": "loss beyond belief",
}

// id is the limit as the map's CSV names it.
func (l limit) id() string {
	parts := []string{l.part, l.rule, l.aspect}
	return strings.Trim(strings.Join(parts, "."), ".")
}

func (l limit) words() string {
	rule := strings.Trim(l.rule+"."+l.aspect, ".")
	what, known := limitWords[rule]
	if !known {
		what = strings.NewReplacer("_", " ", ".", ", ").Replace(rule)
	}
	if l.part == "" {
		return what
	}
	return partWords[l.part] + ", " + what
}

// unsettledWords say why a point of a map has no figure.
func unsettledWords(q *budget.Spot) string {
	if q.State == budget.OutOfReach {
		return "out of reach"
	}
	if q.Part == "" {
		return "runs away"
	}
	return partWords[q.Part] + " runs away"
}

// limitLines say where each limit is exceeded or near, and where points have no
// figure: what the drawing shows, in words.
func (m *efficiencyMap) limitLines() []view.Finding {
	var lines []view.Finding
	for _, a := range m.unsettled() {
		lines = append(lines, view.Finding{Level: "exceeded", Message: "no figure: " + a.name, At: m.extent(a.holds)})
	}
	for _, l := range m.limits() {
		words := "over the limit: " + l.words()
		if l.level == budget.Caution {
			words = "near the limit: " + l.words()
		}
		lines = append(lines, view.Finding{Level: string(l.level), Message: words, At: m.extent(l.holds)})
	}
	return lines
}

// extent says at how many points something holds, and within which bounds.
func (m *efficiencyMap) extent(holds func(*budget.Spot) bool) string {
	n, settled, both := 0, 0, 0
	load, vin := [2]float64{math.Inf(1), math.Inf(-1)}, [2]float64{math.Inf(1), math.Inf(-1)}
	for i := range m.size() {
		q := m.at(i)
		is := holds(q)
		if q.State == budget.Settled {
			settled++
			if is {
				both++
			}
		}
		if is {
			n++
			share := m.Loads[i%len(m.Loads)]
			load = [2]float64{min(load[0], share), max(load[1], share)}
			vin = [2]float64{min(vin[0], q.Vin), max(vin[1], q.Vin)}
		}
	}
	switch {
	case n == m.size():
		return "at every point"
	case settled > 0 && both == settled && n == settled:
		return "at every point that has a figure"
	}
	return fmt.Sprintf("at %d of %d points, %s\u00a0%% load, %s\u00a0in", n, m.size(),
		rangeWords(loadWords(load[0]), loadWords(load[1])), rangeWords(quantityOf(vin[0], "V", 4), quantityOf(vin[1], "V", 4)))
}

// rangeWords writes a range by its ends, which may be the same.
func rangeWords(low, high string) string {
	if low == high {
		return low
	}
	return low + " to " + high
}

// loadWords writes a share of full load in per cent, in three digits.
func loadWords(share float64) string { return quantityOf(100*share, "", 3) }

// caution is what must be said first: that no point of the map is sound.
func (m *efficiencyMap) caution() string {
	settled, over := 0, 0
	for i := range m.size() {
		if q := m.at(i); q.State == budget.Settled {
			settled++
			if exceeds(q) {
				over++
			}
		}
	}
	switch {
	case settled == 0:
		return "No point of this map has a figure."
	case over == settled:
		return "Every point of this map exceeds a limit: its efficiencies are those of parts that are not meant to stand them."
	}
	return ""
}
