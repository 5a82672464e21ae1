package budget

import (
	"fmt"
	"math"
	"strings"
	"testing"
)

// says asks for one finding whose words hold others.
func says(t *testing.T, list []Finding, words ...string) {
	t.Helper()
	if len(list) != 1 {
		t.Errorf("%d findings, want one that says %q: %+v", len(list), words, list)
		return
	}
	for _, w := range words {
		if !strings.Contains(list[0].Message, w) {
			t.Errorf("%q doesn't say %q", list[0].Message, w)
		}
	}
}

// TestNumbersInWords reads the figures that findings name, each worked out here.
func TestNumbersInWords(t *testing.T) {
	d := quiet()
	d.Switch.VdsRating = N(60) // 56 V
	says(t, foundAt(t, d, easy, "blocking_voltage", "switch"), "is 56 V, 93 % of the rated 60 V")

	d = quiet()
	d.Controller.OnTimeMin = N(900e-9)
	_, b := solved(t, d, easy)
	if b.OnTime < 830e-9 || b.OnTime > 850e-9 { // 12 of 48 V at 300 kHz, and a little for the drops
		t.Fatalf("an on-time of %g s", b.OnTime)
	}
	says(t, foundAt(t, d, easy, "modulation", "controller"), fmt.Sprintf("is %.3g ns, the shortest possible 900 ns", b.OnTime/1e-9))

	d = quiet()
	d.Inductor.Inductance = N(5e-6) // 36 V for 12/48 of 1/300 kHz, 6 A of 8 A
	list := review(t, d, "ripple")
	says(t, list, "usual are 20 to 40 %")
	if ratio := 36.0 / 4 / 300e3 / 5e-6 / 8; math.Abs(list[0].Value-ratio) > 0.02*ratio || !strings.Contains(list[0].Message, "ripple is 7") || list[0].Limit != 0.4 {
		t.Errorf("%+v, want about %g", list[0], ratio)
	}
	d.Inductor.Inductance = N(50e-6)
	if list := review(t, d, "ripple"); len(list) != 1 || list[0].Limit != 0.2 || !strings.Contains(list[0].Message, "smaller inductor") {
		t.Errorf("too little ripple: %+v", list)
	}

	d = quiet()
	d.SyncSwitch.QRRDidt = N(1e6)
	if list := foundAt(t, d, easy, "recovery_slope", "rectifier"); len(list) != 1 || list[0].Limit != 5 {
		t.Errorf("%+v, want a limit of 5", list)
	}
	if list := foundAt(t, quiet(), Point{61, 8, 61}, "hot_surface", "switch"); len(list) != 1 || list[0].Limit != 60 {
		t.Errorf("%+v, want a limit of 60 °C", list)
	}
	if list := foundAt(t, quiet(), Point{61, 8, 25}, "hazard_voltage", ""); len(list) != 1 || list[0].Limit != 60 || list[0].Value != 61 {
		t.Errorf("%+v, want 61 of 60 V", list)
	}
}

// TestSupplyLowest asks a review for the lowest supply of several.
func TestSupplyLowest(t *testing.T) {
	d := quiet()
	d.Drive.FedFrom, d.Drive.VoltageOff = "input", N(-42)
	points := []Point{{49, 8, 25}, {44, 8, 25}, {46, 8, 25}}
	for range points {
		if list := review(t, d, "supply_low", points...); len(list) != 1 || list[0].Value != 44 || list[0].Limit != 50 || list[0].At.Vin != 44 {
			t.Errorf("%+v, want it at 44 V of 50 V", list)
		}
		points = append(points[1:], points[0])
	}
}

// TestDiscontinuousBegins finds by itself where the modes change, and asks the note to
// be above it by no more than the 0.2 % it promises.
func TestDiscontinuousBegins(t *testing.T) {
	for _, inductance := range []float64{12e-6, 60e-6} {
		d := quietDiode()
		d.Inductor.Inductance = N(inductance)
		low, high := 1e-3, 1.0
		for range 40 {
			mid := (low + high) / 2
			if _, b := solved(t, d, Point{48, 8 * mid, 25}); b.Mode == DCM {
				low = mid
			} else {
				high = mid
			}
		}
		list := review(t, d, "discontinuous")
		if len(list) != 1 || list[0].Value < low || list[0].Value > low+0.002 || list[0].Limit != 1 || *list[0].At != (Point{48, 8 * list[0].Value, 25}) {
			t.Errorf("%g H: %+v, the modes change at %g", inductance, list, low)
			continue
		}
		says(t, list, fmt.Sprintf("below %.3g %% of full load", 100*list[0].Value))
	}
}

// TestImplausibleEnds asks from which load on a loss above the output is said, and what
// of it: the largest.
func TestImplausibleEnds(t *testing.T) {
	d := quiet()
	d.Switch.QG = N(1e-3)
	for share, level := range map[float64]Level{0.2 * (1 - 1e-9): "", 0.2: Caution, 1: Caution} {
		list := review(t, d, "implausible", Point{48, share * 8, 25})
		expect(t, "share", list, level)
		if len(list) == 1 && list[0].Part != "drive" {
			t.Errorf("it is said of %q, not of the drive", list[0].Part)
		}
	}
	d = quiet()
	d.Controller.FixedLoss = N(0)
	m, b := solved(t, d, easy)
	for loss, want := range map[float64]int{b.Pout: 0, math.Nextafter(b.Pout, 1e9): 1} {
		at := *b
		at.Loss = loss
		if list := implausible(m, &at, m.situationOf(b)); len(list) != want {
			t.Errorf("%g W lost of %g W delivered: %d findings, want %d", loss, b.Pout, len(list), want)
		}
	}
	at := *b
	at.Iout, at.Pout = 0, 0
	if list := implausible(m, &at, m.situationOf(b)); len(list) != 0 {
		t.Errorf("without a load nothing is delivered: %+v", list)
	}
}

// TestSizingEnds takes the wanted ripple to the largest number there may be, and the
// usual one to the middle of the usual bounds.
func TestSizingEnds(t *testing.T) {
	d := specification("buck", 10, 12, 14, 5, 2, 300e3)
	for ripple, want := range map[float64]int{1e15: 0, math.Nextafter(1e15, 2e15): 1} {
		if _, wrong := Size(d, ripple); len(wrong) != want {
			t.Errorf("a ripple of %g: %v", ripple, wrong)
		}
	}
	if math.Abs(DefaultRipple-(rippleLow+rippleHigh)/2) > 1e-12 {
		t.Errorf("the usual ripple is %g, between %g and %g", DefaultRipple, rippleLow, rippleHigh)
	}
}
