package stage_test

import (
	"math"
	"testing"

	"lossbook/budget/stage"
)

func topology(t testing.TB, name string) stage.Topology {
	t.Helper()
	s, found := stage.ByName(name)
	if !found {
		t.Fatalf("no topology %s", name)
	}
	return s
}

// TestTopologies reads the table of a text book (Erickson & Maksimović, chapter 2)
// at 12 V in, 30 V out (buck: 5 V), 2 A drawn from the source and 0.7 A from the stage.
func TestTopologies(t *testing.T) {
	for _, want := range []struct {
		name                      string
		vout                      float64
		on, off, blocking, rest   float64
		mean                      float64
		input, output             stage.Branch
		reachBelow, reachAt, over bool // vin below, at and above vout
	}{
		{"boost", 30, 12, 18, 30, 12, 2, stage.Inductor, stage.Rectifier, true, false, false},
		{"buck", 5, 7, 5, 12, 7, 0.7, stage.Switch, stage.Inductor, false, false, true},
		{"buck_boost", 30, 12, 30, 42, 12, 2.7, stage.Switch, stage.Rectifier, true, true, true},
	} {
		s := topology(t, want.name)
		hold(t, []row{
			{want.name + " on", s.OnVoltage(12, want.vout), want.on, 0, "the book"},
			{want.name + " off", s.OffVoltage(12, want.vout), want.off, 0, "the book"},
			{want.name + " blocking", s.Blocking(12, want.vout), want.blocking, 0, "the book"},
			{want.name + " rest", s.Rest(12, want.vout), want.rest, 0, "no voltage on the inductor"},
			{want.name + " mean", s.MeanCurrent(2, 0.7), want.mean, exact, "charge balance"},
		})
		if s.InputSees != want.input || s.OutputSees != want.output || s.Title == "" {
			t.Errorf("%s: capacitors see %v and %v", want.name, s.InputSees, s.OutputSees)
		}
		reach := func(vin float64) bool { return s.Reach(vin, 10) == "" }
		if reach(math.Nextafter(10, 0)) != want.reachBelow || reach(10) != want.reachAt || reach(math.Nextafter(10, 11)) != want.over {
			t.Errorf("%s: the reach around its output voltage is wrong", want.name)
		}
	}
	if n := len(stage.Topologies()); n != 3 {
		t.Errorf("%d topologies; add the new one to this table", n)
	}
	if _, found := stage.ByName("cuk"); found {
		t.Error("an unknown name was found")
	}
}

// TestNetwork asks of each topology what follows from its circuit: without losses the
// volt-seconds balance at the ratio the book gives, and power in is power out.
func TestNetwork(t *testing.T) {
	for name, ratio := range map[string]func(d float64) float64{
		"boost":      func(d float64) float64 { return 1 / (1 - d) },
		"buck":       func(d float64) float64 { return d },
		"buck_boost": func(d float64) float64 { return d / (1 - d) },
	} {
		s := topology(t, name)
		for _, d := range []float64{0.1, 0.37, 0.8} {
			const vin, load = 24.0, 3.0
			vout := vin * ratio(d)
			flow, fault := stage.Continuous(drive(s, vin, vout), stage.Branches{}, coil(100e-6), s.MeanCurrent(vout*load/vin, load))
			if fault != stage.NoFault {
				t.Fatalf("%s: fault %d", name, fault)
			}
			drawn := map[stage.Branch]float64{stage.Inductor: flow.Rise().Mean() + flow.Fall().Mean(), stage.Switch: flow.Rise().Mean(), stage.Rectifier: flow.Fall().Mean()}
			hold(t, []row{
				{name + " duty", flow.D1, d, 1e-14, "the book's ratio"},
				{name + " input", drawn[s.InputSees] * vin, vout * load, 1e-13, "power balance"},
				{name + " output", drawn[s.OutputSees], load, 1e-13, "charge balance"},
			})
		}
	}
}

const period = 4e-6 // s

func drive(s stage.Topology, vin, vout float64) stage.Drive {
	return stage.Drive{On: s.OnVoltage(vin, vout), Off: s.OffVoltage(vin, vout), Period: period}
}
