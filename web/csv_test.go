package web

import (
	"bytes"
	"context"
	"encoding/csv"
	"math"
	"mime"
	"net/http/httptest"
	"slices"
	"strconv"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"

	"lossbook/budget"
)

// hostile is what someone may call a design, a part or a resistance.
var hostile = []string{
	`=1+1`, `+1`, `-1+1`, `@SUM(A1)`, "\t=1", "\r=1", `=HYPERLINK("http://evil.test")`, `"quoted", and more`, `a;b`, "line\nbreak",
	`<script>alert(1)</script>`, `"><img src=x onerror=alert(1)>`, `../../etc/passwd`, `..\..\boot.ini`, `name"; filename="evil.exe`,
	"name\r\nSet-Cookie: a=b", `CON`, `%00.csv`, "zero\x00byte", "\u202egnp.exe", `{{7*7}}`, `${7*7}`, `'; DROP TABLE designs; --`, strings.Repeat("long ", 500), "日本", "", " ",
}

func computed(t *testing.T, d *budget.Design) Answer {
	t.Helper()
	found, wrong, err := compute(context.Background(), d, nil)
	if err != nil || len(wrong) > 0 {
		t.Fatal(wrong, err)
	}
	return found
}

// table reads a CSV as strictly as the library can: equal rows, no bare quotes.
func table(t *testing.T, body []byte) (header []string, rows []map[string]string) {
	t.Helper()
	reader := csv.NewReader(bytes.NewReader(body))
	records, err := reader.ReadAll()
	if err != nil || len(records) == 0 {
		t.Fatalf("%d records: %v", len(records), err)
	}
	header = records[0]
	for _, record := range records[1:] {
		row := map[string]string{}
		for i, cell := range record {
			row[header[i]] = cell
		}
		rows = append(rows, row)
	}
	return header, rows
}

// TestCSVIsTheAPI compares the table with the points the API gives, cell by
// cell and bit by bit.
func TestCSVIsTheAPI(t *testing.T) {
	s := seeded(t)
	revision := read[Revision](t, s.want(200, "GET", "/api/v1/designs/1/revisions/1", ""))
	points, err := revision.rows()
	if err != nil {
		t.Fatal(err)
	}
	paths := []string{"/api/v1/designs/1/revisions/1/efficiency.csv", "/designs/1/revisions/1/efficiency.csv", "/designs/1/efficiency.csv"}
	for _, path := range paths {
		w := s.want(200, "GET", path, "")
		if kind := w.Header().Get("Content-Type"); kind != "text/csv; charset=utf-8" {
			t.Errorf("%s is %s", path, kind)
		}
		_, rows := table(t, w.Body.Bytes())
		if len(rows) != len(points) || len(rows) != 24 {
			t.Fatalf("%s: %d rows of %d points", path, len(rows), len(points))
		}
		cells := 0
		for i := range points {
			cells += compareRow(t, path, rows[i], &points[i])
		}
		if cells < 24*30 {
			t.Errorf("%s: only %d numbers were compared", path, cells)
		}
	}
}

func compareRow(t *testing.T, path string, row map[string]string, p *Point) int {
	t.Helper()
	want := map[string]float64{"vin_V": p.Vin, "iout_A": p.Iout, "ambient_C": p.Ambient}
	if p.Settled() {
		for name, v := range map[string]float64{"efficiency": p.Efficiency, "pin_W": p.Pin, "pout_W": p.Pout, "loss_W": p.Loss, "iin_A": p.Iin,
			"switch_C": p.Temperatures.Switch, "rectifier_C": p.Temperatures.Rectifier, "inductor_C": p.Temperatures.Inductor} {
			want[name] = v
		}
		for _, it := range p.Items {
			want[it.Part+"."+it.Kind+"_W"] = it.Power
		}
	}
	for name, v := range want {
		got, err := strconv.ParseFloat(row[name], 64)
		if err != nil || math.Float64bits(got) != math.Float64bits(v) {
			t.Errorf("%s: %s is %q, want %v", path, name, row[name], v)
		}
	}
	if row["state"] != p.State {
		t.Errorf("%s: state %q, want %q", path, row["state"], p.State)
	}
	return len(want)
}

func TestCSVColumns(t *testing.T) {
	d := sample(t, "frost")
	body, err := csvOf(d, computed(t, d).Points)
	if err != nil {
		t.Fatal(err)
	}
	header, _ := table(t, body)
	want := strings.Fields(`vin_V iout_A ambient_C state mode efficiency pin_W pout_W loss_W iin_A
		switch.conduction_W switch.turn_on_W switch.turn_off_W switch.output_charge_W switch.recovery_W
		rectifier.conduction_W rectifier.dead_time_W rectifier.recovery_W rectifier.leakage_W
		inductor.winding_dc_W inductor.winding_ac_W inductor.core_W input_capacitor.esr_W output_capacitor.esr_W snubber.rc_W
		drive.gate_W drive.regulator_W controller.supply_W controller.fixed_W`)
	for _, r := range d.Series {
		want = append(want, "layout."+r.Name+"_W")
	}
	want = append(want, "switch_C", "rectifier_C", "inductor_C", "marks")
	if diff := cmp.Diff(want, header); diff != "" {
		t.Error(diff)
	}
	if strings.HasPrefix(string(body), "\ufeff") || bytes.Contains(body, []byte("\r")) {
		t.Error("the file has a byte order mark or carriage returns")
	}
}

