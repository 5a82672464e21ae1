package web

import (
	"encoding/json"
	"math"

	"lossbook/assets"
	"lossbook/web/quantity"
	"lossbook/web/view"
)

// charts draws efficiency and losses against load.
func (p *picture) charts(base string) ([]view.Chart, error) {
	efficiency, err := p.efficiencyChart(base)
	if err != nil {
		return nil, err
	}
	stack, err := p.stackChart()
	return []view.Chart{efficiency, stack}, err
}

func (p *picture) loadAxis() assets.Axis {
	return assets.Axis{Label: "load, % of " + quantityOf(p.design.Output.Current.V, "A", 3), Unit: "%"}
}

func (p *picture) efficiencyChart(base string) (view.Chart, error) {
	data := assets.Lines{Title: "Efficiency against load, by input voltage", X: p.loadAxis(), Y: assets.Axis{Label: "efficiency, %", Unit: "%"}}
	for _, l := range p.lines {
		s := assets.Line{Name: quantityOf(l.vin, "V", 4), Dash: l.dash}
		for _, q := range l.points {
			s.Points = append(s.Points, q.drawn())
		}
		data.Series = append(data.Series, s)
	}
	text, err := json.Marshal(data)
	c := view.Chart{ID: "chart-efficiency", Kind: "efficiency", Title: "Efficiency, %", Caption: "against load, % of " +
		quantityOf(p.design.Output.Current.V, "A", 3) + ", by input voltage", Data: string(text), Scale: "log"}
	if p.coarse {
		c.Caption += "; straight lines between the kept points"
	}
	if p.spot.scale == "lin" {
		c.Scale = "lin"
	}
	c.Scales = scaleLinks(p.spot.sight, base)
	c.Heads, c.Rows = p.efficiencyTable()
	return c, err
}

// scaleLinks are the choices of a load axis on the page at an address.
func scaleLinks(s sight, at string) []view.Link {
	linear := s.scale == "lin"
	return []view.Link{
		{Text: "log", Href: s.scaled("").address(at), Here: !linear},
		{Text: "linear", Href: s.scaled("lin").address(at), Here: linear},
	}
}

// drawn is the point as the chart reads it, in per cent, no finer than a
// pixel can show.
func (q linePoint) drawn() assets.Point {
	return assets.Point{X: math.Round(q.load*1e6) / 1e4, Y: math.Round(q.efficiency*1e5) / 1e3, None: !q.settled, Outside: q.outside}
}

// efficiencyTable is the same in numbers: a row a load of the grid.
func (p *picture) efficiencyTable() (heads []string, rows []view.Line) {
	heads = []string{"Load, %"}
	for n, l := range p.lines {
		heads = append(heads, "at "+quantityOf(l.vin, "V", 4)+", %")
		row := 0
		for _, q := range l.points {
			if !q.grid {
				continue
			}
			if n == 0 {
				rows = append(rows, view.Line{Head: loadShare(q.load)})
			}
			rows[row].Cells = append(rows[row].Cells, q.written())
			row++
		}
	}
	return heads, rows
}

func (q linePoint) written() string {
	switch {
	case !q.settled:
		return quantity.NoFigure
	case q.outside:
		return percent(q.efficiency) + " †"
	}
	return percent(q.efficiency)
}

func (p *picture) stackChart() (view.Chart, error) {
	unit := wattsFor(p.columns)
	if unit.unit == "mW" && mostLoss(p.columns) >= 1 {
		unit = watts{"W", 1, 2} // the bars' totals then take fewest digits
	}
	data := assets.Stack{Title: "Loss against load, by part", X: p.loadAxis(), Y: assets.Axis{Label: "loss, " + unit.unit, Unit: unit.unit}}
	c := view.Chart{ID: "chart-loss", Kind: "stack", Title: "Loss, " + unit.unit, Heads: []string{"Load, %"},
		Caption: "against load, % of " + quantityOf(p.design.Output.Current.V, "A", 3) + ", at " + quantityOf(p.spot.vin, "V", 4) + " in"}
	for _, g := range groups {
		data.Parts = append(data.Parts, assets.Part{Name: g.title, Class: g.class})
		c.Heads = append(c.Heads, g.title)
	}
	c.Heads = append(c.Heads, "Loss, "+unit.unit)
	for _, q := range p.columns {
		column, row := p.stackColumn(q, unit)
		data.Columns, c.Rows = append(data.Columns, column), append(c.Rows, row)
	}
	text, err := json.Marshal(data)
	c.Data = string(text)
	return c, err
}

func (p *picture) stackColumn(q Point, unit watts) (assets.Column, view.Line) {
	share := loadShare(q.Iout / p.design.Output.Current.V)
	column, row := assets.Column{X: share}, view.Line{Head: share}
	if !q.Settled() {
		column.Reason = stateWords(q)
		for range len(groups) + 1 {
			row.Cells = append(row.Cells, quantity.NoFigure)
		}
		return column, row
	}
	for _, g := range groups {
		sum := 0.0
		for _, it := range q.Items {
			if classOf(it.Part) == g.class {
				sum += it.Power
			}
		}
		column.Values = append(column.Values, round(sum*unit.factor, 5))
		row.Cells = append(row.Cells, unit.write(sum))
	}
	column.Total, column.Outside = unit.write(q.Loss), outsideACurve(q)
	row.Cells = append(row.Cells, unit.write(q.Loss))
	return column, row
}

func mostLoss(points []Point) float64 {
	most := 0.0
	for _, q := range points {
		if q.Settled() {
			most = max(most, q.Loss)
		}
	}
	return most
}
