package magnetic_test

import (
	"fmt"
	"math"
	"math/cmplx"
	"testing"

	"lossbook/budget/magnetic"
)

// layered is Dowell's factor in the complex form he derives it in, ξ the relative
// height: Re[M + (m² − 1)·D/3], M = z·coth z, D = 2z·tanh(z/2), z = (1 + j)·ξ.
func layered(xi, m float64) float64 {
	z := complex(xi, xi)
	skin := z / cmplx.Tanh(z)
	proximity := 2 * z * cmplx.Tanh(z/2)
	return real(skin) + (m*m-1)/3*real(proximity)
}

// TestDowell compares with the complex form, closely around the places where the
// function changes how it computes.
func TestDowell(t *testing.T) {
	var rows []row
	near := func(x float64) []float64 {
		return []float64{x * 0.999, math.Nextafter(x, 0), x, math.Nextafter(x, math.Inf(1)), x * 1.001}
	}
	places := []float64{1e-4, 2e-2, 0.1, 0.3, 1.7, 3, 8}
	places = append(places, 25, 100)
	for _, edge := range []float64{1e-3, 0.5, 20, 40} {
		places = append(places, near(edge)...)
	}
	for _, xi := range places {
		for _, m := range []float64{1, 1.5, 4, 30} {
			rows = append(rows, row{fmt.Sprintf("ξ %.17g, m %g", xi, m), magnetic.Dowell(xi, m), layered(xi, m), 2e-14, "the complex form"})
		}
	}
	rows = append(rows,
		row{"no height", magnetic.Dowell(0, 9), 1, 0, "direct current"},
		row{"excess at ξ 9e-4", magnetic.Dowell(9e-4, 100) - 1, 49999 * math.Pow(9e-4, 4) / 45, 1e-6, "(5m² − 1)·ξ⁴/45"},
		row{"excess at ξ 1.1e-3", magnetic.Dowell(1.1e-3, 100) - 1, 49999 * math.Pow(1.1e-3, 4) / 45, 1e-5, "(5m² − 1)·ξ⁴/45"},
		row{"where the formula overflows", magnetic.Dowell(800, 3), 800 * (1 + 16.0/3), exact, "ξ·(1 + ⅔(m² − 1))"},
	)
	hold(t, rows)
}

// TestWinding holds the geometries against each other.
func TestWinding(t *testing.T) {
	factor := func(w magnetic.Winding, f, temp float64) float64 { k, _ := w.Factor(f, temp); return k }
	foil := magnetic.FoilWinding(0.3e-3, 4, 1)
	const f = 150e3
	hold(t, []row{
		{"round as square", factor(magnetic.RoundWinding(0.6e-3, 4, 1), f, 60), factor(magnetic.FoilWinding(math.Sqrt(math.Pi*0.09e-6), 4, 1), f, 60), 1e-14, "a square of the same area"},
		{"porosity", factor(magnetic.FoilWinding(0.3e-3, 4, 0.64), f, 60), factor(magnetic.FoilWinding(0.24e-3, 4, 1), f, 60), 1e-14, "√0.64 of the height"},
		{"four times f, half the height", factor(magnetic.FoilWinding(0.15e-3, 4, 1), 4*f, 60), factor(foil, f, 60), 1e-14, "δ ∝ 1/√f"},
		{"hot copper at a higher f", factor(foil, f*magnetic.CopperFactor(120), 120), factor(foil, f, 20), 1e-13, "δ ∝ √ρ"},
		{"nothing known", factor(magnetic.Winding{}, f, 20), 1, 0, "no factor"},
	})
	if (magnetic.Winding{}).Known() || !foil.Known() || !magnetic.CurveWinding(step{}).Known() {
		t.Error("only the zero winding is not known")
	}
	if k, outside := magnetic.CurveWinding(step{}).Factor(3e6, 20); k != 7 || !outside {
		t.Errorf("the curve's answer came back as %g, outside %v", k, outside)
	}
}

// step answers 7 everywhere, outside above 1 MHz.
type step struct{}

func (step) At(x float64) (float64, bool) { return 7, x > 1e6 }

func TestCopper(t *testing.T) {
	const f, temp = 10e3, 80.0
	cold, warm := magnetic.SkinDepth(f, 20), magnetic.SkinDepth(f, temp)
	hold(t, []row{
		{"100 K up", magnetic.CopperFactor(120), 1.393, exact, "IEC 60028, 0.00393/K"},
		{"at 20 °C", magnetic.CopperFactor(20), 1, 0, "IEC 60028"},
		{"δ of warm copper", warm, cold * math.Sqrt(1+0.00393*60), 1e-14, "δ ∝ √ρ"},
		{"δ at a hundred times f", magnetic.SkinDepth(100*f, temp), warm / 10, 1e-14, "δ ∝ 1/√f"},
	})
}
