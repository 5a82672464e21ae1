package budget

import (
	"math"
	"testing"
)

// FuzzPoint throws numbers at two entries of a random design and at the point: what
// Validate accepts is worked out, with numbers or a reason, and never a panic.
func FuzzPoint(f *testing.F) {
	for seed := range uint64(40) {
		f.Add(seed, uint16(7*seed), 1.0, uint16(11*seed+3), 0.0, 1.0, 1.0, 25.0)
	}
	for _, v := range []float64{0, 1e-30, 1e-12, 1e12, 1e30, math.MaxFloat64, -273.15, math.SmallestNonzeroFloat64, math.Nextafter(1, 2)} {
		f.Add(uint64(3), uint16(20), v, uint16(60), v, 1.0, 0.5, v)
		f.Add(uint64(4), uint16(90), v, uint16(13), 1.0, v, v, 25.0)
	}
	f.Fuzz(func(t *testing.T, seed uint64, first uint16, a float64, second uint16, b, vin, load, ambient float64) {
		c := newChance(seed % 4096)
		d := c.design(1 + 3*float64(seed%2))
		if seed%5 == 0 {
			d = c.wild()
		}
		throw(d, first, a)
		throw(d, second, b)
		m, err := Prepare(d)
		if err != nil {
			return
		}
		var list []Budget
		for _, p := range []Point{
			{d.Input.Nominal.V, d.Output.Current.V, d.AmbientTemperature()},
			{d.Input.Nominal.V * vin, d.Output.Current.V * load, ambient},
		} {
			if len(ValidatePoints([]Point{p})) > 0 {
				continue
			}
			list = append(list, Budget{})
			last := &list[len(list)-1]
			m.At(p, last)
			decent(t, m, last)
			if last.State == Settled {
				inOrder(t, last)
			}
		}
		m.Review(list)
	})
}

// throw puts a number at one of the places of the table that hold one.
func throw(d *Design, place uint16, v float64) {
	n := int(place)
	for {
		for _, part := range parts {
			for _, field := range part.Fields {
				entry, there := d.Slot(field.Path, false)
				if number, ok := entry.(*Num); there && ok {
					if n--; n < 0 {
						*number = N(v)
						return
					}
				}
			}
		}
	}
}

// inOrder asks of a settled budget what must be so of any: energy closes, the losses
// add up, efficiency lies between 0 and 1, and it is as near as it says.
func inOrder(t complainer, b *Budget) {
	t.Helper()
	sum := 0.0
	for _, it := range b.Items {
		sum += it.Power
	}
	if math.Abs(sum-b.Loss) > 1e-12*b.Loss || math.Abs(b.Pin-b.Pout-b.Loss) > 1e-12*b.Pin {
		t.Errorf("%v: items %g, loss %g, Pin %g, Pout %g", b.Point, sum, b.Loss, b.Pin, b.Pout)
	}
	if b.Efficiency < 0 || b.Efficiency > 1 || b.Efficiency == 0 && b.Pout > 0 && b.Loss < 1e300*b.Pout {
		t.Errorf("%v: efficiency %g of %g W", b.Point, b.Efficiency, b.Pout)
	}
	if !(b.Residual <= tolerance) || b.Iterations < 1 || !finite(b.LossError) {
		t.Errorf("%v: residual %g after %d", b.Point, b.Residual, b.Iterations)
	}
}
