package web

import (
	"context"
	"fmt"
	"slices"

	"lossbook/budget"
)

// conditions are what a converter works under: its input range, its full load
// and the air around it.
type conditions struct{ lowest, nominal, highest, current, ambient float64 }

func conditionsOf(d *budget.Design) conditions {
	return conditions{d.Input.Min.V, d.Input.Nominal.V, d.Input.Max.V, d.Output.Current.V, d.AmbientTemperature()}
}

// inputAt is the voltage that an address asks for: an end of the range, or a
// value in V for all revisions.
type inputAt struct {
	end   string // "", "lowest", "nominal", "highest"
	volts float64
}

func (c conditions) vin(in inputAt) float64 {
	switch in.end {
	case "lowest":
		return c.lowest
	case "nominal":
		return c.nominal
	case "highest":
		return c.highest
	}
	return in.volts
}

// over are the points of the load grid at one voltage.
func (c conditions) over(vin float64) []budget.Point {
	var points []budget.Point
	for _, part := range budget.LoadGrid() {
		points = append(points, budget.Point{Vin: vin, Iout: part * c.current, Ambient: c.ambient})
	}
	return points
}

// grid is every point a comparison looks at: the range's, for the findings, and
// those at the voltage asked for, which come last.
func (c conditions) grid(in inputAt) []budget.Point {
	var points []budget.Point
	chosen := c.vin(in)
	for _, vin := range []float64{c.lowest, c.nominal, c.highest} {
		if vin != chosen {
			points = append(points, c.over(vin)...)
		}
	}
	return append(points, c.over(chosen)...)
}

// place says where each revision's figures are taken.
type place struct {
	under []conditions // of each side
	in    inputAt
}

// stored takes the saved figures if every revision holds all points, computed
// with one model; else it says why they can't be compared.
func stored(sides []side, saved [][]Point, p place) (why string) {
	for _, s := range sides {
		if s.model != sides[0].model {
			return "the revisions were saved with different versions of the model"
		}
	}
	picked := make([][]Point, len(sides))
	for i := range sides {
		points, ok := pick(saved[i], p.under[i].grid(p.in))
		if !ok {
			return "not every revision was saved with these points"
		}
		picked[i] = points
	}
	for i := range sides {
		sides[i].points = lastLoads(picked[i])
	}
	return ""
}

// pick finds the points asked for among those that were saved.
func pick(saved []Point, asked []budget.Point) ([]Point, bool) {
	var points []Point
	for _, a := range asked {
		i := slices.IndexFunc(saved, func(p Point) bool { return p.Vin == a.Vin && p.Iout == a.Iout && p.Ambient == a.Ambient })
		if i < 0 {
			return nil, false
		}
		points = append(points, saved[i])
	}
	return points, true
}

func lastLoads(points []Point) []Point { return points[len(points)-len(budget.LoadGrid()):] }

// recompute gives every side what this program's model finds at its points.
func recompute(ctx context.Context, sides []side, p place) error {
	for i := range sides {
		s := &sides[i]
		found, wrong, err := compute(ctx, s.design, p.under[i].grid(p.in))
		if err != nil {
			return err
		}
		if len(wrong) > 0 {
			s.reason = fmt.Sprintf("today’s model, version %s, does not take this design: %s %s", budget.ModelVersion, labelOf(wrong[0].Path), wrong[0].Message)
			s.points, s.findings = nil, nil
			continue
		}
		s.points, s.findings = lastLoads(found.Points), found.Findings
	}
	return nil
}
