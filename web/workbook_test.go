package web

import (
	"archive/zip"
	"bytes"
	"io"
	"math"
	"slices"
	"strconv"
	"strings"
	"testing"

	"github.com/xuri/excelize/v2"

	"lossbook/budget"
)

// opened reads a workbook back; rows are the sheet's cells as they are stored.
func opened(t *testing.T, body []byte) *excelize.File {
	t.Helper()
	file, err := excelize.OpenReader(bytes.NewReader(body))
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { file.Close() })
	return file
}

func rowsIn(t *testing.T, file *excelize.File, sheet string) [][]string {
	t.Helper()
	rows, err := file.GetRows(sheet, excelize.Options{RawCellValue: true})
	if err != nil || len(rows) < 2 {
		t.Fatalf("sheet %s has %d rows: %v", sheet, len(rows), err)
	}
	for i := range rows {
		if missing := len(rows[0]) - len(rows[i]); missing > 0 {
			rows[i] = append(rows[i], make([]string, missing)...)
		}
	}
	return rows
}

// kindOf is the type of a cell: a number has none of its own.
func kindOf(t *testing.T, file *excelize.File, sheet string, column, row int) excelize.CellType {
	t.Helper()
	at, err := excelize.CoordinatesToCellName(column+1, row+1)
	if err != nil {
		t.Fatal(err)
	}
	kind, err := file.GetCellType(sheet, at)
	if err != nil {
		t.Fatal(err)
	}
	return kind
}

func isNumber(kind excelize.CellType) bool {
	return kind == excelize.CellTypeNumber || kind == excelize.CellTypeUnset
}

var workbookPaths = map[string]string{
	"/designs/1/efficiency.xlsx":                    "/designs/1/efficiency.csv",
	"/designs/1/revisions/1/efficiency.xlsx":        "/designs/1/revisions/1/efficiency.csv",
	"/api/v1/designs/1/revisions/1/efficiency.xlsx": "/api/v1/designs/1/revisions/1/efficiency.csv",
}

// TestWorkbookIsTheCSV compares the table with the CSV: the same cells, and every
// number bit by bit and as a number.
func TestWorkbookIsTheCSV(t *testing.T) {
	s := seeded(t)
	for path, csv := range workbookPaths {
		w := s.want(200, "GET", path, "")
		if kind := w.Header().Get("Content-Type"); kind != workbookKind {
			t.Errorf("%s is %s", path, kind)
		}
		if got := w.Header().Get("Content-Disposition"); !strings.HasPrefix(got, "attachment; filename=night-frost") || !strings.HasSuffix(got, "-efficiency.xlsx") {
			t.Errorf("%s is saved as %s", path, got)
		}
		file := opened(t, w.Body.Bytes())
		header, want := table(t, s.want(200, "GET", csv, "").Body.Bytes())
		got := rowsIn(t, file, "Efficiency")
		if !slices.Equal(got[0], header) || len(got) != len(want)+1 {
			t.Fatalf("%s: %d rows under %v", path, len(got), got[0])
		}
		numbers := 0
		for i, row := range want {
			for column, name := range header {
				cell := ""
				if column < len(got[i+1]) {
					cell = got[i+1][column]
				}
				wanted, err := strconv.ParseFloat(row[name], 64)
				if err != nil {
					if cell != row[name] {
						t.Errorf("%s row %d: %s is %q, want %q", path, i+1, name, cell, row[name])
					}
					continue
				}
				numbers++
				v, err := strconv.ParseFloat(cell, 64)
				if err != nil || math.Float64bits(v) != math.Float64bits(wanted) || !isNumber(kindOf(t, file, "Efficiency", column, i+1)) {
					t.Errorf("%s row %d: %s is %q, want the number %v", path, i+1, name, cell, wanted)
				}
			}
		}
		if numbers < 24*25 {
			t.Errorf("%s: only %d numbers were compared", path, numbers)
		}
	}
}

// TestWorkbookHasAChart looks for the chart's own file, and for what it draws.
func TestWorkbookHasAChart(t *testing.T) {
	body := seeded(t).want(200, "GET", "/designs/1/revisions/1/efficiency.xlsx", "").Body.Bytes()
	chart := partOf(t, body, "xl/charts/chart1.xml")
	for _, want := range []string{"scatterChart", "Efficiency!$B$2:$B$9", "Efficiency!$F$2:$F$9", "Efficiency!$B$18:$B$25", "load, A"} {
		if !strings.Contains(chart, want) {
			t.Errorf("the chart lacks %s", want)
		}
	}
	if n := strings.Count(chart, "<ser>"); n != 3 {
		t.Errorf("%d lines, want one for each input voltage", n)
	}
}

