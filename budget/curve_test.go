package budget

import (
	"math"
	"testing"

	"gonum.org/v1/gonum/integrate/quad"
	"gonum.org/v1/gonum/interp"
	"pgregory.net/rapid"
)

var bendy = Curve{{0.5, 22e-6}, {2, 21e-6}, {5, 15e-6}, {6, 9e-6}, {12, 8e-6}}

// TestCurve compares with the library's own interpolant inside the rows and with the
// end rows outside.
func TestCurve(t *testing.T) {
	c := newCurve(bendy)
	var reference interp.FritschButland
	if err := reference.Fit(c.xs, c.ys); err != nil {
		t.Fatal(err)
	}
	for x := 0.5; x <= 12; x += 0.01 {
		if y, outside := c.At(x); y != reference.Predict(x) || outside {
			t.Errorf("at %g: %g, outside %v", x, y, outside)
		}
	}
	for _, row := range bendy {
		if y, outside := c.At(row[0]); y != row[1] || outside {
			t.Errorf("row %v: %g, outside %v", row, y, outside)
		}
	}
	for x, want := range map[float64]float64{math.Nextafter(0.5, 0): 22e-6, -7: 22e-6, math.Nextafter(12, 13): 8e-6, 1e300: 8e-6, math.Inf(1): 8e-6} {
		if y, outside := c.At(x); y != want || !outside {
			t.Errorf("at %.17g: %g, outside %v", x, y, outside)
		}
	}
	if c.Most() != 22e-6 || newCurve(nil) != nil {
		t.Error("the largest row is wrong, or no rows give a curve")
	}
}

// TestCurveMonotone asks that nothing between two rows lies outside them.
func TestCurveMonotone(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		var rows Curve
		x := rapid.Float64Range(0, 5).Draw(t, "x")
		for range rapid.IntRange(2, 8).Draw(t, "rows") {
			rows = append(rows, [2]float64{x, rapid.Float64Range(1e-3, 50).Draw(t, "y")})
			x += rapid.Float64Range(1e-3, 10).Draw(t, "step")
		}
		c := newCurve(rows)
		for i := 1; i < len(rows); i++ {
			a, b := rows[i-1], rows[i]
			for k := range 11 {
				y, _ := c.At(a[0] + (b[0]-a[0])*float64(k)/10)
				if slack := 1e-12 * (a[1] + b[1]); y < math.Min(a[1], b[1])-slack || y > math.Max(a[1], b[1])+slack {
					t.Fatalf("between %v and %v: %g", a, b, y)
				}
			}
		}
	})
}

// TestCurveIntegral compares with quadrature between the rows, held flat outside.
func TestCurveIntegral(t *testing.T) {
	for name, rows := range map[string]Curve{"five rows": bendy, "two rows": bendy[:2], "three rows": bendy[1:4], "one row": bendy[2:3], "from zero": {{0, 3e-6}, {4, 1e-6}}} {
		c := newCurve(rows)
		value := func(x float64) float64 { y, _ := c.At(x); return y }
		edges := []float64{0}
		for _, row := range rows {
			edges = append(edges, row[0])
		}
		for _, x := range []float64{0, 0.2, 0.5, 1.7, 2, 3, 5, 5.5, 6, 9, 12, 20} {
			want := 0.0
			for i, low := range edges {
				high := math.Inf(1)
				if i+1 < len(edges) {
					high = edges[i+1]
				}
				if high = math.Min(high, x); high > low {
					want += quad.Fixed(value, low, high, 5, quad.Legendre{}, 0)
				}
			}
			if got := c.Integral(x); math.Abs(got-want) > 1e-13*want {
				t.Errorf("%s to %g: %g, by quadrature %g", name, x, got, want)
			}
		}
	}
}

// TestCurveOfFewRows is a constant for one row and a straight line for two.
func TestCurveOfFewRows(t *testing.T) {
	one, two := newCurve(Curve{{3, 7}}), newCurve(Curve{{2, 10}, {6, 30}})
	for x, want := range map[float64]bool{3: false, math.Nextafter(3, 0): true, math.Nextafter(3, 4): true} {
		if y, outside := one.At(x); y != 7 || outside != want {
			t.Errorf("one row at %.17g: %g, outside %v", x, y, outside)
		}
	}
	for x, want := range map[float64]float64{2: 10, 3: 15, 4.5: 22.5, 6: 30} {
		if y, _ := two.At(x); math.Abs(y-want) > 1e-14*want {
			t.Errorf("two rows at %g: %g, want %g", x, y, want)
		}
	}
}

// TestLogCurve is a power law between two rows of a curve of factors.
func TestLogCurve(t *testing.T) {
	c := newLogCurve(Curve{{1e4, 2}, {1e6, 20}})
	for x, want := range map[float64]float64{1e4: 2, 1e5: 2 * math.Sqrt(10), 1e6: 20, 1e3: 2, 1e9: 20} {
		y, outside := c.At(x)
		if math.Abs(y-want) > 1e-13*want || outside != (x < 1e4 || x > 1e6) {
			t.Errorf("at %g Hz: %g, outside %v; want %g", x, y, outside, want)
		}
	}
}

// TestCurvesInUse asks that a design's curves go before what they replace.
func TestCurvesInUse(t *testing.T) {
	p := Point{48, 8, 25}
	d := full()
	d.Inductor.ACCurve = nil
	_, dowell := solved(t, d, p)
	d.Inductor.ACCurve = Curve{{1e3, 5}}
	_, flat := solved(t, d, p)
	d.Inductor.Winding = nil
	_, without := solved(t, d, p)
	if a, b := item(t, flat, "inductor", "winding_ac"), item(t, without, "inductor", "winding_ac"); a != b || a == item(t, dowell, "inductor", "winding_ac") {
		t.Errorf("the curve of factors doesn't go before the winding: %g and %g W", a, b)
	}
	d.Switch.RdsOnCurve = Curve{{0, 2}, {200, 2}}
	_, hot := solved(t, d, p)
	rms := hot.SwitchRMS
	if got, want := item(t, hot, "switch", "conduction"), rms*rms*2*d.Switch.RdsOn.V; math.Abs(got-want) > 1e-12*want {
		t.Errorf("conduction %g W, by the curve's multiplier %g W", got, want)
	}
	d.Inductor.LCurve = Curve{{0, 6e-6}, {100, 6e-6}}
	_, half := solved(t, d, p)
	if ratio := (half.Inductor.Max - half.Inductor.Min) / (hot.Inductor.Max - hot.Inductor.Min); !(ratio > 1.7 && ratio < 2.1) {
		t.Errorf("half the inductance by its curve gives %g times the ripple", ratio)
	}
}
