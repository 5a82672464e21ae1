package budget

import (
	"math"
	"strings"
	"testing"

	"lossbook/budget/stage"
)

// printed is a figure found by hand or in a book, and the share it may be off by.
type printed struct {
	what      string
	got, want float64
	tolerance float64
}

func compare(t *testing.T, document string, figures []printed) {
	t.Helper()
	for _, f := range figures {
		if !(math.Abs(f.got-f.want) <= f.tolerance*f.want) {
			t.Errorf("%s, %s: got %.6g, want %.6g", document, f.what, f.got, f.want)
		}
	}
}

// specification is a design of which only what Size needs is known.
func specification(topology string, low, nominal, high, vout, load, f float64) *Design {
	return &Design{Topology: topology, Rectifier: "diode", Frequency: N(f),
		Input: Input{N(low), N(nominal), N(high)}, Output: Output{N(vout), N(load)}}
}

func size(t *testing.T, d *Design, ripple float64) Sizing {
	t.Helper()
	s, wrong := Size(d, ripple)
	if len(wrong) > 0 {
		t.Fatal(wrong)
	}
	return s
}

func needs(t *testing.T, s Sizing, part string) Requirement {
	t.Helper()
	for _, r := range s.Parts {
		if r.Part == part {
			return r
		}
	}
	t.Fatalf("no part %s in %+v", part, s.Parts)
	return Requirement{}
}

// TestSizingContinuous compares the three stages with the formulas of Erickson &
// Maksimović, chapters 2 and 3, at a single input voltage.
func TestSizingContinuous(t *testing.T) {
	const vin, vout, load, f, ripple = 20.0, 30.0, 3.0, 200e3, 0.35
	for name, c := range map[string]struct{ vout, duty, mean, on, blocking float64 }{
		"boost":      {vout, 1 - vin/vout, load * vout / vin, vin, vout},
		"buck":       {8, 8 / vin, load, vin - 8, vin},
		"buck_boost": {vout, vout / (vin + vout), load * (1 + vout/vin), vin, vin + vout},
	} {
		s := size(t, specification(name, vin, vin, vin, c.vout, load, f), ripple)
		swing := ripple * c.mean
		rms := func(share float64) float64 { return math.Sqrt(share * (c.mean*c.mean + swing*swing/12)) }
		chopped := func(share float64) float64 {
			return math.Sqrt(share*(1-share)*c.mean*c.mean + share*swing*swing/12)
		}
		inductor, sw, re := needs(t, s, "inductor"), needs(t, s, "switch"), needs(t, s, "rectifier")
		in, out := needs(t, s, "input_capacitor"), needs(t, s, "output_capacitor")
		figures := []printed{
			{"inductance", s.Inductance, c.on * c.duty / f / swing, 1e-13}, {"used", s.Used, s.Inductance, 1e-15}, {"ripple", s.Ripple, ripple, 0},
			{"duty", sw.DutyMin, c.duty, 1e-13}, {"duty", sw.DutyMax, c.duty, 1e-13},
			{"inductor peak", inductor.Peak, c.mean + swing/2, 1e-13}, {"inductor mean", inductor.Mean, c.mean, 1e-13}, {"inductor rms", inductor.RMS, rms(1), 1e-13},
			{"switch blocking", sw.Blocking, c.blocking, 0}, {"switch peak", sw.Peak, c.mean + swing/2, 1e-13}, {"switch mean", sw.Mean, c.duty * c.mean, 1e-13}, {"switch rms", sw.RMS, rms(c.duty), 1e-13},
			{"rectifier blocking", re.Blocking, c.blocking, 0}, {"rectifier mean", re.Mean, (1 - c.duty) * c.mean, 1e-13}, {"rectifier rms", re.RMS, rms(1 - c.duty), 1e-13},
			{"input voltage", in.Blocking, vin, 0}, {"output voltage", out.Blocking, c.vout, 0},
		}
		topology, _ := stage.ByName(name)
		for capacitor, sees := range map[*Requirement]stage.Branch{&in: topology.InputSees, &out: topology.OutputSees} {
			square, peak := swing*swing/12, swing/2
			switch share := c.duty; sees {
			case stage.Rectifier:
				share = 1 - c.duty
				fallthrough
			case stage.Switch:
				square = chopped(share) * chopped(share)
				peak = math.Max(c.mean+swing/2-share*c.mean, share*c.mean)
			}
			figures = append(figures, printed{capacitor.Part + " rms", capacitor.RMS, math.Sqrt(square), 1e-7}, printed{capacitor.Part + " peak", capacitor.Peak, peak, 1e-13})
		}
		compare(t, name, figures)
		if inductor.Blocking != 0 {
			t.Errorf("%s: an inductor blocks nothing, but %g V", name, inductor.Blocking)
		}
	}
}

// TestSizingOfEntered asks that an entered inductance is the one the currents come from.
func TestSizingOfEntered(t *testing.T) {
	d := specification("boost", 8, 14, 14, 24.5, 2, 600e3)
	d.Inductor = &Inductor{Inductance: N(10e-6)}
	s := size(t, d, 0.3)
	duty, mean := 1-8/24.5, 49/8.0
	compare(t, "10 µH", []printed{{"peak", needs(t, s, "inductor").Peak, mean + 8*duty/600e3/10e-6/2, 1e-13}})
	if s.Used != 10e-6 || s.Inductance == s.Used {
		t.Errorf("the entered inductance isn't the one used: %+v", s)
	}
}

