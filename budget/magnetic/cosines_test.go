package magnetic

import (
	"math"
	"testing"
)

// TestCosinesAgree holds the table against the sum that it stands for, each factor
// and each cosine as written, over shares, temperatures, and the seams between patches.
func TestCosinesAgree(t *testing.T) {
	for name, w := range map[string]Winding{
		"none": {}, "curve": CurveWinding(line{}), "round": RoundWinding(9e-4, 2, 0.8), "foil": FoilWinding(2e-3, 12, 0.9), "thin": RoundWinding(1e-4, 1, 0.6),
	} {
		for _, f := range []float64{2e4, 2.5e5, 3e6} {
			s := NewSpectrum(w, f)
			compared, worst := 0, 0.0
			for temperature := -75.0; temperature < 390; temperature += 37.3 {
				largest, _ := plainCosines(w, f, 0.5, temperature)
				for d := 0.0; d <= 1; d += 0.00317 {
					got, possible := s.Cosines(d, temperature)
					want, _ := plainCosines(w, f, d, temperature)
					if !possible {
						t.Fatalf("%s: none at %g, %g °C", name, d, temperature)
					}
					compared++
					worst = math.Max(worst, math.Abs(got-want)/largest)
				}
			}
			t.Logf("%s at %g Hz: %d sums, worst off by %.1e of the largest", name, f, compared, worst)
			if worst > 2e-13 || compared < 3000 {
				t.Errorf("%s at %g Hz: worst off by %.2g of %d", name, f, worst, compared)
			}
		}
	}
}

// line is a curve without end: F = 1 + f/1 MHz.
type line struct{}

func (line) At(f float64) (float64, bool) { return 1 + f/1e6, false }

func plainCosines(w Winding, f, d, t float64) (sum float64, terms int) {
	for n := 1.0; n <= 50; n++ {
		factor, _ := w.Factor(n*f, t)
		sum += factor / (n * n * n * n) * (1 - math.Cos(2*math.Pi*n*d))
		terms++
	}
	return sum, terms
}

func TestCosinesBeyondTheTable(t *testing.T) {
	layered, plain := NewSpectrum(RoundWinding(9e-4, 2, 0.8), 1e5), NewSpectrum(Winding{}, 1e5)
	for _, c := range []struct {
		name string
		s    *Spectrum
		d, t float64
		want bool
	}{
		{"colder than the table", layered, 0.3, -80.1, false}, {"its cold end", layered, 0.3, -80, true},
		{"hotter", layered, 0.3, 400, false}, {"just below its hot end", layered, 0.3, 399.9, true},
		{"no layers, whatever the temperature", plain, 0.3, 5000, true},
		{"a whole period", layered, 1, 25, true}, {"more", layered, math.Nextafter(1, 2), 25, false}, {"no share at all", layered, 0, 25, true}, {"less than nothing", layered, -0.1, 25, false}, {"no number", layered, math.NaN(), 25, false},
	} {
		sum, possible := c.s.Cosines(c.d, c.t)
		if possible != c.want {
			t.Errorf("%s: possible %v, want %v", c.name, possible, c.want)
		}
		if !possible && sum != 0 || c.d == 0 && math.Abs(sum) > 1e-12 {
			t.Errorf("%s: the sum is %g", c.name, sum)
		}
	}
}
