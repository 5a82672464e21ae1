package magnetic_test

import (
	"fmt"
	"math"
	"testing"

	"lossbook/budget/magnetic"
	"pgregory.net/rapid"
)

// falling is a curve L(i) = 20 µH/(1 + i/10) to 40 A and held flat beyond, with its
// integral in closed form.
type falling struct{}

func (falling) At(i float64) (float64, bool) { return 20e-6 / (1 + math.Min(i, 40)/10), i > 40 }

func (f falling) Integral(i float64) float64 {
	inside := math.Min(i, 40)
	end, _ := f.At(40)
	return 200e-6*math.Log1p(inside/10) + (i-inside)*end
}

func TestLinkage(t *testing.T) {
	const l, sat, drop = 22e-6, 8.0, 0.3
	law := magnetic.NewLinkage(l, sat, drop, nil)
	area := func(i float64) float64 { return integral(law.Slope, 0, i) }
	plain := magnetic.NewLinkage(l, 0, 0, nil)
	curve := magnetic.NewLinkage(1, sat, drop, falling{})
	large := magnetic.NewLinkage(l, 1000, drop, nil) // a law of large currents, whose rate is small
	hold(t, []row{
		{"inductance at i_sat", law.Slope(sat), 0.7 * l, exact, "the stated drop"},
		{"inductance at no current", law.Slope(0), l, 0, "the entry"},
		{"inductance, current reversed", law.Slope(-sat), 0.7 * l, exact, "even"},
		{"linkage at 5 A", law.At(5), area(5), 1e-14, "quadrature of L(i)"},
		{"linkage at 20 A", law.At(20), area(20), 1e-13, "quadrature of L(i)"},
		{"linkage at −5 A", law.At(-5), -area(5), 1e-14, "odd"},
		{"inductance at 1000 A", large.Slope(1000), 0.7 * l, exact, "the stated drop"},
		{"linkage at 1000 A", large.At(1000), integral(large.Slope, 0, 1000), 1e-14, "quadrature of L(i)"},
		{"inductance at a drop of half a per cent", magnetic.NewLinkage(l, sat, 0.005, nil).Slope(sat), 0.995 * l, exact, "the stated drop"},
		{"tiny drop", magnetic.NewLinkage(l, sat, 1e-12, nil).At(5), l * 5, 1e-12, "next to constant"},
		{"constant", plain.At(-3), -3 * l, exact, "L·i"},
		{"constant slope", plain.Slope(100), l, 0, "L"},
		{"a curve goes before the law", curve.At(10), 200e-6 * math.Ln2, exact, "its integral"},
		{"a curve, current reversed", curve.At(-10), -200e-6 * math.Ln2, exact, "odd"},
		{"a curve's slope, reversed", curve.Slope(-10), 10e-6, exact, "even"},
	})
	for i, want := range map[float64]bool{40: false, math.Nextafter(40, 41): true, -41: true, 0: false} {
		if curve.Outside(i) != want || law.Outside(1e9) {
			t.Errorf("%.17g A: outside %v", i, curve.Outside(i))
		}
	}
}

// bisected is the half swing found the slow way.
func bisected(k magnetic.Linkage, mean, linkage float64) float64 {
	low, high := 0.0, 1.0
	excess := func(half float64) float64 { return k.At(mean+half) - k.At(mean-half) - linkage }
	for excess(high) < 0 {
		high *= 2
	}
	for range 200 {
		if mid := (low + high) / 2; excess(mid) < 0 {
			low = mid
		} else {
			high = mid
		}
	}
	return high
}

