package web

import (
	"encoding/xml"
	"fmt"
	"math"
	"regexp"
	"slices"
	"strconv"
	"strings"
	"testing"

	"lossbook/budget"
)

// xmlCell is a cell as the file holds it: a number in its digits, or a text by its
// place among all texts (ECMA-376, part 1, 18.3.1.4).
type xmlCell struct {
	At    string `xml:"r,attr"`
	Kind  string `xml:"t,attr"`
	Value string `xml:"v"`
}

// xmlBook is a workbook read without the library that wrote it.
type xmlBook struct {
	t      *testing.T
	body   []byte
	sheets []string
	cells  map[string]map[string]any // sheet, cell: float64 or string
}

func (b *xmlBook) decode(name string, into any) {
	b.t.Helper()
	if err := xml.Unmarshal([]byte(partOf(b.t, b.body, name)), into); err != nil {
		b.t.Fatal(name, err)
	}
}

// readXML follows the file's own references from the workbook to its sheets.
func readXML(t *testing.T, body []byte) *xmlBook {
	t.Helper()
	b := &xmlBook{t: t, body: body, cells: map[string]map[string]any{}}
	var book struct {
		Sheets []struct {
			Name string `xml:"name,attr"`
			ID   string `xml:"http://schemas.openxmlformats.org/officeDocument/2006/relationships id,attr"`
		} `xml:"sheets>sheet"`
	}
	var links struct {
		List []struct {
			ID string `xml:"Id,attr"`
			To string `xml:"Target,attr"`
		} `xml:"Relationship"`
	}
	var texts struct {
		List []struct {
			Text string `xml:"t"`
		} `xml:"si"`
	}
	b.decode("xl/workbook.xml", &book)
	b.decode("xl/_rels/workbook.xml.rels", &links)
	b.decode("xl/sharedStrings.xml", &texts)
	for _, s := range book.Sheets {
		b.sheets = append(b.sheets, s.Name)
		b.cells[s.Name] = map[string]any{}
		for _, l := range links.List {
			if l.ID != s.ID {
				continue
			}
			var sheet struct {
				Rows []struct {
					Cells []xmlCell `xml:"c"`
				} `xml:"sheetData>row"`
			}
			b.decode("xl/"+strings.TrimPrefix(strings.TrimPrefix(l.To, "/"), "xl/"), &sheet)
			for _, row := range sheet.Rows {
				for _, c := range row.Cells {
					switch i, _ := strconv.Atoi(c.Value); {
					case c.Value == "":
					case c.Kind == "s":
						b.cells[s.Name][c.At] = texts.List[i].Text
					case c.Kind == "" || c.Kind == "n":
						v, err := strconv.ParseFloat(c.Value, 64)
						if err != nil {
							t.Errorf("%s %s: the number %q", s.Name, c.At, c.Value)
						}
						b.cells[s.Name][c.At] = v
					default:
						t.Errorf("%s %s is of the kind %q", s.Name, c.At, c.Kind)
					}
				}
			}
		}
	}
	return b
}

// row returns the cells A, B, … of a row; nil where there is nothing.
func (b *xmlBook) row(sheet string, row, columns int) []any {
	list := make([]any, columns)
	for i := range list {
		list[i] = b.cells[sheet][fmt.Sprintf("%c%d", 'A'+i, row)]
	}
	return list
}

// same compares a row bit by bit.
func (b *xmlBook) same(sheet string, row int, want ...any) {
	b.t.Helper()
	for i, got := range b.row(sheet, row, len(want)) {
		g, number := got.(float64)
		w, wanted := want[i].(float64)
		if number != wanted || number && math.Float64bits(g) != math.Float64bits(w) || !number && got != want[i] {
			b.t.Errorf("%s, row %d, column %d: %T %v, want %T %v", sheet, row, i+1, got, got, want[i], want[i])
		}
	}
}

