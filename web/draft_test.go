package web

import (
	"encoding/json"
	"math"
	"math/rand/v2"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"github.com/google/go-cmp/cmp/cmpopts"

	"lossbook/assets"
	"lossbook/budget"
)

// everyDesign is the samples and the designs of the independent cases.
func everyDesign(t *testing.T) map[string]*budget.Design {
	t.Helper()
	designs := map[string]*budget.Design{}
	for _, s := range assets.Samples() {
		designs[s.Name] = mustRead(t, s.JSON)
	}
	files, err := filepath.Glob("../testdata/cases/*.json")
	if err != nil {
		t.Fatal(err)
	}
	for _, file := range files {
		var c struct{ Design json.RawMessage }
		body, err := os.ReadFile(file)
		if err != nil || json.Unmarshal(body, &c) != nil {
			t.Fatal(file, err)
		}
		designs[filepath.Base(file)] = mustRead(t, c.Design)
	}
	if len(designs) < 20 {
		t.Fatalf("only %d designs", len(designs))
	}
	return designs
}

func mustRead(t *testing.T, raw []byte) *budget.Design {
	t.Helper()
	d, wrong, err := decodeDesign(raw)
	if err != nil || len(wrong) > 0 {
		t.Fatal(wrong, err)
	}
	return d
}

// TestDraftAndDesignAreTheSame walks every design through JSON, a draft, the
// draft as it is kept, and back.
func TestDraftAndDesignAreTheSame(t *testing.T) {
	for name, d := range everyDesign(t) {
		kept, complete, err := keptAs(d)
		if err != nil {
			t.Fatal(err)
		}
		draft, err := readDraft(kept)
		if err != nil {
			t.Fatal(err)
		}
		back, wrong := draft.design()
		if diff := cmp.Diff(d, back, cmpopts.EquateEmpty()); diff != "" || len(wrong) > 0 {
			t.Errorf("%s: %v %s", name, wrong, diff)
		}
		if again := text(t, back); again != string(complete)+"\n" {
			t.Errorf("%s: written as %s", name, again)
		}
	}
}

// TestAnyNumberSurvivesADraft fills every number of the table with digits that
// nobody would type, over all sizes.
func TestAnyNumberSurvivesADraft(t *testing.T) {
	random := rand.New(rand.NewPCG(1, 2))
	numbers := 0
	for range 50 {
		d := new(budget.Design)
		for _, part := range budget.Parts() {
			for _, f := range part.Fields {
				path := f.Path
				if part.List {
					path = part.Path + "[1]." + f.Key
				}
				slot, _ := d.Slot(path, true)
				fill(slot, math.Ldexp(random.NormFloat64(), random.IntN(120)-90))
				numbers++
			}
		}
		d.Series[0].Name, d.Format = "first", budget.Format
		back, _ := draftOf(d).design()
		if diff := cmp.Diff(d, back); diff != "" {
			t.Fatal(diff)
		}
	}
	if numbers < 5000 {
		t.Errorf("only %d numbers", numbers)
	}
}

func TestEntriesAreReadByTheirUnit(t *testing.T) {
	draft := draftOf(sample(t, "frost"))
	draft["switch.rds_on"] = " 4m7 "
	draft["inductor.inductance"] = "22 µH"
	draft["frequency"] = "250k"
	draft["inductor.core.alpha"] = "1.36"
	draft["sources.switch.rds_on"] = "data sheet, p. 3"
	d, wrong := draft.design()
	if len(wrong) > 0 {
		t.Fatal(wrong)
	}
	if d.Switch.RdsOn.V != 4.7e-3 || d.Inductor.Inductance.V != 22e-6 || d.Frequency.V != 250e3 {
		t.Errorf("read as %v Ω, %v H, %v Hz", d.Switch.RdsOn.V, d.Inductor.Inductance.V, d.Frequency.V)
	}
	if got := d.Sources["switch.rds_on"]; got != "data sheet, p. 3" {
		t.Errorf("source %q", got)
	}
	if draft["switch.rds_on"] != " 4m7 " {
		t.Error("the entry is not kept as typed")
	}
}

// TestEmptyRowsAreDropped leaves rows empty between others: the design has none
// of them, and an error still points at its row as typed.
func TestEmptyRowsAreDropped(t *testing.T) {
	draft := Draft{
		"series_resistances[0].name": "  ", "series_resistances[0].resistance": "",
		"series_resistances[2].name": "shunt", "series_resistances[2].location": "input", "series_resistances[2].resistance": "5m",
		"series_resistances[7].name": "fuse", "series_resistances[7].location": "output", "series_resistances[7].resistance": "tiny",
		"switch.rds_on_curve[0][0]": "", "switch.rds_on_curve[1][0]": "25", "switch.rds_on_curve[1][1]": "1",
		"switch.rds_on_curve[4][0]": "150", "switch.rds_on_curve[4][1]": "1.8",
		"inductor.ac_curve[3][0]": "100k", "inductor.ac_curve[5][0]": "fast", "inductor.ac_curve[5][1]": "2",
	}
	d, wrong := draft.design()
	want := []budget.SeriesResistance{
		{Name: "shunt", Location: "input", Resistance: budget.N(5e-3)},
		{Name: "fuse", Location: "output"},
	}
	if diff := cmp.Diff(want, d.Series); diff != "" {
		t.Error(diff)
	}
	if diff := cmp.Diff(budget.Curve{{25, 1}, {150, 1.8}}, d.Switch.RdsOnCurve); diff != "" {
		t.Error(diff)
	}
	draft["inductor.ac_curve[9][0]"], draft["inductor.ac_curve[9][1]"] = "1M", "3"
	if d, _ = draft.design(); d.Inductor != nil {
		t.Errorf("a curve is read in part: %v", d.Inductor.ACCurve)
	}
	for _, path := range []string{"series_resistances[7].resistance", "inductor.ac_curve[3][1]", "inductor.ac_curve[5][0]"} {
		if !hasError(wrong, path) {
			t.Errorf("no error at %s: %v", path, wrong)
		}
	}
	if hasError(wrong, "series_resistances[0].name") || hasError(wrong, "series_resistances[1].resistance") {
		t.Errorf("an empty row is blamed: %v", wrong)
	}
}

