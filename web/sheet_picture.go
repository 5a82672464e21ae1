package web

import (
	"cmp"
	"context"
	"slices"

	"lossbook/budget"
)

// picture is everything a sheet or a revision's page shows of a design: one
// ledger, and the efficiency by input voltage.
type picture struct {
	design   *budget.Design
	spot     spot
	vins     []voltage
	columns  []Point // over the load grid, at the voltage looked at
	lines    []line
	coarse   bool // the lines go through kept points alone
	findings []Finding
	paper    bool    // nothing is opened from it
	energy   *Energy // of the load profile; nil where there is none
	model    string  // which a revision was saved with; "" of a sheet
	worked   string  // which model the profile was worked with, where it is another than that of the rest
}

// line is the efficiency over load at one input voltage.
type line struct {
	voltage
	points []linePoint
}

// linePoint is one of its points; without a figure the line has a gap.
type linePoint struct {
	load       float64 // share of full load
	efficiency float64
	settled    bool
	outside    bool // a curve was held flat for one of its losses
	grid       bool // one of the table's
}

// paint computes what a sheet shows of a valid design.
func paint(ctx context.Context, d *budget.Design, g sight) (picture, error) {
	model, err := budget.Prepare(d)
	if err != nil {
		return picture{}, err
	}
	p := picture{design: d, spot: lookAt(d, g)}
	p.vins = voltages(d, p.spot.vin)
	var all []budget.Budget
	for _, v := range p.vins {
		if err := ctx.Err(); err != nil {
			return picture{}, err
		}
		row := p.over(model, v.vin)
		all = append(all, row...)
		p.lines = append(p.lines, p.lineOf(model, v, row))
		if v.vin == p.spot.vin {
			p.columns = pointsOf(row)
		}
	}
	p.findings = findingsOf(model.Review(all))
	return p, nil
}

// over computes the load grid at one voltage.
func (p *picture) over(model *budget.Model, vin float64) []budget.Budget {
	grid := budget.LoadGrid()
	row := make([]budget.Budget, len(grid))
	for i, part := range grid {
		model.At(p.point(vin, part), &row[i])
	}
	return row
}

func (p *picture) point(vin, part float64) budget.Point {
	return budget.Point{Vin: vin, Iout: part * p.design.Output.Current.V, Ambient: p.spot.ambient}
}

// lineOf draws the efficiency finer than the grid, through the grid's points.
func (p *picture) lineOf(model *budget.Model, v voltage, row []budget.Budget) line {
	l := line{voltage: v, points: make([]linePoint, 0, len(loads))}
	var scratch budget.Budget
	for _, part := range loads {
		b := &scratch
		i := slices.Index(budget.LoadGrid(), part)
		if i >= 0 {
			b = &row[i]
		} else {
			model.At(p.point(v.vin, part), b)
		}
		l.points = append(l.points, linePointOf(part, b, i >= 0))
	}
	return l
}

func linePointOf(part float64, b *budget.Budget, grid bool) linePoint {
	return linePoint{load: part, efficiency: b.Efficiency, settled: b.State == budget.Settled,
		outside: slices.ContainsFunc(b.Items, func(it budget.Item) bool { return it.Outside }), grid: grid}
}

// retrace draws the lines of a revision as finely as a sheet's, if the model that it was
// kept with is today's and finds the same: what lies between the kept points is then
// what would have been found. Otherwise the lines go through these alone.
func (p *picture) retrace(ctx context.Context, same bool) error {
	p.coarse = !same
	if !same {
		return nil
	}
	model, err := budget.Prepare(p.design)
	if err != nil {
		return err
	}
	for i := range p.lines {
		if err := ctx.Err(); err != nil {
			return err
		}
		p.lines[i].refine(p, model)
	}
	return nil
}

// refine adds points between those that a line has.
func (l *line) refine(p *picture, model *budget.Model) {
	var b budget.Budget
	first, last := l.points[0].load, l.points[len(l.points)-1].load
	for _, part := range loads {
		if part > first && part < last && !slices.Contains(budget.LoadGrid(), part) {
			model.At(p.point(l.vin, part), &b)
			l.points = append(l.points, linePointOf(part, &b, false))
		}
	}
	slices.SortFunc(l.points, func(a, b linePoint) int { return cmp.Compare(a.load, b.load) })
}

func pointsOf(row []budget.Budget) []Point {
	points := make([]Point, len(row))
	for i := range row {
		points[i] = pointOf(&row[i], nil)
	}
	return points
}

// remembered is the picture of a revision: nothing but what was saved.
func remembered(d *budget.Design, points []Point, findings []Finding, g sight) picture {
	p := picture{design: d, findings: findings}
	for _, v := range voltages(d, d.Input.Nominal.V) {
		if l := savedLine(d, v, points); len(l.points) > 0 {
			p.vins, p.lines = append(p.vins, v), append(p.lines, l)
		}
	}
	g.ambient = ""
	p.spot = lookAt(d, g)
	if !slices.ContainsFunc(p.vins, func(v voltage) bool { return v.vin == p.spot.vin }) {
		p.spot.vin, p.spot.wrong["vin"] = d.Input.Nominal.V, "was not kept with this revision"
	}
	for _, q := range points {
		if q.Vin == p.spot.vin {
			p.columns = append(p.columns, q)
		}
	}
	return p
}

func savedLine(d *budget.Design, v voltage, points []Point) line {
	l := line{voltage: v}
	for _, q := range points {
		if q.Vin != v.vin {
			continue
		}
		at := linePoint{load: q.Iout / d.Output.Current.V, grid: true, settled: q.Settled()}
		if at.settled {
			at.efficiency = q.Efficiency
			at.outside = slices.ContainsFunc(q.Items, func(it Item) bool { return it.Outside })
		}
		l.points = append(l.points, at)
	}
	return l
}

// chosen is the point of the large figures; nil if it was never computed.
func (p *picture) chosen() *Point {
	if p.spot.load < len(p.columns) {
		return &p.columns[p.spot.load]
	}
	return nil
}
