package web

import (
	"math"
	"os"
	"path/filepath"
	"runtime"
	"strconv"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"

	"lossbook/budget"
)

// TestMalformedBodies sends every file to every address that takes a body; the
// file's name says which status is due.
func TestMalformedBodies(t *testing.T) {
	files, err := filepath.Glob("../testdata/malformed/*.json")
	if err != nil || len(files) < 40 {
		t.Fatalf("%d files: %v", len(files), err)
	}
	s := seeded(t)
	before := s.dump()
	for _, file := range files {
		body, err := os.ReadFile(file)
		if err != nil {
			t.Fatal(err)
		}
		want, err := strconv.Atoi(filepath.Base(file)[:3])
		if err != nil {
			t.Fatal(err)
		}
		for _, to := range [][2]string{{"POST", "/api/v1/budget"}, {"POST", "/api/v1/designs"}, {"PUT", "/api/v1/designs/1"}} {
			w := s.ask(to[0], to[1], string(body), header("Content-Type", "application/json"))
			if p := read[problem](t, w); w.Code != want || p.Status != want || len(p.Detail) < 10 {
				t.Errorf("%s to %s: status %d, want %d: %s", filepath.Base(file), to[1], w.Code, want, w.Body)
			}
		}
		if w := s.ask("POST", "/api/v1/designs/1/revisions", string(body), header("Content-Type", "application/json")); w.Code != 201 && w.Code/100 != 4 {
			t.Errorf("%s as a revision: status %d", filepath.Base(file), w.Code)
		}
	}
	if strings.Contains(s.log.String(), "ERROR") {
		t.Errorf("the log has errors:\n%s", s.log)
	}
	if after := s.ask("GET", "/api/v1/designs/1", "").Body.String(); !strings.Contains(before, after) {
		t.Errorf("the design changed to %s", after)
	}
}

func TestBodiesBeyondBounds(t *testing.T) {
	s := newSite(t)
	deep := strings.Repeat(`{"a":`, 100_000) + "1" + strings.Repeat("}", 100_000)
	lists := strings.Repeat("[", 4<<20)
	for _, c := range []struct {
		name, body, kind string
		status           int
	}{
		{"64 MiB", `{"design":{"note":"` + strings.Repeat("x", 64<<20) + `"}}`, "application/json", 413},
		{"one byte over", `"` + strings.Repeat("x", maxBody-1) + `"`, "application/json", 413},
		{"at the limit", `"` + strings.Repeat("x", maxBody-2) + `"`, "application/json", 422},
		{"deep objects", deep, "application/json", 400},
		{"deep unknown member", `{"design":{"x":` + deep + `}}`, "application/json", 400},
		{"a little too deep", `{"design":{"x":` + brackets(maxDepth-1) + `}}`, "application/json", 400},
		{"as deep as may be", `{"design":{"x":` + brackets(maxDepth-2) + `}}`, "application/json", 422},
		{"deep lists", lists, "application/json", 400},
		{"a million unknown names", `{"design":{` + manyNames(200_000) + `}}`, "application/json", 422},
		{"no type", "{}", "", 415},
		{"a form", "a=b", "application/x-www-form-urlencoded", 415},
		{"plain text", "{}", "text/plain", 415},
		{"another charset", "{}", "application/json; charset=utf-16", 415},
		{"broken type", "{}", "application/json; =", 415},
	} {
		w := s.ask("POST", "/api/v1/budget", c.body, header("Content-Type", c.kind))
		if w.Code != c.status {
			t.Errorf("%s: status %d, want %d: %.200s", c.name, w.Code, c.status, w.Body)
		}
		if w.Body.Len() > 64<<10 {
			t.Errorf("%s: the answer has %d bytes", c.name, w.Body.Len())
		}
	}
	if w := s.ask("POST", "/api/v1/budget", "{}", header("Content-Encoding", "gzip")); w.Code != 415 {
		t.Errorf("compressed: status %d", w.Code)
	}
}

func brackets(deep int) string { return strings.Repeat("[", deep) + strings.Repeat("]", deep) }

func manyNames(n int) string {
	names := make([]string, n)
	for i := range names {
		names[i] = `"n` + strconv.Itoa(i) + `":1`
	}
	return strings.Join(names, ",")
}

// TestLongListsAreBounded holds memory down while a list is read, not after.
func TestLongListsAreBounded(t *testing.T) {
	row := `{"vin":12,"iout":1},`
	points := strings.Repeat(row, maxBody/len(row)-10)
	body := []byte(`{"design":{"series_resistances":[` + strings.TrimSuffix(strings.Repeat("{},", 1000), ",") + `]},"points":[` + strings.TrimSuffix(points, ",") + "]}")
	var before, after runtime.MemStats
	runtime.ReadMemStats(&before)
	var ask budgetRequest
	wrong, err := decode(body, &ask)
	runtime.ReadMemStats(&after)
	if err != nil || len(ask.Points) != maxPoints || len(ask.Design.Series) != budget.MaxRows {
		t.Fatalf("%d points, %v", len(ask.Points), err)
	}
	var paths []string
	for _, e := range wrong {
		paths = append(paths, e.Path)
	}
	if diff := cmp.Diff([]string{"design.series_resistances", "points"}, paths); diff != "" {
		t.Error(diff)
	}
	if used := (after.TotalAlloc - before.TotalAlloc) >> 20; used > 64 {
		t.Errorf("reading took %d MiB", used)
	}
}

