package web

import (
	"bytes"
	"fmt"
	"math"

	"github.com/xuri/excelize/v2"

	"lossbook/budget"
)

// inputs is every entry that is stated, with its unit and source; a row of a curve
// says what it holds at.
func (b *workbook) inputs(l *tabSheet) {
	l.head([]float64{18, 34, 10, 30, 14, 8, 10, 8, 50}, "part", "entry", "symbol", "path", "value", "unit", "at", "at_unit", "source")
	for _, part := range budget.Parts() {
		if !part.List {
			b.entries(l, part, part.Path)
			continue
		}
		for i := 0; b.entries(l, part, rowPath(part.Path, i)); i++ {
		}
	}
}

// entries writes the fields of the part at a path; it says whether there is one.
func (b *workbook) entries(l *tabSheet, part budget.Part, path string) (found bool) {
	for _, f := range part.Fields {
		at := below(path, f.Key)
		slot, ok := b.design.Slot(at, false)
		if !ok {
			continue
		}
		found = true
		line := func(value any, unit string, x any, xUnit string) {
			l.line(part.Name, f.Name, f.Symbol, at, value, unit, x, xUnit, b.design.Sources[at])
		}
		switch v := slot.(type) {
		case *string:
			if *v != "" {
				line(worded(f, *v), "", nil, "")
			}
		case *budget.Num:
			if v.Stated {
				line(v.V, f.Unit, nil, "")
			}
		case *budget.Curve:
			for _, row := range *v {
				line(row[1], f.Unit, row[0], f.XUnit)
			}
		}
	}
	return found
}

// ledger is the losses: for each input voltage a row an item, a column a load.
func (b *workbook) ledger(l *tabSheet) {
	voltages := byVoltage(b.points)
	header := []string{"vin_V", "part", "loss", "unit"}
	if len(voltages) > 0 {
		for _, q := range voltages[0] {
			header = append(header, loadShare(q.Iout/b.design.Output.Current.V)+" %")
		}
	}
	l.head([]float64{8, 18, 22, 6, 12}, header...)
	items := itemsOf(b.design, b.points)
	for _, row := range voltages {
		line := func(part, name, unit string, figure func(q *Point) any) {
			cells := []any{row[0].Vin, part, name, unit}
			for i := range row {
				cells = append(cells, figure(&row[i]))
			}
			l.line(cells...)
		}
		line("load", "current", "A", func(q *Point) any { return q.Iout })
		line("point", "state", "", func(q *Point) any { return stateInFull(q) })
		settled := func(part, name, unit string, figure func(f *Figures) float64) {
			line(part, name, unit, func(q *Point) any {
				if !q.Settled() {
					return nil
				}
				return figure(q.Figures)
			})
		}
		for i, it := range items {
			settled(partWords[it.Part], itemWords(it), "W", func(f *Figures) float64 { return f.Items[i].Power })
		}
		settled("total", "loss", "W", func(f *Figures) float64 { return f.Loss })
		settled("total", "efficiency", "", func(f *Figures) float64 { return f.Efficiency })
		settled("switch", "temperature", "°C", func(f *Figures) float64 { return f.Temperatures.Switch })
		settled("rectifier", "temperature", "°C", func(f *Figures) float64 { return f.Temperatures.Rectifier })
		settled("inductor", "temperature", "°C", func(f *Figures) float64 { return f.Temperatures.Inductor })
	}
}

// weighted is the means over loads, for each input voltage, with the weight of each
// load and the source of the weights.
func (b *workbook) weighted(l *tabSheet) {
	l.head([]float64{8, 10, 24, 12, 70, 40, 70}, "vin_V", "ambient_C", "figure", "efficiency", "weights", "why_none", "source")
	for _, v := range weightedVoltages(b.points, b.design.Output.Current.V) {
		for _, m := range v.Means {
			l.line(v.Vin, v.Ambient, m.Name, numberOrNone(m.Efficiency), m.words(), m.Reason, m.Source)
		}
	}
}

