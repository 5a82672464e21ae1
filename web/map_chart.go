package web

import (
	"encoding/json"
	"fmt"
	"math"

	"lossbook/assets"
	"lossbook/budget"
	"lossbook/web/view"
)

// area is where points of a map have no figure, for one reason.
type area struct {
	name, level string
	holds       func(*budget.Spot) bool
}

// unsettled lists why points have no figure, in the order of the points.
func (m *efficiencyMap) unsettled() []area {
	var list []area
	for i := range m.size() {
		q := m.at(i)
		if q.State == budget.Settled || containsArea(list, unsettledWords(q)) {
			continue
		}
		words, state := unsettledWords(q), q.State
		list = append(list, area{words, state.String(), func(q *budget.Spot) bool { return q.State == state && unsettledWords(q) == words }})
	}
	return list
}

func containsArea(list []area, name string) bool {
	for _, a := range list {
		if a.name == name {
			return true
		}
	}
	return false
}

// data is the map as the drawing reads it; at is the point that is looked at.
func (m *efficiencyMap) data(at spot) assets.Map {
	full := m.design.Output.Current.V
	unit := m.lossUnit()
	d := assets.Map{
		Title: "Efficiency over load and input voltage",
		X:     assets.Axis{Label: "load, % of " + quantityOf(full, "A", 3), Unit: "%"}, Y: assets.Axis{Label: "input, V", Unit: "V"},
		Value: assets.Axis{Label: "efficiency, %", Unit: "%"}, Loss: assets.Axis{Label: "loss, " + unit.unit, Unit: unit.unit},
		Even: at.scale == "lin", Unsettled: []assets.MapArea{}, Limits: []assets.MapArea{},
		Here: &[2]float64{math.Round(budget.LoadGrid()[at.load]*1e6) / 1e4, at.vin},
	}
	if at.vin < m.Vins[0] || at.vin > m.Vins[len(m.Vins)-1] {
		d.Here = nil
	}
	for _, share := range m.Loads {
		d.Loads = append(d.Loads, round(100*share, 6))
	}
	for _, vin := range m.Vins {
		d.Vins = append(d.Vins, round(vin, 6))
	}
	for i := range m.size() {
		efficiency, loss := drawnSpot(m.at(i), unit)
		d.Values, d.Losses = append(d.Values, efficiency), append(d.Losses, loss)
	}
	d.Outside = m.runs(func(q *budget.Spot) bool { return q.Outside })
	for _, a := range m.unsettled() {
		d.Unsettled = append(d.Unsettled, assets.MapArea{Name: a.name, Level: a.level, Runs: m.runs(a.holds)})
	}
	for _, l := range m.limits() {
		d.Limits = append(d.Limits, assets.MapArea{Name: l.words(), Level: string(l.level), Runs: m.runs(l.holds)})
	}
	return d
}

// drawnSpot returns a point's efficiency in per cent and its loss; nothing where it
// has no figure. The loss is as fine as it is read, the efficiency finer: for the
// contours, and so that rounded again it reads as in the table.
func drawnSpot(q *budget.Spot, unit watts) (efficiency, loss *float64) {
	if q.State != budget.Settled {
		return nil, nil
	}
	e, l := math.Round(q.Efficiency*1e7)/1e5, round(q.Loss*unit.factor, 4)
	return &e, &l
}

func (m *efficiencyMap) runs(holds func(*budget.Spot) bool) []assets.Run {
	return assets.RunsOf(m.size(), func(i int) bool { return holds(m.at(i)) })
}

// lossUnit takes mW while they keep the largest loss under four digits.
func (m *efficiencyMap) lossUnit() watts {
	most := 0.0
	for i := range m.size() {
		most = max(most, m.at(i).Loss)
	}
	if most < 1 {
		return watts{"mW", 1e3, 2}
	}
	return watts{"W", 1, 3}
}

// chart is the map as a figure with its table: every fourth load and voltage, and
// the last.
func (m *efficiencyMap) chart(at spot) (view.Chart, error) {
	text, err := json.Marshal(m.data(at))
	c := view.Chart{ID: "chart-map", Kind: "map", Title: "Efficiency, %", Data: string(text),
		Caption: "over load, % of " + quantityOf(m.design.Output.Current.V, "A", 3) + ", and input voltage, at " + degreesCelsius(m.Ambient)}
	columns, rows := everyFourth(len(m.Loads)), everyFourth(len(m.Vins))
	c.Heads = []string{"Input, V"}
	for _, x := range columns {
		c.Heads = append(c.Heads, loadWords(m.Loads[x])+" %")
	}
	for i := range rows {
		y := rows[len(rows)-1-i] // the highest voltage on top, as it is drawn
		line := view.Line{Head: quantityOf(m.Vins[y], "", 4)}
		for _, x := range columns {
			line.Cells = append(line.Cells, spotText(&m.spots[y][x]))
		}
		c.Rows = append(c.Rows, line)
	}
	return c, err
}

// everyFourth lists the numbers below n that a table shows.
func everyFourth(n int) []int {
	var list []int
	for i := 0; i < n-1; i += 4 {
		list = append(list, i)
	}
	return append(list, n-1)
}

// spotText is a point's efficiency in a table: marked if a curve was held flat for
// it, and if it exceeds a limit.
func spotText(q *budget.Spot) string {
	if q.State != budget.Settled {
		return unsettledWords(q)
	}
	text := percent(q.Efficiency)
	if q.Outside {
		text += " †"
	}
	if exceeds(q) {
		text += " ‡"
	}
	return text
}

// tableWords say what the table leaves out and what its signs mean.
func (m *efficiencyMap) tableWords() string {
	words := ""
	if len(m.Loads) > 4 {
		words = fmt.Sprintf("Every fourth load and voltage, and the last; the CSV holds all %d points.", m.size())
	}
	for i := range m.size() {
		if exceeds(m.at(i)) {
			words += " ‡ a limit is exceeded."
			break
		}
	}
	for i := range m.size() {
		if m.at(i).Outside {
			return words + " † a curve was held flat outside its range."
		}
	}
	return words
}