func TestSwing(t *testing.T) {
	const l, sat, drop = 22e-6, 8.0, 0.3
	root := math.Sqrt(0.3 / 0.7)
	most := math.Pi * l * sat / root // V·s: the law holds less
	law, curve := magnetic.NewLinkage(l, sat, drop, nil), magnetic.NewLinkage(1, 0, 0, falling{})
	var rows []row
	for _, mean := range []float64{0, 0.1, -4, 9, 60} {
		for _, share := range []float64{1e-9, 1e-3, 0.1, 0.3, 0.499999, 0.5, math.Nextafter(0.5, 0), math.Nextafter(0.5, 1), 0.500001, 0.7, 0.95} {
			half, possible := law.Swing(mean, share*most)
			if !possible {
				t.Errorf("mean %g, share %g: refused", mean, share)
			}
			tolerance := 1e-13
			if share < 1e-2 {
				tolerance = 1e-5 // the difference the slow way solves for cancels
			}
			rows = append(rows, row{fmt.Sprintf("law, mean %g A, y %g·π", mean, share), half, bisected(law, mean, share*most), tolerance * (1 + mean*mean/20), "bisection"})
		}
		for _, linkage := range []float64{1e-7, 1e-6, 5e-5, 2e-4, 1e-2} {
			half, possible := curve.Swing(mean, linkage)
			if !possible {
				t.Errorf("a curve refused %g V·s", linkage)
			}
			rows = append(rows, row{fmt.Sprintf("curve, mean %g A, %g V·s", mean, linkage), half, bisected(curve, mean, linkage), 1e-9, "bisection"})
		}
	}
	if half, possible := curve.Swing(5, 0); half != 0 || !possible {
		t.Errorf("no swing on a curve: %g, %v", half, possible)
	}
	large := magnetic.NewLinkage(l, 1000, drop, nil)
	far, _ := large.Swing(700, 2e-2)
	half, _ := magnetic.NewLinkage(l, 0, 0, nil).Swing(7, 3e-5)
	small, _ := law.Swing(4, 1e-15)
	rows = append(rows, row{"law of large currents", far, bisected(large, 700, 2e-2), 1e-12, "bisection"}, row{"constant", half, 3e-5 / l / 2, exact, "Δλ/L/2"},
		row{"next to no swing", small, 1e-15 / law.Slope(4) / 2, 1e-12, "Δλ/L(i)/2"})
	hold(t, rows)
}

// TestSwingEnds attacks y = π, beyond which the law can hold no flux.
func TestSwingEnds(t *testing.T) {
	law := magnetic.NewLinkage(1, 1, 0.5, nil) // rate 1, so y is the linkage itself
	below := math.Nextafter(math.Pi, 0)
	if half, possible := law.Swing(3, below); !possible || math.IsNaN(half) || math.IsInf(half, 0) || half < 1e15 {
		t.Errorf("just below π: %g, %v", half, possible)
	}
	for _, y := range []float64{math.Pi, math.Nextafter(math.Pi, 4), 1e300, math.Inf(1), math.NaN()} {
		if half, possible := law.Swing(3, y); possible || half != 0 {
			t.Errorf("y %.17g was accepted, with %g A", y, half)
		}
	}
	previous := 0.0
	for y := 3.0; y < math.Pi; y += 1e-3 { // rises to the end
		half, _ := law.Swing(3, y)
		if !(half > previous) {
			t.Fatalf("at y %g the swing %g is not above %g", y, half, previous)
		}
		previous = half
	}
}

// TestSwingInverts asks of any law and curve that the swing found holds the linkage.
func TestSwingInverts(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		drop := rapid.Float64Range(1e-6, 0.9).Draw(t, "drop")
		mean := rapid.Float64Range(-30, 30).Draw(t, "mean")
		y := rapid.Float64Range(0.05, 3).Draw(t, "y")
		rate := math.Sqrt(drop/(1-drop)) / 10
		for what, k := range map[string]magnetic.Linkage{"law": magnetic.NewLinkage(1e-5, 10, drop, nil), "curve": magnetic.NewLinkage(1, 0, 0, falling{})} {
			linkage := y * 1e-5 / math.Max(rate, 0.02)
			if what == "law" {
				linkage = y * 1e-5 / rate
			}
			half, possible := k.Swing(mean, linkage)
			if !possible {
				t.Fatalf("%s refused", what)
			}
			if got := k.At(mean+half) - k.At(mean-half); math.Abs(got-linkage) > 1e-9*linkage {
				t.Fatalf("%s: %g ± %g A links %g, want %g", what, mean, half, got, linkage)
			}
		}
	})
}
