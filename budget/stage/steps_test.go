package stage_test

import (
	"math"
	"testing"

	"lossbook/budget/magnetic"
	"lossbook/budget/stage"
)

// counted counts how often a linkage is asked.
type counted struct {
	stage.Linkage
	asked *int
}

func (c counted) At(i float64) float64 { *c.asked++; return c.Linkage.At(i) }

// TestPeakStartsWell asks how many steps the peak takes. Without saturation and
// resistance it has the closed form √(2·il·T/(L·(1/Von + 1/Voff))), and the search
// begins there and has nothing left to do.
func TestPeakStartsWell(t *testing.T) {
	for _, il := range []float64{1e-6, 0.01, 0.3, 40} {
		for _, threshold := range []float64{0, 0.7} {
			asked := 0
			d := stage.Drive{On: 7, Off: 2, Period: period}
			flow, fault := stage.Discontinuous(d, stage.Branches{Threshold: threshold}, counted{coil(3e-6), &asked}, il)
			if fault != stage.NoFault {
				t.Fatalf("%g A: fault %d", il, fault)
			}
			hold(t, []row{{"peak", flow.Max, math.Sqrt(2 * il * period / (3e-6 * (1.0/7 + 1/(2+threshold)))), 1e-14, "the closed form"}})
			if asked != 2 { // to see that it is right, and for the flow
				t.Errorf("%g A: the linkage was asked %d times, want 2", il, asked)
			}
		}
	}
}

// TestPeakSteps asks that a peak is found in a few steps with resistance and
// saturation too: Newton's method doubles the digits with each.
func TestPeakSteps(t *testing.T) {
	d := stage.Drive{On: 7, Off: 2, Period: period}
	checked := 0
	for _, b := range []stage.Branches{{On: 0.1}, {On: 0.5, Off: 0.2}, {Off: 1, Threshold: 0.5}} {
		for il := 1e-3; il < 3; il *= 3 {
			asked := 0
			if _, fault := stage.Discontinuous(d, b, counted{soft(3e-6), &asked}, il); fault != stage.NoFault {
				t.Fatalf("%+v, %g A: fault %d", b, il, fault)
			}
			if asked > 9 {
				t.Errorf("%+v, %g A: the linkage was asked %d times", b, il, asked)
			}
			checked++
		}
	}
	if checked < 20 {
		t.Errorf("only %d peaks", checked)
	}
}

// TestCannotRestBounds puts the mean current beside where the proof ends, in closed
// form: of a coil without saturation P = Von·T/L, and λ(2·il) = 2·L·il, so that
// il = T/(2·L)/(1/Von + 1/(Voff + Vd + P/2·Roff)).
func TestCannotRestBounds(t *testing.T) {
	for _, c := range []struct{ on, off, vd, roff, l float64 }{
		{7, 2, 0.3, 0.4, 3e-6}, {7, 2, 0.3, 0.4, 10e-3}, {5e-3, 2, 0.3, 0, 3e-6}, {7, 4e-3, 1e-3, 0, 3e-6},
	} {
		d, worst := stage.Drive{On: c.on, Off: c.off, Period: period}, stage.Branches{Off: c.roff, Threshold: c.vd}
		peak := c.on * period / c.l
		end := period / (2 * c.l) / (1/c.on + 1/(c.off+c.vd+peak/2*c.roff))
		for share, want := range map[float64]bool{1 - 1e-9: false, 1 + 1e-9: true} {
			if got := stage.CannotRest(d, worst, coil(c.l), share*end); got != want {
				t.Errorf("%+v, %g of %g A: proved %v, want %v", c, share, end, got, want)
			}
		}
	}
	if stage.CannotRest(stage.Drive{On: 7, Off: -1, Period: period}, stage.Branches{Threshold: 1}, coil(3e-6), 5) {
		t.Error("proved with nothing to lower the current")
	}
}

// TestCannotRestSaturated does the same of a coil that saturates at a few milliamperes:
// λ(i) = L/r·atan(r·i) with r = √(drop/(1 − drop))/i_sat, so that P = tan(r·Von·T/L)/r.
func TestCannotRestSaturated(t *testing.T) {
	const l, sat = 20e-3, 4e-3
	r := math.Sqrt(0.4/0.6) / sat
	d, worst := stage.Drive{On: 7, Off: 2, Period: period}, stage.Branches{Off: 90}
	peak := math.Tan(r*7*period/l) / r
	end := math.Tan(r/l*period/(1.0/7+1/(2+peak/2*90))) / r / 2
	for share, want := range map[float64]bool{1 - 1e-9: false, 1 + 1e-9: true} {
		if got := stage.CannotRest(d, worst, magnetic.NewLinkage(l, sat, 0.4, nil), share*end); got != want {
			t.Errorf("%g of %g A: proved %v, want %v", share, end, got, want)
		}
	}
}
