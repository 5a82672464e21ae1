package web

import (
	"context"
	"strings"

	"lossbook/budget"
	"lossbook/store"
	"lossbook/web/quantity"
	"lossbook/web/view"
)

// savedEnergy works out the profile that a revision was kept with. Its points are
// not among the kept ones, so they are computed now, and the words say with what
// if that is another model.
func savedEnergy(ctx context.Context, saved store.Revision, d *budget.Design) (e *Energy, worked string, err error) {
	typed, err := readDraft(saved.Draft)
	if err != nil {
		return nil, "", err
	}
	if e, err = typed.energy(ctx, d); e != nil && saved.Model != budget.ModelVersion {
		worked = "Worked with model " + budget.ModelVersion + ", which runs now; the revision was kept with model " + saved.Model + "."
	}
	return e, worked, err
}

// weights draws the weighted figures at the voltage looked at, and the day of
// the load profile.
func (p *picture) weights() *view.Weights {
	v := &view.Weights{At: "at " + quantityOf(p.spot.vin, "V", 4) + " in, " + degreesCelsius(p.spot.ambient)}
	for _, w := range weightedOf(p.columns, p.design.Output.Current.V) {
		m := view.Mean{Name: w.Name, Figure: quantity.NoFigure, How: w.words(), Reason: w.Reason, Source: w.Source}
		if w.Efficiency != nil {
			m.Figure = percent(*w.Efficiency)
		}
		v.Means = append(v.Means, m)
	}
	if p.energy != nil {
		v.Day = dayOf(p.energy, p.design)
		v.Day.Worked = p.worked
	}
	return v
}

// words say which load counts for how much.
func (w Weighted) words() string {
	var terms []string
	for _, l := range w.Weights {
		terms = append(terms, decimals(l.Weight, 2)+" at "+loadShare(l.Load))
	}
	return strings.Join(terms, ", ") + " %"
}

// dayOf draws the energy of a load profile.
func dayOf(e *Energy, d *budget.Design) *view.Day {
	v := &view.Day{Reason: e.Reason}
	if e.Reason == "" {
		v.In, v.Out, v.Lost = wattHours(e.In), wattHours(e.Out), wattHours(e.Lost)
		v.Efficiency = quantity.NoFigure
		if e.Efficiency != nil {
			v.Efficiency = percent(*e.Efficiency) + " %"
		}
	}
	if e.Hours > 0 && e.Hours < dayHours*(1-1e-9) {
		v.Off = "The rows cover " + quantityOf(e.Hours, "", 4) + " of 24 hours; for the rest nothing is counted."
	}
	v.Heads = []string{"Row", "Load, A", "Load, %", "Input, V", "Ambient, °C", "Hours", "In, W·h", "Out, W·h", "Lost, W·h", "Efficiency, %"}
	for i, r := range e.Rows {
		v.Rows = append(v.Rows, r.line(i, d))
	}
	return v
}

func (r EnergyRow) line(i int, d *budget.Design) view.Line {
	l := view.Line{Head: rowNo(i), Cells: []string{
		quantityOf(r.Iout, "", 4), loadShare(r.Iout / d.Output.Current.V), quantityOf(r.Vin, "", 4),
		strings.TrimSuffix(degreesCelsius(r.Ambient), " °C"), quantityOf(r.Hours, "", 4)}}
	share := quantity.NoFigure
	if r.In != nil && *r.In > 0 {
		share = percent(*r.Out / *r.In)
	}
	return view.Line{Head: l.Head, Cells: append(l.Cells, bareHours(r.In), bareHours(r.Out), bareHours(r.Lost), share)}
}

// wattHours writes an energy in four digits; bareHours without its unit, for a
// column that has it.
func wattHours(e *float64) string { return bareHours(e) + " W·h" }

func bareHours(e *float64) string {
	switch {
	case e == nil:
		return quantity.NoFigure
	case *e >= 1000:
		return decimals(*e, 0)
	case *e >= 100:
		return decimals(*e, 1)
	case *e >= 10:
		return decimals(*e, 2)
	}
	return decimals(*e, 3)
}