// TestWorkbookHasTheWeightedFigures compares the sheets of means and of the load
// profile's day with what the API says of the same revision, bit by bit.
func TestWorkbookHasTheWeightedFigures(t *testing.T) {
	s := seeded(t)
	d, err := s.store.Design(t.Context(), 1)
	if err != nil {
		t.Fatal(err)
	}
	draft, err := readDraft(d.Draft)
	if err != nil {
		t.Fatal(err)
	}
	draft["profile[0].load"], draft["profile[0].hours"] = "1", "4"
	draft["profile[2].load"], draft["profile[2].hours"], draft["profile[2].vin"], draft["profile[2].ambient"] = "25 %", "0.1", "14", "-5"
	s.keepDraft(d, draft)
	s.want(201, "POST", "/api/v1/designs/1/revisions", "{}")
	want := read[weightsAnswer](t, s.want(200, "GET", "/api/v1/designs/1/revisions/2/weights", ""))
	if len(want.Voltages) != 3 || want.Profile == nil || len(want.Profile.Rows) != 2 {
		t.Fatalf("%+v", want)
	}
	for _, path := range []string{"/designs/1/efficiency.xlsx", "/designs/1/revisions/2/efficiency.xlsx"} {
		b := readXML(t, s.want(200, "GET", path, "").Body.Bytes())
		if got := strings.Join(b.sheets, ", "); got != "Inputs, Ledger, Efficiency, Weighted, Load profile, Findings, Provenance" {
			t.Errorf("%s: sheets %s", path, got)
		}
		b.same("Weighted", 1, "vin_V", "ambient_C", "figure", "efficiency", "weights", "why_none", "source")
		at := 2
		for _, v := range want.Voltages {
			for _, m := range v.Means {
				b.same("Weighted", at, v.Vin, v.Ambient, m.Name, *m.Efficiency, m.words(), nil, m.Source)
				at++
			}
		}
		b.same("Weighted", at, nil, nil, nil)
		e := want.Profile.Energy
		b.same("Load profile", 1, "row", "iout_A", "vin_V", "ambient_C", "hours", "in_Wh", "out_Wh", "lost_Wh", "efficiency", "why_none")
		for i, r := range e.Rows {
			b.same("Load profile", i+2, float64(i+1), r.Iout, r.Vin, r.Ambient, r.Hours, *r.In, *r.Out, *r.Lost, *r.Out / *r.In, nil)
		}
		b.same("Load profile", 4, "day", nil, nil, nil, 4.1, *e.In, *e.Out, *e.Lost, *e.Efficiency, nil)
		if at != 2+9 {
			t.Errorf("%s: %d means", path, at-2)
		}
	}
	if got := readXML(t, s.want(200, "GET", "/designs/1/revisions/1/efficiency.xlsx", "").Body.Bytes()); slices.Contains(got.sheets, "Load profile") {
		t.Error("a revision without a profile has a day of it")
	}
}

// Where there is no figure the cell is empty and the reason stands beside it; a profile
// worked with another model than the revision's says so.
func TestWorkbookSaysWhyNoWeightedFigure(t *testing.T) {
	s := seeded(t)
	points := computed(t, sample(t, "frost")).Points
	points[15] = Point{Vin: 12, Iout: points[15].Iout, Ambient: points[15].Ambient, State: "out_of_reach", Reason: "too far"}
	d, err := s.store.Design(t.Context(), 1)
	if err != nil {
		t.Fatal(err)
	}
	draft, err := readDraft(d.Draft)
	if err != nil {
		t.Fatal(err)
	}
	draft["profile[0].load"], draft["profile[0].hours"] = "1", "40"
	s.keepDraft(d, draft)
	s.another("0", points)
	b := readXML(t, s.want(200, "GET", "/designs/1/revisions/2/efficiency.xlsx", "").Body.Bytes())
	row := b.row("Weighted", 5, 7) // the first mean at 12 V
	if row[0] != 12.0 || row[3] != nil || row[5] != "at 100 % of full load there is no figure: too far" {
		t.Errorf("%v", row)
	}
	if day := b.row("Load profile", 2, 10); day[0] != "day" || day[7] != nil || !strings.Contains(fmt.Sprint(day[9]), "must be above 0 and at most 24") {
		t.Errorf("%v", day)
	}
	said := false
	for row := range 20 {
		cells := b.row("Provenance", row+1, 2)
		said = said || cells[0] == "Load profile" && strings.Contains(fmt.Sprint(cells[1]), "Worked with model "+budget.ModelVersion)
	}
	if !said {
		t.Error("the provenance does not say that the profile was worked with another model")
	}
}