func partOf(t *testing.T, body []byte, name string) string {
	t.Helper()
	archive, err := zip.NewReader(bytes.NewReader(body), int64(len(body)))
	if err != nil {
		t.Fatal(err)
	}
	f, err := archive.Open(name)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	text, err := io.ReadAll(f)
	if err != nil {
		t.Fatal(err)
	}
	return string(text)
}

// TestWorkbookHoldsTheDesign finds every stated entry with its unit and source,
// every loss at every load, the findings and the provenance.
func TestWorkbookHoldsTheDesign(t *testing.T) {
	d := sample(t, "frost")
	d.Sources = map[string]string{"switch.rds_on": "p. 3", "frequency": "-1 % by its resistor", "series_resistances[1].resistance": "measured"}
	found := computed(t, d)
	book := workbook{design: d, points: found.Points, findings: found.Findings, provenance: [][2]string{{"Revision", "7"}, {"Model version", budget.ModelVersion}}}
	body, err := book.bytes()
	if err != nil {
		t.Fatal(err)
	}
	file := opened(t, body)
	if got := strings.Join(file.GetSheetList(), " "); got != "Inputs Ledger Efficiency Weighted Findings Provenance" {
		t.Errorf("sheets %s", got)
	}
	inputs := rowsIn(t, file, "Inputs")
	rds := slices.IndexFunc(inputs, func(row []string) bool { return row[3] == "switch.rds_on" })
	if rds < 0 {
		t.Fatal("no on-resistance")
	}
	if inputs[rds][4] != "0.011" || inputs[rds][5] != "Ω" || !isNumber(kindOf(t, file, "Inputs", 4, rds)) {
		t.Errorf("on-resistance: %v", inputs[rds])
	}
	stated := 0
	for path, source := range d.Sources {
		i := slices.IndexFunc(inputs, func(row []string) bool { return row[3] == path })
		if stated++; i < 0 || inputs[i][8] != textCell(source) {
			t.Errorf("the source of %s is not beside it", path)
		}
	}
	if stated < 3 || len(inputs) < 40 {
		t.Errorf("%d sources, %d entries", stated, len(inputs))
	}
	ledger := rowsIn(t, file, "Ledger")
	sum, rows := 0.0, 0
	for _, row := range ledger[1:] {
		if row[0] == "12" && row[3] == "W" && row[1] != "total" {
			v, err := strconv.ParseFloat(row[len(row)-1], 64)
			if err != nil {
				t.Fatal(err)
			}
			sum, rows = sum+v, rows+1
		}
	}
	if want := found.Points[15].Loss; math.Abs(sum-want) > 1e-12*want || rows != len(found.Points[15].Items) {
		t.Errorf("%d losses at full load add up to %v, not %v", rows, sum, want)
	}
	if got := rowsIn(t, file, "Findings"); len(got) != len(found.Findings)+1 || got[1][3] != found.Findings[0].Message {
		t.Errorf("%d rows of %d findings", len(got), len(found.Findings))
	}
	if got := rowsIn(t, file, "Provenance"); !slices.ContainsFunc(got, func(r []string) bool { return slices.Equal(r, []string{"Revision", "7"}) }) ||
		!slices.ContainsFunc(got, func(r []string) bool { return slices.Equal(r, []string{"Program", "Lossbook"}) }) {
		t.Errorf("provenance %v", got)
	}
}

// TestWorkbookWithoutFigures has points that don't settle: their cells stay empty,
// and the ledger says why.
func TestWorkbookWithoutFigures(t *testing.T) {
	d := sample(t, "frost")
	points := computed(t, d).Points
	points[8] = Point{Vin: 12, Iout: points[8].Iout, Ambient: 45, State: "out_of_reach", Reason: "=the input is too high"}
	body, err := (&workbook{design: d, points: points}).bytes()
	if err != nil {
		t.Fatal(err)
	}
	file := opened(t, body)
	if got := rowsIn(t, file, "Efficiency")[9]; got[3] != "out_of_reach" || strings.Join(got[4:], "") != "" {
		t.Errorf("%v", got)
	}
	said := slices.ContainsFunc(rowsIn(t, file, "Ledger"), func(row []string) bool {
		return len(row) > 4 && row[0] == "12" && row[4] == "out_of_reach: =the input is too high"
	})
	if !said {
		t.Error("the ledger does not say why a column is empty")
	}
	if !strings.Contains(partOf(t, body, "xl/charts/chart1.xml"), `dispBlanksAs val="gap"`) {
		t.Error("the chart bridges what has no figure")
	}
}

