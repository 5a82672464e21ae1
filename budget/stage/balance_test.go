package stage_test

import (
	"math"
	"testing"

	"lossbook/budget/magnetic"
	"lossbook/budget/stage"
	"pgregory.net/rapid"
)

func coil(l float64) stage.Linkage { return magnetic.NewLinkage(l, 0, 0, nil) }

// soft is a coil that has lost 40 % at 5 A.
func soft(l float64) stage.Linkage { return magnetic.NewLinkage(l, 5, 0.4, nil) }

// TestFlow asks for what a flow holds beside its current.
func TestFlow(t *testing.T) {
	d := stage.Drive{On: 7, Off: 5, Period: period}
	for name, solve := range map[string]func(stage.Drive, stage.Branches, stage.Linkage, float64) (stage.Flow, stage.Fault){"continuous": stage.Continuous, "discontinuous": stage.Discontinuous} {
		flow, fault := solve(d, stage.Branches{On: 0.1, Off: 0.2, Threshold: 0.4}, coil(4.2e-6), 0.8)
		if fault != stage.NoFault || flow.OnTime == 0 {
			t.Errorf("%s: fault %d, %+v", name, fault, flow)
		}
		hold(t, []row{{name + " linkage", flow.Linkage, 4.2e-6 * flow.Swing(), 1e-14, "L·Δi"}, {name + " on-time", flow.OnTime, flow.D1 * period, exact, "D·T"}})
	}
}

// TestBoundary puts each stage on the boundary of its modes: K is 1 − D, D·(1 − D)²,
// (1 − D)².
func TestBoundary(t *testing.T) {
	var rows []row
	for name, c := range map[string]struct{ ratio, critical func(d float64) float64 }{
		"buck":       {func(d float64) float64 { return d }, func(d float64) float64 { return 1 - d }},
		"boost":      {func(d float64) float64 { return 1 / (1 - d) }, func(d float64) float64 { return d * (1 - d) * (1 - d) }},
		"buck_boost": {func(d float64) float64 { return d / (1 - d) }, func(d float64) float64 { return (1 - d) * (1 - d) }},
	} {
		s := topology(t, name)
		for _, d := range []float64{0.15, 1.0 / 3, 0.7} {
			const vg, load = 10.0, 20.0
			vout := vg * c.ratio(d)
			l, io := c.critical(d)*load*period/2, vout/load
			il := s.MeanCurrent(vout*io/vg, io)
			rest, _ := stage.Discontinuous(drive(s, vg, vout), stage.Branches{}, coil(l), il)
			flow, _ := stage.Continuous(drive(s, vg, vout), stage.Branches{}, coil(l), il)
			const source = "Erickson & Maksimović, chapter 5"
			rows = append(rows, row{name + " fills the period", rest.D1 + rest.D2, 1, 1e-13, source},
				row{name + " touches zero", 1 + flow.Min, 1, 1e-13, source},
				row{name + " same peak", rest.Max, flow.Max, 1e-13, "the modes meet"})
		}
	}
	hold(t, rows)
}

// slowPeak bisects for the peak whose mean is il, with the intervals as written.
func slowPeak(d stage.Drive, b stage.Branches, l stage.Linkage, il float64) float64 {
	low, high := 0.0, 1e6
	if b.On > 0 {
		high = math.Min(high, 2*d.On/b.On*(1-1e-15))
	}
	for range 300 {
		p := (low + high) / 2
		if t := l.At(p)/(d.On-p/2*b.On) + l.At(p)/(d.Off+b.Threshold+p/2*b.Off); p/2*t/d.Period < il {
			low = p
		} else {
			high = p
		}
	}
	return high
}