// TestSizingDiscontinuous compares with chapter 5: a buck of K = 2L/(RT) = 0.1 at D 0.4.
func TestSizingDiscontinuous(t *testing.T) {
	const vg, r, f, duty = 10.0, 20.0, 250e3, 0.4
	vout := vg * 2 / (1 + math.Sqrt(1+4*0.1/(duty*duty)))
	d := specification("buck", vg, vg, vg, vout, vout/r, f)
	d.Inductor = &Inductor{Inductance: N(0.1 * r / f / 2)}
	s := size(t, d, 0.3)
	peak := (vg - vout) * duty / f / d.Inductor.Inductance.V
	fall := duty * (vg - vout) / vout
	rms := peak * math.Sqrt((duty+fall)/3)
	compare(t, "chapter 5", []printed{
		{"duty", needs(t, s, "switch").DutyMax, duty, 1e-5}, {"peak", needs(t, s, "inductor").Peak, peak, 1e-5},
		{"mean", needs(t, s, "inductor").Mean, vout / r, 1e-9}, {"rms", needs(t, s, "inductor").RMS, rms, 1e-5},
		{"output capacitor rms", needs(t, s, "output_capacitor").RMS, math.Sqrt(rms*rms - vout*vout/r/r), 1e-5},
		{"output capacitor peak", needs(t, s, "output_capacitor").Peak, math.Max(peak-vout/r, vout/r), 1e-5},
	})
	forced := *d
	forced.Rectifier, forced.LightLoad = "synchronous", "forced"
	if got := needs(t, size(t, &forced, 0.3), "switch").DutyMax; math.Abs(got-vout/vg) > 1e-12 {
		t.Errorf("forced: duty %g, want %g", got, vout/vg)
	}
	forced.LightLoad = "diode_emulation"
	if got := needs(t, size(t, &forced, 0.3), "switch").DutyMax; math.Abs(got-duty) > 1e-5 {
		t.Errorf("diode emulation: duty %g, want %g", got, duty)
	}
}

// TestSizingOverRange asks for the worst over the whole range: a boost's ripple is
// largest where the duty is one half, inside it.
func TestSizingOverRange(t *testing.T) {
	d := specification("boost", 5, 12, 23, 24, 1, 200e3)
	d.Rectifier, d.Inductor = "synchronous", &Inductor{Inductance: N(20e-6)}
	s := size(t, d, 0.3)
	peak, capacitor := 0.0, 0.0
	for vin := 5.0; vin <= 23; vin += 0.001 {
		swing := vin * (1 - vin/24) / 200e3 / 20e-6
		peak, capacitor = math.Max(peak, 24/vin+swing/2), math.Max(capacitor, swing/math.Sqrt(12))
	}
	compare(t, "range", []printed{
		{"peak", needs(t, s, "inductor").Peak, peak, 1e-3}, {"input capacitor", needs(t, s, "input_capacitor").RMS, capacitor, 1e-3},
		{"least duty", needs(t, s, "switch").DutyMin, 1 - 23.0/24, 1e-12}, {"largest duty", needs(t, s, "switch").DutyMax, 1 - 5.0/24, 1e-12},
		{"input voltage", needs(t, s, "input_capacitor").Blocking, 23, 0},
	})
}

func TestSizingRefused(t *testing.T) {
	for name, c := range map[string]struct {
		change func(*Design)
		ripple float64
		want   string
	}{
		"nothing entered":             {func(d *Design) { *d = Design{} }, 0.3, "topology? rectifier? frequency? input.min? input.nominal? input.max? output.voltage? output.current?"},
		"one missing":                 {unset("output.current"), 0.3, "output.current?"},
		"parts not needed":            {func(d *Design) { d.Switch = &MOSFET{RdsOn: N(-1)} }, 0.3, ""},
		"input out of order":          {set("input.max", 1), 0.3, "input.max"},
		"a boost that can't":          {set("input.max", 24), 0.3, "input.max"},
		"a boost that just can":       {set("input.max", math.Nextafter(24, 0)), 0.3, ""},
		"a buck that can't":           {all(write("topology", "buck"), set("output.voltage", 9)), 0.3, "input.min"},
		"a buck that just can":        {all(write("topology", "buck"), set("output.voltage", math.Nextafter(9, 0))), 0.3, ""},
		"no ripple":                   {all(), 0, "specification.ripple_ratio"},
		"a ripple that is no number":  {all(), math.NaN(), "specification.ripple_ratio"},
		"a ripple beyond any":         {all(), math.Inf(1), "specification.ripple_ratio"},
		"any ripple above 0 will do":  {all(), 1e-6, ""},
		"an entry that isn't judged":  {write("name", ""), 0.3, ""},
		"a frequency that isn't one":  {set("frequency", math.NaN()), 0.3, "frequency"},
		"a wrong entry of light load": {write("light_load", "x"), 0.3, "light_load"},
	} {
		d := specification("boost", 9, 12, 15, 24, 2, 300e3)
		c.change(d)
		_, errors := Size(d, c.ripple)
		if got := strings.Join(paths(errors), " "); got != c.want {
			t.Errorf("%s: wrong at %q, want %q", name, got, c.want)
		}
		for _, e := range errors {
			if e.Message == "" {
				t.Errorf("%s: no words at %s", name, e.Path)
			}
		}
	}
}
