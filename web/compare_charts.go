package web

import (
	"encoding/json"
	"math"

	"lossbook/assets"
	"lossbook/budget"
	"lossbook/web/view"
)

// compareCharts draw the efficiencies on shared axes, and below them how they
// differ from the baseline's.
func (c *comparison) charts() ([]view.Chart, error) {
	efficiency := c.efficiencyChart()
	difference := c.differenceChart()
	for _, d := range []*drawnLines{&efficiency, &difference} {
		text, err := json.Marshal(d.data)
		if err != nil {
			return nil, err
		}
		d.chart.Data = string(text)
	}
	return []view.Chart{efficiency.chart, difference.chart}, nil
}

// drawnLines is a chart with the data of its lines.
type drawnLines struct {
	chart view.Chart
	data  assets.Lines
}

func (c *comparison) loadWords() string {
	if oneOf(c.place.under) {
		return "load, % of " + quantityOf(c.place.under[0].current, "A", 3)
	}
	return "load, % of each one’s full load"
}

func (c *comparison) lines(id, kind, title, caption, axis, unit string) drawnLines {
	linear := c.scale == "lin"
	d := drawnLines{
		chart: view.Chart{ID: id, Kind: kind, Title: title, Caption: caption, Heads: []string{"Load, %"}, Scale: "log"},
		data:  assets.Lines{Title: title, X: assets.Axis{Label: c.loadWords(), Unit: "%"}, Y: assets.Axis{Label: axis, Unit: unit}},
	}
	if linear {
		d.chart.Scale = "lin"
	}
	d.chart.Scales = []view.Link{
		{Text: "log", Href: c.with(func(l *lineup) { l.scale = "" }), Here: !linear},
		{Text: "linear", Href: c.with(func(l *lineup) { l.scale = "lin" }), Here: linear},
	}
	for _, part := range budget.LoadGrid() {
		d.chart.Rows = append(d.chart.Rows, view.Line{Head: loadShare(part)})
	}
	return d
}

// add draws one revision's line. The dash is that of its place in the address, so
// that it is the same in both charts and under every baseline.
func (d *drawnLines) add(name string, dash int, at func(load int) (x float64, f datum, text string)) {
	s := assets.Line{Name: name, Dash: dash}
	d.chart.Heads = append(d.chart.Heads, name)
	for load := range d.chart.Rows {
		x, f, text := at(load)
		s.Points = append(s.Points, assets.Point{X: x, Y: math.Round(f.value*1e3) / 1e3, None: f.none, Outside: f.outside})
		d.chart.Rows[load].Cells = append(d.chart.Rows[load].Cells, text)
	}
	d.data.Series = append(d.data.Series, s)
}

func percentOf(part float64) float64 { return math.Round(part*1e6) / 1e4 }

func (c *comparison) efficiencyChart() drawnLines {
	d := c.lines("chart-efficiency", "efficiency", "Efficiency, %", "against load", "efficiency, %", "%")
	for _, i := range c.order() {
		d.add(c.labels[i], i, func(load int) (float64, datum, string) {
			f := c.measured(measures[0], load).figures[i]
			if p := c.sides[i].at(load); p != nil {
				f.outside = outsideACurve(*p)
			}
			return percentOf(budget.LoadGrid()[load]), f, noFigureOr(f, measures[0].places)
		})
	}
	return d
}

func (c *comparison) differenceChart() drawnLines {
	base := c.labels[c.base-1]
	d := c.lines("chart-difference", "difference", "Efficiency against "+base+", points", "above 0: more efficient", "difference, percentage points", "points")
	for _, i := range c.order()[1:] {
		d.add(c.labels[i], i, func(load int) (float64, datum, string) {
			r := c.measured(measures[0], load)
			f := datum{none: !r.comparable(c.base-1, i), value: r.changes[i] / math.Pow10(measures[0].places)}
			return percentOf(budget.LoadGrid()[load]), f, c.changeText(r, i, measures[0].places)
		})
	}
	return d
}
