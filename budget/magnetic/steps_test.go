package magnetic_test

import (
	"testing"

	"lossbook/budget/magnetic"
)

// counted is a curve that counts how often its integral is asked for.
type counted struct {
	magnetic.Area
	asked *int
}

func (c counted) Integral(i float64) float64 { *c.asked++; return c.Area.Integral(i) }

// flat is half a henry at any current, so that all figures are whole.
type flat struct{}

func (flat) At(float64) (float64, bool) { return 0.5, false }
func (flat) Integral(i float64) float64 { return i / 2 }

// TestSwingSteps asks how many steps a swing on a curve takes: none where the
// inductance is the same everywhere, and a few elsewhere, since Newton's method doubles
// the digits with each.
func TestSwingSteps(t *testing.T) {
	for _, mean := range []float64{0, 16, -64} {
		asked := 0
		half, _ := magnetic.NewLinkage(1, 0, 0, counted{flat{}, &asked}).Swing(mean, 4)
		if half != 4 || asked != 2 {
			t.Errorf("mean %g A: half %g A after %d questions, want 4 A after 2", mean, half, asked)
		}
	}
	checked := 0
	for _, mean := range []float64{0, 1, -4, 9, 30} {
		for linkage := 1e-5; linkage < 1e-3; linkage *= 3 {
			asked := 0
			magnetic.NewLinkage(1, 0, 0, counted{falling{}, &asked}).Swing(mean, linkage)
			if asked > 20 {
				t.Errorf("mean %g A, %g V·s: %d questions", mean, linkage, asked)
			}
			checked++
		}
	}
	if checked < 20 {
		t.Errorf("only %d swings", checked)
	}
}
