package budget

import (
	"math"
	"slices"
)

// Lattice is where a map is drawn: every load at every input voltage. Both rise.
type Lattice struct {
	Loads   []float64 // shares of full load
	Vins    []float64 // V
	Ambient float64   // °C
}

// MapLattice spreads so many columns of load, from the lowest of LoadGrid to full
// load, and so many rows of input voltage, from the lowest to the highest, over a
// valid design. The loads stand in equal steps, or with even false in equal ratios,
// as on a logarithmic axis; their ends and those of the voltages are exact. A design
// with one input voltage has one row, whatever is asked for. At least 1 of each.
func MapLattice(d *Design, columns, rows int, even bool) Lattice {
	if d.Input.Min.V == d.Input.Max.V {
		rows = 1
	}
	loads := steps(LoadGrid()[0], 1, columns)
	if !even {
		loads = ratios(LoadGrid()[0], 1, columns)
	}
	return Lattice{Loads: loads, Vins: steps(d.Input.Min.V, d.Input.Max.V, rows), Ambient: d.AmbientTemperature()}
}

// steps returns n numbers from low to high in equal steps; 1 number is high.
func steps(low, high float64, n int) []float64 {
	list := make([]float64, n)
	for i := range list {
		list[i] = low + (high-low)*float64(i)/float64(n-1)
	}
	list[0], list[n-1] = low, high // also where there is nothing to divide by
	return list
}

// ratios returns n numbers from low > 0 to high, each the same multiple of the one
// before; 1 number is high.
func ratios(low, high float64, n int) []float64 {
	list := steps(math.Log(low), math.Log(high), n)
	for i := range list {
		list[i] = math.Exp(list[i])
	}
	list[0], list[n-1] = low, high
	return list
}

// Spot is one point of a map: what a Budget says at a glance. One that did not
// settle has a state, a part if it runs away, the reason as its only finding, and no
// figure.
type Spot struct {
	Point
	State      State
	Part       string
	Efficiency float64 // 0…1
	Loss       float64 // W
	Outside    bool    // a curve was held flat for one of its losses
	Findings   []Finding
}

// Spots fills the row of a map, from the left: each is what At and Findings give at
// its point, whatever else is computed meanwhile. It is safe for concurrent use on
// rows of the same map.
func (m *Model) Spots(l Lattice, row int) []Spot {
	var b Budget
	spots := make([]Spot, len(l.Loads))
	for i, share := range l.Loads {
		m.At(Point{Vin: l.Vins[row], Iout: share * m.design.Output.Current.V, Ambient: l.Ambient}, &b)
		spots[i] = Spot{
			Point: b.Point, State: b.State, Part: b.Part, Efficiency: b.Efficiency, Loss: b.Loss, Findings: m.Findings(&b),
			Outside: slices.ContainsFunc(b.Items, func(it Item) bool { return it.Outside }),
		}
	}
	return spots
}
