package budget

import (
	"fmt"
	"math"
	"testing"
)

// figures integrates a waveform over its straight segments by Simpson's rule, which is
// exact for them and for their squares: a way of its own beside the package's.
func (f Waveform) figures(period float64) (mean, square float64) {
	for i := 1; i < len(f.Points); i++ {
		a, b := f.Points[i-1], f.Points[i]
		h, mid := (b.Time-a.Time)/period/6, (a.Value+b.Value)/2
		mean += h * (a.Value + 4*mid + b.Value)
		square += h * (a.Value*a.Value + 4*mid*mid + b.Value*b.Value)
	}
	return mean, square
}

// at returns the value at a time within the period, after a jump that happens there.
func (f Waveform) at(time float64) float64 {
	for i := 1; i < len(f.Points); i++ {
		if a, b := f.Points[i-1], f.Points[i]; a.Time <= time && time < b.Time {
			return a.Value + (b.Value-a.Value)*(time-a.Time)/(b.Time-a.Time)
		}
	}
	return math.NaN()
}

// conduction names a kind of flow as the tests count it.
func conduction(b *Budget) string {
	switch {
	case b.Mode == DCM:
		return "dcm"
	case b.Inductor.Min < 0:
		return "reversing"
	}
	return "ccm"
}

// TestWaveformsAreTheFigures integrates what is drawn and compares it with the budget,
// over random designs, down to no load.
func TestWaveformsAreTheFigures(t *testing.T) {
	seen := map[string]int{}
	for seed := range uint64(900) {
		d := newChance(seed).design(1)
		m, err := Prepare(d)
		if err != nil {
			t.Fatal(err)
		}
		for _, load := range []float64{0, 1e-6, 0.02, 0.2, 1} {
			var b Budget
			if m.At(Point{d.Input.Nominal.V, load * d.Output.Current.V, d.AmbientTemperature()}, &b); b.State != Settled {
				continue
			}
			what := fmt.Sprintf("seed %d, load %g, %s %s", seed, load, d.Topology, conduction(&b))
			seen[d.Topology+" "+conduction(&b)]++
			w, is := Waveforms(d, &b)
			if !is {
				t.Fatalf("%s: figures and waveforms differ", what)
			}
			w.check(t, what, d, &b)
		}
	}
	for _, topology := range []string{"boost", "buck", "buck_boost"} {
		for _, mode := range []string{"ccm", "dcm", "reversing"} {
			if n := seen[topology+" "+mode]; n < 60 {
				t.Errorf("only %d points of a %s in %s", n, topology, mode)
			}
		}
	}
	t.Log(seen)
}

func (w Waves) check(t *testing.T, what string, d *Design, b *Budget) {
	t.Helper()
	size := math.Max(math.Abs(b.Inductor.Max), math.Abs(b.Inductor.Min))
	wanted := []struct {
		part      string
		mean, rms float64
	}{
		{"inductor", b.Inductor.Mean, b.Inductor.RMS}, {"switch", w.List[1].Mean, b.SwitchRMS}, {"rectifier", b.RectifierMean, b.RectifierRMS},
		{"input_capacitor", 0, b.InputCapRMS}, {"output_capacitor", 0, b.OutputCapRMS},
	}
	for i, want := range wanted {
		f := w.List[i]
		if f.Part != want.part || f.Quantity != "current" || f.Mean != want.mean || f.RMS != want.rms {
			t.Fatalf("%s: waveform %d is %+v, want %+v", what, i, f, want)
		}
		mean, square := f.figures(w.Period)
		if off := math.Abs(mean - want.mean); off > 1e-9*size {
			t.Fatalf("%s: mean of %s is %.15g, the budget's %.15g", what, f.Part, mean, want.mean)
		}
		if off := math.Abs(math.Sqrt(square) - want.rms); off > 1e-9*want.rms+1e-12*size {
			t.Fatalf("%s: rms of %s is %.15g, the budget's %.15g", what, f.Part, math.Sqrt(square), want.rms)
		}
	}
	if w.List[0].Peak != b.Inductor.Max {
		t.Fatalf("%s: peak %g, the budget's %g", what, w.List[0].Peak, b.Inductor.Max)
	}
	if sum := w.T1 + w.T2 + w.T3; math.Abs(sum-w.Period) > 1e-12*w.Period || math.Abs(w.T1-b.OnTime) > 1e-12*w.Period || (b.Mode == CCM && w.T3 != 0) {
		t.Fatalf("%s: intervals %g + %g + %g of %g, on-time %g", what, w.T1, w.T2, w.T3, w.Period, b.OnTime)
	}
	w.meet(t, what, d, b)
}