// TestHostileWorkbook names everything after attacks: no cell is a formula, none
// begins like one, and what is read back is what was written.
func TestHostileWorkbook(t *testing.T) {
	cells := 0
	for _, name := range append(hostile, "_x003D_1+1") {
		d := sample(t, "frost")
		d.Name, d.Note, d.Switch.Part, d.Series[0].Name = name, name, name, name
		d.Sources = map[string]string{"switch.rds_on": name}
		points := computed(t, sample(t, "frost")).Points
		for i := range points {
			points[i].Items[slices.IndexFunc(points[i].Items, func(it Item) bool { return it.Part == "layout" })].Kind = name
		}
		points[7] = Point{Vin: points[7].Vin, Iout: points[7].Iout, Ambient: points[7].Ambient, State: "out_of_reach", Reason: name}
		body, err := (&workbook{design: d, points: points, findings: []Finding{{Level: "note", Message: name, Source: name}},
			energy: &Energy{Rows: []EnergyRow{{Reason: name}}, Reason: name}, provenance: [][2]string{{"Note", name}}}).bytes()
		if err != nil {
			t.Fatalf("%q: %v", name, err)
		}
		file := opened(t, body)
		for _, sheet := range file.GetSheetList() {
			for row, line := range rowsIn(t, file, sheet) {
				for column, cell := range line {
					if cell == "" || isNumber(kindOf(t, file, sheet, column, row)) {
						continue
					}
					cells++
					at, _ := excelize.CoordinatesToCellName(column+1, row+1)
					if formula, _ := file.GetCellFormula(sheet, at); formula != "" || strings.ContainsRune("=+-@\t\r", rune(cell[0])) {
						t.Errorf("%q: %s of %s is %q", name, at, sheet, cell)
					}
				}
			}
		}
		want := strings.ToValidUTF8(strings.ReplaceAll(textCell(name), "\x00", "\uFFFD"), "\uFFFD")
		if got := rowsIn(t, file, "Provenance")[1]; name != "" && (len(got) < 2 || got[1] != want) {
			t.Errorf("%q is read back as %q", want, got)
		}
	}
	if cells < 10_000 {
		t.Errorf("only %d cells were looked at", cells)
	}
}

// TestWorkbookNegativeNumber keeps a number below zero a number.
func TestWorkbookNegativeNumber(t *testing.T) {
	d := sample(t, "frost")
	d.Ambient = budget.N(-40)
	body, err := (&workbook{design: d, points: computed(t, d).Points}).bytes()
	if err != nil {
		t.Fatal(err)
	}
	file := opened(t, body)
	if got := rowsIn(t, file, "Efficiency")[1][2]; got != "-40" || !isNumber(kindOf(t, file, "Efficiency", 2, 1)) {
		t.Errorf("the ambient is %q", got)
	}
}

// TestShareHasTheWorkbook compares part by part: the library lists the kinds of
// files in an order of chance, which says nothing.
func TestShareHasTheWorkbook(t *testing.T) {
	s := seeded(t)
	at := s.shared("")
	own := s.want(200, "GET", "/designs/1/revisions/1/efficiency.xlsx", "").Body.Bytes()
	got := s.want(200, "GET", at+"/efficiency.xlsx", "").Body.Bytes()
	archive, err := zip.NewReader(bytes.NewReader(own), int64(len(own)))
	if err != nil || len(archive.File) < 10 {
		t.Fatal(len(archive.File), err)
	}
	for _, f := range archive.File {
		if f.Name != "[Content_Types].xml" && partOf(t, got, f.Name) != partOf(t, own, f.Name) {
			t.Errorf("%s differs from the revision's", f.Name)
		}
	}
	s.page(404, s.ask("GET", "/share/1/efficiency.xlsx", ""), "no such link")
	if p := s.open(200, at); strings.Contains(p.words(), "paper") {
		t.Error("a link leads to a report, which it does not open")
	}
}
