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

// TestDowellPublished holds values computed from the formula of Dowell (1966) by two
// separate programs.
func TestDowellPublished(t *testing.T) {
	const source = "Dowell (1966), derived"
	var rows []row
	for _, c := range []struct {
		xi     float64
		layers [4]float64
		half   float64 // of the last digit given
	}{
		{0.5, [4]float64{1.0055, 1.0263, 1.0610, 1.1718}, 5e-5},
		{1, [4]float64{1.0856, 1.4060, 1.9400, 3.6486}, 5e-5},
		{2, [4]float64{1.8978, 5.1465, 10.561, 27.887}, 5e-5},
	} {
		for i, m := range []float64{1, 2, 3, 5} {
			rows = append(rows, row{fmt.Sprintf("ξ %g, m %g", c.xi, m), magnetic.Dowell(c.xi, m), c.layers[i], c.half, source})
		}
	}
	foil := func(m float64) float64 { f, _ := magnetic.FoilWinding(0.2e-3, m, 1).Factor(100e3, 20); return f }
	hold(t, append(rows,
		row{"foil 0.2 mm at 100 kHz, ξ", 0.2e-3 / magnetic.SkinDepth(100e3, 20), 0.9570, 1e-4, source},
		row{"foil, one layer", foil(1), 1.072, 5e-4, source},
		row{"foil, two layers", foil(2), 1.343, 5e-4, source},
		row{"foil, three layers", foil(3), 1.793, 5e-4, source},
	))
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

// TestCopper holds resistivity and skin depth against wire tables: R per length of
// gauge n is ρ/(π·d²/4), d = 0.005 in·92^((36 − n)/39) (ASTM B258).
func TestCopper(t *testing.T) {
	delta := magnetic.SkinDepth(10e3, 20)
	resistivity := delta * delta * math.Pi * 10e3 * 4e-7 * math.Pi
	rows := []row{
		{"δ at 10 kHz", delta, 0.6609e-3, 1e-4, "derived, 0.6609 mm"},
		{"δ at 1 MHz", magnetic.SkinDepth(1e6, 20), 0.0661e-3, 5e-4, "derived, 0.0661 mm"},
		{"conductivity", 1 / resistivity, 58e6, 5e-5, "IACS, 58 MS/m"},
		{"100 K up", magnetic.CopperFactor(120), 1.393, exact, "IEC 60028, 0.00393/K"},
		{"at 20 °C", magnetic.CopperFactor(20), 1, 0, "IEC 60028"},
	}
	for gauge, ohms := range map[float64]float64{10: 0.9989, 14: 2.525, 18: 6.385, 20: 10.15, 24: 25.67, 28: 64.9, 32: 164.1, 40: 1049} {
		d := 0.005 * 25.4e-3 * math.Pow(92, (36-gauge)/39)
		const feet = 1000 * 0.3048
		rows = append(rows, row{fmt.Sprintf("AWG %g", gauge), resistivity * feet / (math.Pi * d * d / 4), ohms, 4e-4, "the AWG table in Floyd (as reproduced by HyperPhysics), Ω/1000 ft"})
	}
	hold(t, rows)
}
