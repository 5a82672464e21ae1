package magnetic_test

import (
	"fmt"
	"math"
	"testing"

	"lossbook/budget/magnetic"
	"pgregory.net/rapid"
)

// share returns the loss of a two-segment swing over that of a sine of the same peak
// and frequency.
func share(alpha, beta, d1, d2 float64) float64 {
	core := magnetic.MaterialCore(1, 1, 1, 1, magnetic.Steinmetz{Alpha: alpha, Beta: beta, CT0: 1}, 1)
	return core.Loss(2, d1, d2, 1) // amplitude 1: the sine's loss is 1
}

// TestTriangleOverSine asks that rise and fall can change about, and that the share of
// a triangle in the loss of a sine is free of β.
func TestTriangleOverSine(t *testing.T) {
	const alpha, beta = 1.46, 2.75
	var rows []row
	for _, d := range []float64{0.5, 0.3, 0.2, 0.1} {
		want := share(alpha, beta, d, 1-d)
		rows = append(rows, row{fmt.Sprintf("D %g, falling first", d), share(alpha, beta, 1-d, d), want, 1e-14, "rising first"},
			row{fmt.Sprintf("D %g, another β", d), share(alpha, 2.1, d, 1-d), want, 1e-14, "the ratio holds whatever β"})
	}
	hold(t, rows)
}

// TestSineReturnsSteinmetz integrates iGSE over a sine of amplitude B: the integral
// of |dB/dt|^α must give back k·f^α·B^β.
func TestSineReturnsSteinmetz(t *testing.T) {
	var rows []row
	for _, alpha := range []float64{1, 1.1, 1.46, 2, 3.3} {
		const beta, f, amplitude = 2.6, 130e3, 0.12
		ki := magnetic.SineShare(alpha) * math.Pow(2, -beta)
		omega := 2 * math.Pi * f
		quarter := integral(func(u float64) float64 { // u² from the zero of dB/dt, where the power has its kink
			slope := amplitude * omega * math.Sin(u*u)
			return math.Pow(slope, alpha) * 2 * u / omega
		}, 0, math.Sqrt(math.Pi/2))
		loss := ki * math.Pow(2*amplitude, beta-alpha) * f * 4 * quarter
		rows = append(rows, row{fmt.Sprintf("α %g", alpha), loss, math.Pow(f, alpha) * math.Pow(amplitude, beta), 1e-7, "Steinmetz, k 1"})
	}
	hold(t, rows)
}

// TestCoreBySegments adds up iGSE as written, segment by segment in seconds and tesla.
func TestCoreBySegments(t *testing.T) {
	const volume, area, turns, k, alpha, beta, f = 1.05e-6, 5e-5, 8.0, 3.0, 1.42, 2.45, 300e3
	const d1, d2, swing = 0.22, 0.55, 40e-6
	s := magnetic.Steinmetz{Alpha: alpha, Beta: beta, CT0: 1.85, CT1: 0.0185, CT2: 0.0001}
	core := magnetic.MaterialCore(volume, area, turns, k, s, f)
	ki := k * magnetic.SineShare(alpha) * math.Pow(2, -beta)
	db := swing / (turns * area)
	sum := 0.0
	for _, d := range []float64{d1, d2} {
		sum += math.Pow(db/(d/f), alpha) * d / f
	}
	want := volume * ki * math.Pow(db, beta-alpha) * f * sum
	// a catalogue's inductor of the same core: its loss at a sine of 100 kHz, 2 A peak to peak
	const l, fRef, ripple = 10e-6, 100e3, 2.0
	sine := volume * k * math.Pow(fRef, alpha) * math.Pow(l*ripple/2/(turns*area), beta)
	catalogue := magnetic.CatalogueCore(sine, fRef, ripple, l, s, f)
	hold(t, []row{
		{"material", core.Loss(swing, d1, d2, 1), want, 1e-13, "iGSE as written"},
		{"catalogue", catalogue.Loss(swing, d1, d2, 1), want, 1e-13, "the same core by its sine"},
		{"factor multiplies", core.Loss(swing, d1, d2, 0.7), 0.7 * want, 1e-13, "by hand"},
		{"factor at 60 °C", core.Factor(60), 1.85 - 1.11 + 0.36, 1e-13, "by hand"},
		{"factor at 100 °C", core.Factor(100), 1, 1e-13, "where ct0 … ct2 give 1"},
	})
	if (magnetic.Core{}).Known() || !core.Known() || (magnetic.Core{}).Loss(1, 0.5, 0.5, 1) != 0 {
		t.Error("the zero core is the one without loss")
	}
	if none := magnetic.MaterialCore(volume, area, turns, 0, s, f); none.Known() || none.Loss(swing, d1, d2, 1) != 0 {
		t.Error("a core of k 0 has no loss")
	}
	if got := core.Loss(0, 0, 0, 1); got != 0 {
		t.Errorf("no swing loses %g W", got)
	}
}

func TestCoreScaling(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		alpha := rapid.Float64Range(1, 2.5).Draw(t, "alpha")
		beta := rapid.Float64Range(1.5, 3.5).Draw(t, "beta")
		k := rapid.Float64Range(0.1, 10).Draw(t, "k")
		d := rapid.Float64Range(0.02, 0.98).Draw(t, "d")
		s := magnetic.Steinmetz{Alpha: alpha, Beta: beta, CT0: 1}
		at := func(f, swing float64) float64 {
			return magnetic.MaterialCore(1e-6, 5e-5, 10, 3, s, f).Loss(swing, d, 1-d, 1)
		}
		base := at(2e5, 1e-5)
		if off := at(2e5, k*1e-5)/base/math.Pow(k, beta) - 1; math.Abs(off) > 1e-12 {
			t.Fatalf("k·ΔB: off by %g", off)
		}
		if off := at(k*2e5, 1e-5)/base/math.Pow(k, alpha) - 1; math.Abs(off) > 1e-12 {
			t.Fatalf("k·f: off by %g", off)
		}
	})
}
