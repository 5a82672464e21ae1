package web

import (
	"encoding/json"
	"os"
	"testing"

	"lossbook/budget"
)

// BenchmarkMap computes 200 by 200 points of the design that speed is measured with,
// dealt out as a page's map is: the figures alone, and with every point's findings.
func BenchmarkMap(b *testing.B) {
	var c struct{ Design budget.Design }
	raw, err := os.ReadFile("../testdata/cases/bench.json")
	if err == nil {
		err = json.Unmarshal(raw, &c)
	}
	if err != nil {
		b.Fatal(err)
	}
	l := budget.MapLattice(&c.Design, 200, 200, false)
	b.Run("figures", func(b *testing.B) {
		for b.Loop() {
			model, err := budget.Prepare(&c.Design)
			if err != nil {
				b.Fatal(err)
			}
			losses := make([][]float64, len(l.Vins))
			inTurn(len(losses), func(row int) {
				losses[row] = make([]float64, len(l.Loads))
				var found budget.Budget
				for i, share := range l.Loads {
					model.At(budget.Point{Vin: l.Vins[row], Iout: share * c.Design.Output.Current.V, Ambient: l.Ambient}, &found)
					losses[row][i] = found.Loss
				}
			})
		}
	})
	b.Run("findings", func(b *testing.B) {
		for b.Loop() {
			if _, err := mapOf(b.Context(), &c.Design, l); err != nil {
				b.Fatal(err)
			}
		}
	})
}