func TestDiscontinuousPeak(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		d := stage.Drive{On: rapid.Float64Range(0.1, 50).Draw(t, "on"), Off: rapid.Float64Range(0.1, 50).Draw(t, "off"), Period: period}
		b := stage.Branches{On: rapid.Float64Range(0, 0.5).Draw(t, "ron"), Off: rapid.Float64Range(0, 0.5).Draw(t, "roff"), Threshold: rapid.Float64Range(0, 1).Draw(t, "vd")}
		il := math.Pow(10, rapid.Float64Range(-9, 2).Draw(t, "log il"))
		l := coil(10e-6)
		if rapid.Bool().Draw(t, "saturates") {
			l = soft(10e-6)
		}
		flow, fault := stage.Discontinuous(d, b, l, il)
		if fault != stage.NoFault {
			t.Fatalf("fault %d", fault)
		}
		if want := slowPeak(d, b, l, il); math.Abs(flow.Max-want) > 1e-12*want {
			t.Fatalf("peak %.12g A, by bisection %.12g A", flow.Max, want)
		}
		if mean := flow.Whole().Mean(); math.Abs(mean-il) > 1e-12*il || flow.Min != 0 {
			t.Fatalf("mean %.12g A of %.12g A", mean, il)
		}
	})
}

func TestContinuousSaturates(t *testing.T) {
	d, b := stage.Drive{On: 12, Off: 8, Period: period}, stage.Branches{On: 0.1, Off: 0.2, Threshold: 0.5}
	l := soft(10e-6)
	flow, fault := stage.Continuous(d, b, l, 4)
	hold(t, []row{
		{"duty", flow.D1, (8 + 0.5 + 0.8) / (12 - 0.4 + 8 + 0.5 + 0.8), exact, "volt-seconds by hand"},
		{"other share", flow.D2, (12 - 0.4) / (12 - 0.4 + 8 + 0.5 + 0.8), exact, "volt-seconds by hand"},
		{"linkage", flow.Linkage, (12 - 0.4) * flow.D1 * period, exact, "V·t by hand"},
		{"swing holds it", l.At(flow.Max) - l.At(flow.Min), flow.Linkage, 1e-13, "λ(Imax) − λ(Imin)"},
		{"mean", (flow.Min + flow.Max) / 2, 4, exact, "the asked mean"},
	})
	if fault != stage.NoFault {
		t.Errorf("fault %d", fault)
	}
}

// TestFaults attacks the ends of both balances.
func TestFaults(t *testing.T) {
	d := stage.Drive{On: 10, Off: 5, Period: period}
	up := func(x float64) float64 { return math.Nextafter(x, math.Inf(1)) }
	for _, c := range []struct {
		name       string
		continuous bool
		d          stage.Drive
		b          stage.Branches
		l          stage.Linkage
		il         float64
		want       stage.Fault
	}{
		{"drop just below the on-voltage", true, d, stage.Branches{On: 1}, coil(1), math.Nextafter(10, 0), stage.NoFault},
		{"drop as large", true, d, stage.Branches{On: 1}, coil(1), 10, stage.NoOnVoltage},
		{"drop larger", true, d, stage.Branches{On: 1}, coil(1), up(10), stage.NoOnVoltage},
		{"no off-voltage", true, d, stage.Branches{Threshold: -5}, coil(1), 1, stage.NoOffVoltage},
		{"a little off-voltage", true, d, stage.Branches{Threshold: math.Nextafter(-5, 0)}, coil(1), 1, stage.NoFault},
		{"reversed current that lifts the rectifier", true, d, stage.Branches{Off: 1}, coil(1), -5, stage.NoOffVoltage},
		{"swing beyond the law", true, d, stage.Branches{}, soft(1e-8), 1, stage.SwingTooLarge},
		{"rest, no on-voltage", false, stage.Drive{On: 0, Off: 5, Period: period}, stage.Branches{}, coil(1), 1, stage.NoOnVoltage},
		{"rest, no off-voltage", false, d, stage.Branches{Threshold: -5}, coil(1), 1, stage.NoOffVoltage},
		{"rest, next to no on-voltage", false, stage.Drive{On: 1e-9, Off: 5, Period: period}, stage.Branches{}, coil(1), 1, stage.NoFault},
		{"rest, next to no off-voltage", false, d, stage.Branches{Threshold: -5 + 1e-9}, coil(1), 1, stage.NoFault},
		{"rest, reversed", false, d, stage.Branches{}, coil(1), -1e-300, stage.CurrentReverse},
		{"rest, no current", false, d, stage.Branches{}, coil(1), 0, stage.NoFault},
		{"rest, next to no current", false, d, stage.Branches{}, coil(1), 1e-300, stage.NoFault},
	} {
		solve := stage.Discontinuous
		if c.continuous {
			solve = stage.Continuous
		}
		flow, fault := solve(c.d, c.b, c.l, c.il)
		if fault != c.want {
			t.Errorf("%s: fault %d, want %d", c.name, fault, c.want)
		}
		if math.IsNaN(flow.Max + flow.Min + flow.D1 + flow.D2 + flow.Linkage) {
			t.Errorf("%s: %+v", c.name, flow)
		}
	}
	if flow, _ := stage.Discontinuous(d, stage.Branches{}, coil(1), 0); flow != (stage.Flow{}) {
		t.Errorf("no current flows as %+v", flow)
	}
}

