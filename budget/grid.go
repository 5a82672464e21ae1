package budget

import "lossbook/budget/stage"

// Inverting reports whether the stage gives a negative output, whose voltage is a
// magnitude here.
func (d *Design) Inverting() bool {
	t, _ := stage.ByName(d.Topology)
	return t.Inverting
}

// LoadGrid holds the shares of full load at which a budget is drawn up unless
// points are named.
func LoadGrid() []float64 { return []float64{0.05, 0.10, 0.20, 0.25, 0.30, 0.50, 0.75, 1} }

// Grid returns the default points of a valid design: input min, nominal and
// max, each over the load grid, at the design's ambient.
func Grid(d *Design) []Point {
	ambient := d.AmbientTemperature()
	var points []Point
	for _, vin := range []Num{d.Input.Min, d.Input.Nominal, d.Input.Max} {
		for _, share := range LoadGrid() {
			points = append(points, Point{Vin: vin.V, Iout: share * d.Output.Current.V, Ambient: ambient})
		}
	}
	return points
}

// AmbientTemperature returns the stated ambient, or its default, in °C.
func (d *Design) AmbientTemperature() float64 {
	if d.Ambient.Stated {
		return d.Ambient.V
	}
	return fieldIndex["ambient"].Default
}
