package web

import "lossbook/budget"

// Weighted is one number for a converter that is not always at full load: a
// mean of its efficiencies over loads, each with a weight.
type Weighted struct {
	Key        string       `json:"key"` // mean_active, european, cec
	Name       string       `json:"name"`
	Weights    []LoadWeight `json:"weights"`
	Source     string       `json:"source"`               // where the weights come from, and whether it was read
	Efficiency *float64     `json:"efficiency,omitempty"` // 0…1
	Reason     string       `json:"reason,omitempty"`     // why there is none
}

// LoadWeight is what the efficiency at one load counts for.
type LoadWeight struct {
	Load   float64 `json:"load"` // share of full load
	Weight float64 `json:"weight"`
}

// weightings are the means that are shown. Their loads are loads of the grid, so
// that each efficiency is one that was computed and none is interpolated.
var weightings = []Weighted{
	{Key: "mean_active", Name: "Mean active efficiency",
		Weights: []LoadWeight{{0.25, 0.25}, {0.50, 0.25}, {0.75, 0.25}, {1, 0.25}},
		Source:  "10 CFR 430 subpart B, appendix Z (from memory)"},
	{Key: "european", Name: "European weights",
		Weights: []LoadWeight{{0.05, 0.03}, {0.10, 0.06}, {0.20, 0.13}, {0.30, 0.10}, {0.50, 0.48}, {1, 0.20}},
		Source:  "Joint Research Centre, Ispra, for solar inverters in Central Europe (read second-hand)"},
	{Key: "cec", Name: "CEC weights",
		Weights: []LoadWeight{{0.10, 0.04}, {0.20, 0.05}, {0.30, 0.12}, {0.50, 0.21}, {0.75, 0.53}, {1, 0.05}},
		Source:  "California Energy Commission, for solar inverters in the south-west of the USA (read second-hand)"},
}

// weightedOf works out every mean from points at one input voltage and ambient;
// full is the current of full load, in A.
func weightedOf(points []Point, full float64) []Weighted {
	list := make([]Weighted, len(weightings))
	for i, w := range weightings {
		list[i] = w.over(points, full)
	}
	return list
}

func (w Weighted) over(points []Point, full float64) Weighted {
	sum := 0.0
	for _, l := range w.Weights {
		q := pointAt(points, l.Load*full)
		switch {
		case q == nil:
			w.Reason = "the point at " + loadShare(l.Load) + " % of full load was not kept"
			return w
		case !q.Settled():
			w.Reason = "at " + loadShare(l.Load) + " % of full load there is no figure: " + q.Reason
			return w
		}
		sum += l.Weight * q.Efficiency
	}
	w.Efficiency = &sum
	return w
}

func pointAt(points []Point, iout float64) *Point {
	for i := range points {
		if points[i].Iout == iout {
			return &points[i]
		}
	}
	return nil
}

// Energy is what a load profile draws, delivers and loses in a day.
type Energy struct {
	Rows       []EnergyRow `json:"rows"`
	Hours      float64     `json:"hours"`                // of the day that the rows cover
	In         *float64    `json:"in_wh,omitempty"`      // W·h a day
	Out        *float64    `json:"out_wh,omitempty"`     // W·h a day
	Lost       *float64    `json:"lost_wh,omitempty"`    // W·h a day
	Efficiency *float64    `json:"efficiency,omitempty"` // energy out over energy in, 0…1: no mean of percentages
	Reason     string      `json:"reason,omitempty"`     // why there are no figures
}

// EnergyRow is one row of a profile with its point.
type EnergyRow struct {
	Vin     float64  `json:"vin"`
	Iout    float64  `json:"iout"`
	Ambient float64  `json:"ambient"`
	Hours   float64  `json:"hours"`             // a day
	In      *float64 `json:"in_wh,omitempty"`   // W·h a day
	Out     *float64 `json:"out_wh,omitempty"`  // W·h a day
	Lost    *float64 `json:"lost_wh,omitempty"` // W·h a day
	Reason  string   `json:"reason,omitempty"`  // why there are no figures
}

// duty is a row of a load profile as it was understood.
type duty struct {
	budget.Point
	hours float64 // a day
	row   int     // as typed, from 0
}

// energyOf adds up the energy of a profile from its points, one for each row. A
// row without a figure leaves the day without any: the rest would pass for it.
func energyOf(profile []duty, points []Point) Energy {
	e := Energy{Rows: make([]EnergyRow, len(profile))}
	var in, out, lost float64
	for i, use := range profile {
		row, q := &e.Rows[i], &points[i]
		*row = EnergyRow{Vin: use.Vin, Iout: use.Iout, Ambient: use.Ambient, Hours: use.hours, Reason: q.Reason}
		e.Hours += use.hours
		if !q.Settled() {
			if e.Reason == "" {
				e.Reason = "row " + rowNo(use.row) + " has no figure: " + q.Reason
			}
			continue
		}
		row.In, row.Out, row.Lost = times(q.Pin, use.hours), times(q.Pout, use.hours), times(q.Loss, use.hours)
		in, out, lost = in+*row.In, out+*row.Out, lost+*row.Lost
	}
	if e.Reason != "" {
		return e
	}
	e.In, e.Out, e.Lost = &in, &out, &lost
	if in > 0 {
		share := out / in
		e.Efficiency = &share
	}
	return e
}

func times(power, hours float64) *float64 {
	energy := power * hours
	return &energy
}