// TestCannotRest asks that the quick proof never contradicts a solution, and that it
// proves something now and then.
func TestCannotRest(t *testing.T) {
	proved, could := 0, 0
	rapid.Check(t, func(t *rapid.T) {
		d := stage.Drive{On: rapid.Float64Range(1, 50).Draw(t, "on"), Off: rapid.Float64Range(1, 50).Draw(t, "off"), Period: period}
		worst := stage.Branches{Off: rapid.Float64Range(0, 0.5).Draw(t, "roff"), Threshold: rapid.Float64Range(0, 1).Draw(t, "vd")}
		least := rapid.Float64Range(0.01, 20).Draw(t, "il")
		l := coil(10e-6)
		if rapid.Bool().Draw(t, "saturates") {
			l = soft(10e-6)
		}
		cannot := stage.CannotRest(d, worst, l, least)
		b := stage.Branches{On: rapid.Float64Range(0, 0.5).Draw(t, "ron"), Off: worst.Off * rapid.Float64Range(0, 1).Draw(t, "share"), Threshold: worst.Threshold * rapid.Float64Range(0, 1).Draw(t, "share of vd")}
		flow, fault := stage.Discontinuous(d, b, l, least*rapid.Float64Range(1, 2).Draw(t, "more"))
		if fault != stage.NoFault || flow.D1+flow.D2 >= 1 {
			could++
			if cannot {
				proved++
			}
		} else if cannot {
			t.Fatalf("proved that it can't rest, but it does: D1 + D2 = %g", flow.D1+flow.D2)
		}
	})
	t.Logf("%d of %d proved", proved, could)
	if proved*3 < could {
		t.Errorf("of %d that can't rest only %d are proved", could, proved)
	}
	if d := (stage.Drive{On: 10, Off: 5, Period: period}); stage.CannotRest(d, stage.Branches{}, coil(1e-6), 0) || stage.CannotRest(d, stage.Branches{}, soft(1e-9), 10) ||
		stage.CannotRest(stage.Drive{On: 0, Off: 5, Period: period}, stage.Branches{}, coil(1e-6), 10) {
		t.Error("proved without a current, beyond the saturation law, or where nothing rises")
	}
}

// TestCannotRestIsSharp puts the mean current beside where the modes meet, without
// resistance: there the proof holds to the end.
func TestCannotRestIsSharp(t *testing.T) {
	const l = 10e-6
	d, worst := stage.Drive{On: 7, Off: 2, Period: period}, stage.Branches{Threshold: 3}
	meet := 7.0 * 5 / 12 * period / l / 2 // half the ripple
	for share, want := range map[float64]bool{0.999: false, 1.001: true} {
		if got := stage.CannotRest(d, worst, coil(l), share*meet); got != want {
			t.Errorf("at %g of the boundary: proved %v, want %v", share, got, want)
		}
	}
}