// meet asks for Kirchhoff's law at every moment: the inductor's current flows through
// switch or rectifier, and a capacitor takes what is left of its branch.
func (w Waves) meet(t *testing.T, what string, d *Design, b *Budget) {
	t.Helper()
	size := 1e-9 * math.Max(math.Abs(b.Inductor.Max), math.Abs(b.Inductor.Min))
	for _, share := range []float64{0.003, 0.21, 0.497, 0.703, 0.991} {
		at := share * w.Period
		inductor, sw, re := w.List[0].at(at), w.List[1].at(at), w.List[2].at(at)
		if math.Abs(inductor-sw-re) > size {
			t.Fatalf("%s: at %g T inductor %g, switch %g, rectifier %g", what, share, inductor, sw, re)
		}
		in, out := sw, re // the branch each capacitor lies at
		if d.Topology == "boost" {
			in = inductor
		}
		if d.Topology == "buck" {
			out = inductor
		}
		drawn, fed := b.Inductor.Mean, b.RectifierMean
		if d.Topology != "boost" {
			drawn = w.List[1].Mean
		}
		if d.Topology == "buck" {
			fed = b.Inductor.Mean
		}
		if math.Abs(w.List[3].at(at)-(drawn-in)) > size || math.Abs(w.List[4].at(at)-(out-fed)) > size {
			t.Fatalf("%s: at %g T the capacitors take %g and %g, want %g and %g", what, share, w.List[3].at(at), w.List[4].at(at), drawn-in, out-fed)
		}
	}
}

// TestSwitchVoltage holds what a switch without drop blocks, by topology: Vb while the
// rectifier conducts, Vrest while no inductor current flows.
func TestSwitchVoltage(t *testing.T) {
	count := 0
	for _, row := range []struct {
		topology              string
		vin, vout, load       float64
		blocking, resting, md float64 // V; mean over the period when nothing is lost
	}{
		{"boost", 12, 24, 0.01, 24, 12, 12}, {"buck", 48, 12, 0.01, 48, 36, 36}, {"buck_boost", 12, 24, 0.01, 36, 12, 12},
	} {
		d := full()
		diode(d)
		d.Topology, d.Input, d.Output = row.topology, Input{N(row.vin), N(row.vin), N(row.vin)}, Output{N(row.vout), N(2)}
		_, b := solved(t, d, Point{row.vin, row.load, 25})
		w, is := Waveforms(d, b)
		if !is || b.Mode != DCM || !(w.T3 > 0.1*w.Period) {
			t.Fatalf("%s: %t, %s, t3 %g", row.topology, is, b.Mode, w.T3)
		}
		v := w.List[5]
		if v.Part != "switch" || v.Quantity != "voltage" || v.Peak != row.blocking || v.at(w.T1/2) != 0 ||
			v.at(w.T1+w.T2/2) != row.blocking || v.at(w.Period-w.T3/2) != row.resting {
			t.Errorf("%s: %+v, want %g V and %g V", row.topology, v, row.blocking, row.resting)
		}
		// Without drops the inductor's voltage has no mean, so the switch's has what
		// feeds the inductor. Here the drops are a few per cent of it.
		mean, square := v.figures(w.Period)
		if math.Abs(mean-row.md) > 0.1*row.md || v.Mean != mean && math.Abs(v.Mean-mean) > 1e-12*mean || math.Abs(v.RMS*v.RMS-square) > 1e-12*square {
			t.Errorf("%s: mean %g and %g, rms² %g and %g", row.topology, mean, v.Mean, square, v.RMS*v.RMS)
		}
		count++
	}
	if count != 3 {
		t.Errorf("%d topologies", count)
	}
}

// TestWaveformsWithoutLoad looks at a buck that draws nothing.
func TestWaveformsWithoutLoad(t *testing.T) {
	d := full()
	diode(d)
	_, b := solved(t, d, Point{48, 0, 25})
	w, is := Waveforms(d, b)
	if !is || w.T1 != 0 || w.T2 != 0 || w.T3 != w.Period || len(w.List) != 6 {
		t.Fatalf("%t, %+v", is, w)
	}
	for _, f := range w.List[:5] {
		for _, p := range f.Points {
			if p.Value != 0 || math.Signbit(p.Value) {
				t.Errorf("%s carries %g A", f.Part, p.Value)
			}
		}
	}
	if v := w.List[5]; v.Mean != 36 || v.Peak != 36 {
		t.Errorf("the switch rests at %g V, want Vin − Vout", v.Mean)
	}
}

// TestWaveformsOfOtherFigures refuses to draw what the figures are not.
func TestWaveformsOfOtherFigures(t *testing.T) {
	d := full()
	_, good := solved(t, d, Point{48, 8, 25})
	changes := []func(b *Budget){
		func(b *Budget) { b.State = Runaway },
		func(b *Budget) { b.SwitchRMS *= 1 + 1e-5 },
		func(b *Budget) { b.RectifierMean *= 1 + 1e-5 },
		func(b *Budget) { b.InputCapRMS += 1e-4 },
		func(b *Budget) { b.OutputCapRMS += 1e-4 },
		func(b *Budget) { b.Inductor.Max += 1e-3 },
		func(b *Budget) { b.Duty += 1e-4 },
		func(b *Budget) { b.Inductor.Mean += 1e-4 },
	}
	if _, is := Waveforms(d, good); !is {
		t.Fatal("the budget's own figures are refused")
	}
	for i, change := range changes {
		b := *good
		change(&b)
		if _, is := Waveforms(d, &b); is {
			t.Errorf("change %d is drawn all the same", i)
		}
	}
	other := *d
	other.Topology = "no such"
	if _, is := Waveforms(&other, good); is {
		t.Error("an unknown topology is drawn")
	}
}