// day is the rows of the load profile with their energies, and their sum.
func (b *workbook) day(l *tabSheet) {
	l.head([]float64{8, 10, 8, 10, 8, 14, 14, 14, 12, 60}, "row", "iout_A", "vin_V", "ambient_C", "hours", "in_Wh", "out_Wh", "lost_Wh", "efficiency", "why_none")
	for i, r := range b.energy.Rows {
		var efficiency any
		if r.In != nil && *r.In > 0 {
			efficiency = *r.Out / *r.In
		}
		l.line(float64(i+1), r.Iout, r.Vin, r.Ambient, r.Hours, numberOrNone(r.In), numberOrNone(r.Out), numberOrNone(r.Lost), efficiency, r.Reason)
	}
	e := b.energy
	l.line("day", nil, nil, nil, e.Hours, numberOrNone(e.In), numberOrNone(e.Out), numberOrNone(e.Lost), numberOrNone(e.Efficiency), e.Reason)
}

// numberOrNone leaves a cell empty where there is no figure.
func numberOrNone(v *float64) any {
	if v == nil {
		return nil
	}
	return *v
}

// stateInFull says how a point ended, and why if it has no figures.
func stateInFull(q *Point) string {
	if q.Settled() {
		return q.State
	}
	return q.State + ": " + q.Reason
}

// curves is efficiency against load, a line an input voltage, drawn from the cells
// of the table.
func (b *workbook) curves() *excelize.Chart {
	c := &excelize.Chart{Type: excelize.Scatter, ShowBlanksAs: "gap",
		Title:     excelize.ChartTitle{Paragraph: []excelize.RichTextRun{{Text: "Efficiency against load, by input voltage in V"}}},
		Legend:    excelize.ChartLegend{Position: "right"},
		Dimension: excelize.ChartDimension{Width: 760, Height: 380},
		XAxis:     excelize.ChartAxis{Title: excelize.ChartTitle{Paragraph: []excelize.RichTextRun{{Text: "load, A"}}}},
		YAxis: excelize.ChartAxis{MajorGridLines: true, NumFmt: excelize.ChartNumFmt{CustomNumFmt: "0.0%"},
			Title: excelize.ChartTitle{Paragraph: []excelize.RichTextRun{{Text: "efficiency"}}}},
	}
	low, from := 1.0, 0
	for i, q := range b.points {
		if q.Settled() {
			low = math.Min(low, q.Efficiency)
		}
		if i+1 < len(b.points) && b.points[i+1].Vin == q.Vin {
			continue
		}
		c.Series = append(c.Series, series(len(c.Series), q.Vin, from+2, i+2))
		from = i + 1
	}
	low, high := math.Floor(low*20)/20, 1.0
	c.YAxis.Minimum, c.YAxis.Maximum = &low, &high
	return c
}

// numbersAcross makes the loads of the chart numbers: the library refers to them as
// texts, which a program may set one step apart each, however far they are.
func numbersAcross(file *excelize.File) {
	const name = "xl/charts/chart1.xml"
	if text, ok := file.Pkg.Load(name); ok {
		numbers := bytes.ReplaceAll(text.([]byte), []byte("<xVal><strRef>"), []byte("<xVal><numRef>"))
		file.Pkg.Store(name, bytes.ReplaceAll(numbers, []byte("</strRef></xVal>"), []byte("</numRef></xVal>")))
	}
}

// lineColours are told apart in grey too; the dash helps. They are the page's own
// colours of switch, inductor and capacitors on paper.
var lineColours = []string{"A5402E", "34519B", "3F6D38"}

// series is one line of the chart: rows from…to of the table.
func series(n int, vin float64, from, to int) excelize.ChartSeries {
	colour := lineColours[n%len(lineColours)]
	dash := []excelize.LineDashType{excelize.LineDashSolid, excelize.LineDashDash, excelize.LineDashSysDot}[n%3]
	paint := excelize.Fill{Type: "pattern", Pattern: 1, Color: []string{colour}}
	column := func(name string) string { return fmt.Sprintf("Efficiency!$%s$%d:$%s$%d", name, from, name, to) }
	return excelize.ChartSeries{
		Name:       fmt.Sprintf("Efficiency!$A$%d", from),
		Categories: column("B"), Values: column("F"), // iout_A and efficiency
		Fill:   paint, // of the line: its own is not looked at
		Line:   excelize.LineOptions{Type: excelize.LineSolid, Width: 1.75, Dash: dash},
		Marker: excelize.ChartMarker{Symbol: "circle", Size: 4, Fill: paint},
	}
}
