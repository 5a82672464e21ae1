package budget_test

import (
	"encoding/json"
	"flag"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"lossbook/budget"
)

// caseFile is a design with what a separate implementation of the same physics,
// in another language and with other numerical methods, gives for it.
type caseFile struct {
	Design   budget.Design `json:"design"`
	Points   []casePoint   `json:"points"`
	Expected []casePoint   `json:"expected"`
}

type casePoint struct {
	Vin             float64  `json:"vin"`
	Iout            float64  `json:"iout"`
	Ambient         *float64 `json:"ambient"`
	State           string   `json:"state"`
	Mode            string   `json:"mode"`
	Vout            float64  `json:"vout"`
	Duty            float64  `json:"duty"`
	OnTime          float64  `json:"on_time"`
	Pin             float64  `json:"pin"`
	Pout            float64  `json:"pout"`
	Loss            float64  `json:"loss"`
	Efficiency      float64  `json:"efficiency"`
	Iin             float64  `json:"iin"`
	InductorCurrent struct {
		Mean, Min, Max, RMS float64
	} `json:"inductor_current"`
	SwitchRMS     float64 `json:"switch_rms"`
	RectifierRMS  float64 `json:"rectifier_rms"`
	RectifierMean float64 `json:"rectifier_mean"`
	InputCapRMS   float64 `json:"input_capacitor_rms"`
	OutputCapRMS  float64 `json:"output_capacitor_rms"`
	Temperatures  struct {
		Switch, Rectifier, Inductor float64
	} `json:"temperatures"`
	Items []struct {
		Part, Kind string
		Power      float64
	} `json:"items"`
}

func (p casePoint) point(d *budget.Design) budget.Point {
	ambient := d.AmbientTemperature()
	if p.Ambient != nil {
		ambient = *p.Ambient
	}
	return budget.Point{Vin: p.Vin, Iout: p.Iout, Ambient: ambient}
}

// cases reads every file of testdata/cases; a folder without them is a failure.
func cases(t testing.TB) map[string]caseFile {
	t.Helper()
	names, err := filepath.Glob("../testdata/cases/*.json")
	if err != nil || len(names) < 27 {
		t.Fatalf("%d case files found (%v), want 27 at least", len(names), err)
	}
	files := map[string]caseFile{}
	for _, name := range names {
		raw, err := os.ReadFile(name)
		if err != nil {
			t.Fatal(err)
		}
		var c caseFile
		if err := json.Unmarshal(raw, &c); err != nil {
			t.Fatalf("%s: %v", name, err)
		}
		files[strings.TrimSuffix(filepath.Base(name), ".json")] = c
	}
	return files
}

// agreement compares figures with those of a case and keeps the worst.
type agreement struct {
	t       *testing.T
	figures int
	worst   float64
}

// compare asks for 1e-6 of the figure, or 1e-9 in its unit where that is more.
func (a *agreement) compare(where, what string, got, want float64) {
	a.t.Helper()
	a.figures++
	off := math.Abs(got-want) / math.Max(math.Abs(want), 1e-3)
	a.worst = math.Max(a.worst, off)
	if !(off <= 1e-6) {
		a.t.Errorf("%s %s: got %.12g, want %.12g (off by %.2g)", where, what, got, want, off)
	}
}

var update = flag.Bool("update", false, "write how far the figures agree with the case files")

func TestCases(t *testing.T) {
	all := cases(t)
	total, worst, run := 0, 0.0, 0
	for name, c := range all {
		t.Run(name, func(t *testing.T) {
			run++
			m, err := budget.Prepare(&c.Design)
			if err != nil {
				t.Fatal(err)
			}
			a := agreement{t: t}
			var b budget.Budget
			for i, want := range c.Expected {
				m.At(c.Points[i].point(&c.Design), &b)
				a.point(name, &b, want)
			}
			if a.figures == 0 {
				t.Fatal("nothing was compared")
			}
			total += a.figures
			worst = math.Max(worst, a.worst)
			t.Logf("%d figures, worst off by %.1e", a.figures, a.worst)
		})
	}
	t.Logf("%d figures in all, worst off by %.1e", total, worst)
	if run == len(all) {
		keepAgreement(t, agreed{run, total, worst})
	}
}