// TestWorkbookChartDrawsItsCells reads the chart's own file: each reference is to the
// current or the efficiency of one input voltage, and all rows of the table are drawn
// once.
func TestWorkbookChartDrawsItsCells(t *testing.T) {
	body := seeded(t).want(200, "GET", "/designs/1/revisions/1/efficiency.xlsx", "").Body.Bytes()
	b := readXML(t, body)
	var chart struct {
		Series []struct {
			Name string `xml:"tx>strRef>f"`
			X    string `xml:"xVal>numRef>f"`
			Y    string `xml:"yVal>numRef>f"`
			Line struct {
				None   *struct{} `xml:"noFill"`
				Colour struct {
					Is string `xml:"val,attr"`
				} `xml:"solidFill>srgbClr"`
			} `xml:"spPr>ln"`
		} `xml:"chart>plotArea>scatterChart>ser"`
	}
	b.decode("xl/charts/chart1.xml", &chart)
	if len(chart.Series) != 3 {
		t.Fatalf("%d lines", len(chart.Series))
	}
	reference := regexp.MustCompile(`^Efficiency!\$([A-Z]+)\$(\d+)(?::\$([A-Z]+)\$(\d+))?$`)
	cellsOf := func(f string) (column string, values []any) {
		t.Helper()
		m := reference.FindStringSubmatch(f)
		if m == nil {
			t.Fatalf("a reference to %q", f)
		}
		from, _ := strconv.Atoi(m[2])
		to := from
		if m[3] != "" {
			if to, _ = strconv.Atoi(m[4]); m[3] != m[1] {
				t.Fatalf("%q is more than a column", f)
			}
		}
		for row := from; row <= to; row++ {
			values = append(values, b.cells["Efficiency"][m[1]+strconv.Itoa(row)])
		}
		return m[1], values
	}
	vins, colours, drawn := map[any]bool{}, map[string]bool{}, 0
	for _, line := range chart.Series {
		_, name := cellsOf(line.Name)
		x, loads := cellsOf(line.X)
		y, efficiencies := cellsOf(line.Y)
		if b.cells["Efficiency"][x+"1"] != "iout_A" || b.cells["Efficiency"][y+"1"] != "efficiency" || len(loads) != len(efficiencies) || len(loads) != len(budget.LoadGrid()) {
			t.Errorf("%v over %v: %d and %d cells", y, x, len(efficiencies), len(loads))
		}
		m := reference.FindStringSubmatch(line.X)
		first, _ := strconv.Atoi(m[2])
		for i := range loads {
			if vin := b.cells["Efficiency"]["A"+strconv.Itoa(first+i)]; vin != name[0] {
				t.Errorf("the line of %v V goes through a point at %v V", name[0], vin)
			}
			load, is := loads[i].(float64)
			efficiency, too := efficiencies[i].(float64)
			if !is || !too || load <= 0 || efficiency < 0.9 || efficiency >= 1 {
				t.Errorf("a point at %v with %v", loads[i], efficiencies[i])
			}
			drawn++
		}
		vins[name[0]], colours[line.Line.Colour.Is] = true, true
		if line.Line.None != nil || line.Line.Colour.Is == "" {
			t.Errorf("the line of %v V is not drawn", name[0])
		}
	}
	if len(vins) != 3 || len(colours) != 3 || drawn != 24 || b.cells["Efficiency"]["A26"] != nil {
		t.Errorf("%d points of %d lines are drawn", drawn, len(vins))
	}
}