// TestCSVOfUnsettledPoints has the same columns, empty where there is no figure.
func TestCSVOfUnsettledPoints(t *testing.T) {
	d := sample(t, "frost")
	settled := computed(t, d).Points[0]
	settled.Items = slices.Clone(settled.Items)
	settled.Items[0].Outside, settled.Items[len(settled.Items)-1].Outside = true, true
	lost := Point{Vin: 30, Iout: 1, Ambient: -12.5, State: "out_of_reach", Reason: "Vin is above Vout"}
	mixed, err := csvOf(d, []Point{lost, settled})
	if err != nil {
		t.Fatal(err)
	}
	none, err := csvOf(d, []Point{lost})
	if err != nil {
		t.Fatal(err)
	}
	header, rows := table(t, mixed)
	alone, _ := table(t, none)
	if diff := cmp.Diff(header, alone); diff != "" {
		t.Errorf("without any figure the columns are others: %s", diff)
	}
	for name, cell := range rows[0] {
		filled := slices.Contains([]string{"vin_V", "iout_A", "ambient_C", "state"}, name)
		if filled == (cell == "") {
			t.Errorf("%s is %q", name, cell)
		}
	}
	if rows[0]["ambient_C"] != "-12.5" {
		t.Errorf("a negative number is written %q", rows[0]["ambient_C"])
	}
	if got, want := rows[1]["marks"], "switch.conduction layout."+d.Series[len(d.Series)-1].Name; got != want {
		t.Errorf("marks %q, want %q", got, want)
	}
}

func TestTextCellsAreGuarded(t *testing.T) {
	for text, want := range map[string]string{
		"=1+1": "'=1+1", "+1": "'+1", "-1": "'-1", "@a": "'@a", "\ta": "'\ta", "\ra": "'\ra", "a=1": "a=1", "'=1": "'=1", "": "", "switch.core": "switch.core",
	} {
		if got := textCell(text); got != want {
			t.Errorf("%q becomes %q", text, got)
		}
	}
	if numberCell(-0.5) != "-0.5" {
		t.Error("a number is guarded")
	}
}

// TestHostileNamesInExports saves designs under hostile names: the exports stay
// tables and design files, and are saved under harmless names.
func TestHostileNamesInExports(t *testing.T) {
	for _, name := range hostile {
		d := sample(t, "frost")
		d.Name = name
		d.Series[0].Name = name
		w := httptest.NewRecorder()
		if err := writeCSV(w, fileName(name, 3, "efficiency.csv"), d, oneRow(d)); err != nil {
			t.Fatal(err)
		}
		checkFileName(t, name, w)
		header, rows := table(t, w.Body.Bytes())
		if len(rows) != 1 || !slices.ContainsFunc(header, func(cell string) bool { return strings.HasPrefix(cell, "layout.") }) {
			t.Errorf("%q: %d rows below %q", name, len(rows), header)
		}
		for _, cell := range header {
			if cell != "" && strings.ContainsRune("=+-@\t\r", rune(cell[0])) {
				t.Errorf("%q: a cell begins %q", name, cell[:1])
			}
		}
	}
}

// oneRow is a row that needs no valid design.
func oneRow(d *budget.Design) []Point {
	return []Point{{Vin: 1, State: "settled", Figures: &Figures{Mode: "ccm", Items: itemsOf(d, nil)}}}
}

func checkFileName(t *testing.T, name string, w *httptest.ResponseRecorder) {
	t.Helper()
	disposition := w.Header().Get("Content-Disposition")
	kind, parameters, err := mime.ParseMediaType(disposition)
	if err != nil || kind != "attachment" {
		t.Fatalf("%q: %s: %v", name, disposition, err)
	}
	file := parameters["filename"]
	harmless := func(r rune) bool {
		return r >= 'a' && r <= 'z' || r >= '0' && r <= '9' || r == '-' || r == '.'
	}
	if len(parameters) != 1 || len(file) > 100 || !strings.HasSuffix(file, "-r3-efficiency.csv") || strings.Contains(file, "..") ||
		strings.ContainsFunc(file, func(r rune) bool { return !harmless(r) }) || strings.HasPrefix(file, "-") {
		t.Errorf("%q is saved as %q", name, disposition)
	}
}

func TestDesignFileReadsBackEqual(t *testing.T) {
	s := seeded(t)
	want := sample(t, "frost")
	for _, path := range []string{"/designs/1/design.json", "/designs/1/revisions/1/design.json"} {
		w := s.want(200, "GET", path, "")
		if diff := cmp.Diff(want, mustRead(t, w.Body.Bytes())); diff != "" {
			t.Errorf("%s: %s", path, diff)
		}
		if kind := w.Header().Get("Content-Type"); kind != "application/json" {
			t.Errorf("%s is %s", path, kind)
		}
	}
}
