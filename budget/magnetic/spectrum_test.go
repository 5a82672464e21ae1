package magnetic

import (
	"math"
	"testing"
)

// TestSpectrumAgrees holds the table against the factors it stands for, over its
// whole range, beyond both ends, and at the seams of its pieces.
func TestSpectrumAgrees(t *testing.T) {
	compared, worst := 0, 0.0
	for _, w := range []Winding{RoundWinding(9e-4, 2, 0.8), FoilWinding(2e-4, 6, 1), RoundWinding(1e-4, 1, 0.6), FoilWinding(2e-3, 12, 0.9)} {
		for _, f := range []float64{2e4, 2.5e5, 3e6} {
			s := NewSpectrum(w, f)
			for temperature := -150.0; temperature < 450; temperature += 0.7 {
				for _, n := range []int{0, 1, 2, 7, 49} {
					var square [Harmonics]float64
					square[n] = 1
					got, _ := s.Weigh(&square, temperature)
					want, _ := w.Factor(float64(n+1)*f, temperature)
					compared++
					worst = math.Max(worst, math.Abs(got-want)/want)
				}
			}
		}
	}
	t.Logf("%d factors, worst off by %.1e", compared, worst)
	if worst > 2e-12 || compared < 10000 {
		t.Errorf("worst off by %.2g of %d", worst, compared)
	}
}