func TestPointsUpToTheBound(t *testing.T) {
	s := newSite(t)
	ask := budgetRequest{Design: sample(t, "frost")}
	for range maxPoints + 1 {
		ask.Points = append(ask.Points, requestPoint{Vin: budget.N(12), Iout: budget.N(1)})
	}
	s.want(422, "POST", "/api/v1/budget", pointsBody(t, ask.Design, maxPoints+1))
	w := s.want(200, "POST", "/api/v1/budget", pointsBody(t, ask.Design, maxPoints))
	if got := read[Answer](t, w); len(got.Points) != maxPoints {
		t.Errorf("%d points", len(got.Points))
	}
	w = s.want(200, "POST", "/api/v1/budget", `{"points":[],"design":`+text(t, ask.Design)+`}`)
	if got := read[Answer](t, w); len(got.Points) != 0 {
		t.Errorf("%d points were asked for none", len(got.Points))
	}
}

func pointsBody(t *testing.T, d *budget.Design, n int) string {
	points := strings.TrimSuffix(strings.Repeat(`{"vin":12,"iout":1},`, n), ",")
	return `{"design":` + text(t, d) + `,"points":[` + points + `]}`
}

// TestAllErrorsAtOnce reads a body with many faults: each is named, at its path.
func TestAllErrorsAtOnce(t *testing.T) {
	_, wrong, err := decodeDesign([]byte(`{
		"format": "lossbook/1", "Name": "x", "topology": 3, "frequency": "250k", "ambient": null,
		"switch": {"RDS_on": 1, "q_gd": [], "rds_on_curve": [[1, "2"], [1, 2, 3], {}], "nonsense": {"deep": [1, 2]}},
		"diode": 5, "series_resistances": [{"name": "a", "resistance": 1e999}, 7], "sources": {"switch.rds_on": false}}`))
	if err != nil {
		t.Fatal(err)
	}
	var got []string
	for _, e := range wrong {
		got = append(got, e.Path+": "+e.Message)
	}
	want := []string{
		`Name: is no field of this format; did you mean "name"?`,
		`topology: must be a text, not a number`,
		`frequency: must be a number, not a text`,
		`ambient: is null; leave it out, or give it a value`,
		`switch.RDS_on: is no field of this format; did you mean "rds_on"?`,
		`switch.q_gd: must be a number, not a list`,
		`switch.rds_on_curve[0][1]: must be a number, not a text`,
		`switch.rds_on_curve[1]: must be a row of 2 numbers, not 3`,
		`switch.rds_on_curve[2]: must be a list, not an object`,
		`switch.nonsense: is no field of this format`,
		`diode: must be an object, not a number`,
		`series_resistances[0].resistance: is larger than any number that can be kept`,
		`series_resistances[1]: must be an object, not a number`,
		`sources.switch.rds_on: must be a text, not false`,
	}
	if diff := cmp.Diff(want, got); diff != "" {
		t.Error(diff)
	}
}

// TestEveryFieldIsRead writes each field of the table into a design and reads
// it back, so that a new field can't be forgotten.
func TestEveryFieldIsRead(t *testing.T) {
	checked := 0
	for _, part := range budget.Parts() {
		for _, f := range part.Fields {
			path := f.Path
			if part.List {
				path = part.Path + "[0]." + f.Key
			}
			d := new(budget.Design)
			slot, ok := d.Slot(path, true)
			if !ok {
				t.Fatalf("%s has no slot", path)
			}
			fill(slot, float64(checked)+0.1)
			back, wrong, err := decodeDesign([]byte(text(t, d)))
			if diff := cmp.Diff(d, back); err != nil || len(wrong) > 0 || diff != "" {
				t.Errorf("%s: %v %v %s", path, err, wrong, diff)
			}
			checked++
		}
	}
	if checked < 100 {
		t.Errorf("only %d fields were checked", checked)
	}
}

func fill(slot any, v float64) {
	switch slot := slot.(type) {
	case *budget.Num:
		*slot = budget.N(v)
	case *string:
		*slot = "text"
	case *budget.Curve:
		*slot = budget.Curve{{v, -v}, {v + 1, 1e-300}}
	}
}

func TestNumbersAreReadExactly(t *testing.T) {
	for text, want := range map[string]float64{
		"0": 0, "-0": 0, "0.1": 0.1, "1e-7": 1e-7, "123456789.123456789": 123456789.123456789,
		"5e-324": 5e-324, "1.7976931348623157e308": math.MaxFloat64, "0e-999": 0,
	} {
		got, words := parseNumber(text)
		if words != "" || math.Float64bits(got) != math.Float64bits(want) {
			t.Errorf("%s is read as %v %s", text, got, words)
		}
	}
	for _, text := range []string{"1e309", "-1e309", "1e-400", "-0.00001e-400"} {
		if v, words := parseNumber(text); words == "" {
			t.Errorf("%s is read as %v", text, v)
		}
	}
}

func TestNoNaNIsWritten(t *testing.T) {
	for _, v := range []float64{math.NaN(), math.Inf(1), math.Inf(-1)} {
		if b, err := encodeJSON(v); err == nil {
			t.Errorf("%v is written as %s", v, b)
		}
	}
}