// agreed is how far the figures agree with the case files, as it is shown to users.
type agreed struct {
	Files   int     `json:"files"`
	Figures int     `json:"figures"`
	Worst   float64 `json:"worst"` // share of a figure, rounded up to a power of ten
}

// keepAgreement holds what is shown against what was found: as many figures, and a
// bound that holds and is not ten times what it has to be. With -update it is written.
func keepAgreement(t *testing.T, found agreed) {
	t.Helper()
	const name = "../testdata/published/agreement.json"
	if *update {
		found.Worst = math.Pow10(int(math.Ceil(math.Log10(found.Worst))))
		text, err := json.Marshal(found)
		if err != nil {
			t.Fatal(err)
		}
		if err := os.WriteFile(name, append(text, '\n'), 0o644); err != nil {
			t.Fatal(err)
		}
		return
	}
	var shown agreed
	text, err := os.ReadFile(name)
	if err != nil {
		t.Fatal(err)
	}
	if err := json.Unmarshal(text, &shown); err != nil {
		t.Fatal(err)
	}
	if shown.Files != found.Files || shown.Figures != found.Figures || !(found.Worst <= shown.Worst && found.Worst > shown.Worst/10) {
		t.Errorf("shown %+v, found %+v: run go test ./budget -run TestCases -update", shown, found)
	}
}

func (a *agreement) point(name string, b *budget.Budget, want casePoint) {
	a.t.Helper()
	where := func() string {
		raw, _ := json.Marshal(b.Point)
		return name + " " + string(raw)
	}()
	a.figures++
	if b.State.String() != want.State {
		a.t.Errorf("%s: state %s (%s), want %s", where, b.State, b.Reason(), want.State)
		return
	}
	if b.State != budget.Settled {
		if b.Reason() == "" {
			a.t.Errorf("%s: no reason given", where)
		}
		return
	}
	if b.Mode.String() != want.Mode {
		a.t.Errorf("%s: mode %s, want %s", where, b.Mode, want.Mode)
		return
	}
	for _, f := range []struct {
		what      string
		got, want float64
	}{
		{"vout", b.Vout, want.Vout}, {"duty", b.Duty, want.Duty}, {"on_time", b.OnTime, want.OnTime},
		{"pin", b.Pin, want.Pin}, {"pout", b.Pout, want.Pout}, {"loss", b.Loss, want.Loss},
		{"efficiency", b.Efficiency, want.Efficiency}, {"iin", b.Iin, want.Iin},
		{"inductor mean", b.Inductor.Mean, want.InductorCurrent.Mean}, {"inductor min", b.Inductor.Min, want.InductorCurrent.Min},
		{"inductor max", b.Inductor.Max, want.InductorCurrent.Max}, {"inductor rms", b.Inductor.RMS, want.InductorCurrent.RMS},
		{"switch_rms", b.SwitchRMS, want.SwitchRMS}, {"rectifier_rms", b.RectifierRMS, want.RectifierRMS},
		{"rectifier_mean", b.RectifierMean, want.RectifierMean},
		{"input_capacitor_rms", b.InputCapRMS, want.InputCapRMS}, {"output_capacitor_rms", b.OutputCapRMS, want.OutputCapRMS},
		{"switch temperature", b.Temperatures.Switch, want.Temperatures.Switch},
		{"rectifier temperature", b.Temperatures.Rectifier, want.Temperatures.Rectifier},
		{"inductor temperature", b.Temperatures.Inductor, want.Temperatures.Inductor},
	} {
		a.compare(where, f.what, f.got, f.want)
	}
	if len(b.Items) != len(want.Items) {
		a.t.Fatalf("%s: %d items, want %d", where, len(b.Items), len(want.Items))
	}
	for i, it := range want.Items {
		if b.Items[i].Part != it.Part || b.Items[i].Kind != it.Kind {
			a.t.Fatalf("%s: item %d is %s.%s, want %s.%s", where, i, b.Items[i].Part, b.Items[i].Kind, it.Part, it.Kind)
		}
		a.compare(where, it.Part+"."+it.Kind, b.Items[i].Power, it.Power)
	}
}