func hasError(errs []budget.FieldError, path string) bool {
	for _, e := range errs {
		if e.Path == path {
			return true
		}
	}
	return false
}

// TestValidationPointsAtRowsAsTyped needs no parse error: what Validate says of
// the second row is shown at the fourth, where it stands.
func TestValidationPointsAtRowsAsTyped(t *testing.T) {
	draft := draftOf(sample(t, "frost"))
	for _, key := range []string{"name", "location", "resistance"} {
		draft["series_resistances[5]."+key] = draft["series_resistances[2]."+key]
		delete(draft, "series_resistances[2]."+key)
	}
	draft["series_resistances[5].resistance"] = "-1"
	draft["switch.rds_on_curve[2][0]"], draft["switch.rds_on_curve[2][1]"] = "100", "1.4"
	draft["switch.rds_on_curve[6][0]"], draft["switch.rds_on_curve[6][1]"] = "50", "1.1"
	_, wrong := draft.design()
	if !hasError(wrong, "series_resistances[5].resistance") {
		t.Errorf("the negative resistance is not blamed where it stands: %v", wrong)
	}
	blamed := false
	for _, e := range wrong {
		blamed = blamed || strings.HasPrefix(e.Path, "switch.rds_on_curve[6]")
	}
	if !blamed || len(wrong) != 2 {
		t.Errorf("the falling curve is not blamed where it stands: %v", wrong)
	}
}

func TestTooManyRowsAreRefused(t *testing.T) {
	draft := Draft{}
	for i := range budget.MaxRows + 1 {
		draft[rowPath("series_resistances", i)+".name"] = "r"
		draft[cellPath("switch.rds_on_curve", i, 0)] = "1"
		draft[cellPath("switch.rds_on_curve", i, 1)] = "1"
	}
	_, wrong := draft.design()
	if !hasError(wrong, "series_resistances") || !hasError(wrong, "switch.rds_on_curve") {
		t.Error("201 rows are taken")
	}
}

// TestOneErrorForOneField types nonsense into a required field: it is called
// wrong, not also missing.
func TestOneErrorForOneField(t *testing.T) {
	draft := draftOf(sample(t, "frost"))
	draft["switch.rds_on"] = "eleven"
	_, wrong := draft.design()
	if len(wrong) != 1 || wrong[0].Path != "switch.rds_on" || wrong[0].Missing {
		t.Errorf("%+v", wrong)
	}
}

// TestUnusedRectifierIsKept switches the rectifier with what was typed kept:
// the part that is not used may be half entered or wrong.
func TestUnusedRectifierIsKept(t *testing.T) {
	draft := draftOf(sample(t, "frost"))
	draft["sync_switch.rds_on"] = "soon"
	draft["sync_switch.part"] = "to be chosen"
	d, wrong := draft.design()
	if len(wrong) > 0 {
		t.Fatal(wrong)
	}
	if d.SyncSwitch == nil || d.SyncSwitch.Part != "to be chosen" || d.Diode == nil {
		t.Errorf("sync switch %+v, diode %+v", d.SyncSwitch, d.Diode)
	}
	draft["rectifier"] = "synchronous"
	if _, wrong = draft.design(); !hasError(wrong, "sync_switch.rds_on") {
		t.Errorf("once used it is not validated: %v", wrong)
	}
}

func TestIncompleteDraft(t *testing.T) {
	draft, complete, err := Draft{"name": "new", "topology": "boost"}.stored()
	if err != nil || complete != nil || string(draft) != `{"name":"new","topology":"boost"}` {
		t.Errorf("%s %s %v", draft, complete, err)
	}
	_, wrong := Draft{"name": "new"}.design()
	missing := 0
	for _, e := range wrong {
		if e.Missing {
			missing++
		}
	}
	if missing < 8 {
		t.Errorf("%d entries are missing: %v", missing, wrong)
	}
}

func TestRippleRatio(t *testing.T) {
	for text, want := range map[string]float64{"": 0.3, " ": 0.3, "0.25": 0.25, "40 %": 0.4, "2": 2} {
		if got, wrong := (Draft{rippleRatio: text}).ripple(); got != want || len(wrong) > 0 {
			t.Errorf("%q is read as %v %v", text, got, wrong)
		}
	}
	for _, text := range []string{"0", "-1", "2.1", "much"} {
		if _, wrong := (Draft{rippleRatio: text}).ripple(); len(wrong) != 1 || wrong[0].Path != rippleRatio {
			t.Errorf("%q: %v", text, wrong)
		}
	}
}

// TestHostileDrafts have keys that name nothing: they are passed over.
func TestHostileDrafts(t *testing.T) {
	want, _ := Draft{}.design()
	for _, key := range []string{"switch", "switch.", ".", "[0]", "series_resistances[-1].name", "series_resistances[99999999999999999999].name",
		"series_resistances[x].name", "switch.rds_on[0][0]", "format", "Switch.rds_on", "input", "nothing.at.all"} {
		got, _ := Draft{key: "1"}.design()
		if diff := cmp.Diff(want, got, cmpopts.EquateEmpty()); diff != "" {
			t.Errorf("%q is read: %s", key, diff)
		}
	}
}
