package web

import (
	"bytes"
	"encoding/csv"
	"net/http"
	"strconv"
	"strings"

	"lossbook/budget"
)

// csvHead is the columns before the items; csvTail those after them.
var (
	csvHead = []string{"vin_V", "iout_A", "ambient_C", "state", "mode", "efficiency", "pin_W", "pout_W", "loss_W", "iin_A"}
	csvTail = []string{"switch_C", "rectifier_C", "inductor_C", "marks"}
)

// writeCSV sends the table of a design: one header row, one row a point, full
// precision, empty where a point has no figure.
func writeCSV(w http.ResponseWriter, name string, d *budget.Design, points []Point) error {
	body, err := csvOf(d, points)
	if err != nil {
		return err
	}
	attach(w, name, "text/csv; charset=utf-8", body)
	return nil
}

func csvOf(d *budget.Design, points []Point) ([]byte, error) {
	var body bytes.Buffer
	items := itemsOf(d, points)
	table := csv.NewWriter(&body)
	table.Write(csvHeader(items))
	for i := range points {
		table.Write(csvRow(&points[i], len(items)))
	}
	table.Flush()
	return body.Bytes(), table.Error()
}

func csvHeader(items []Item) []string {
	header := append([]string{}, csvHead...)
	for _, it := range items {
		header = append(header, textCell(it.Part+"."+it.Kind+"_W"))
	}
	return append(header, csvTail...)
}

func csvRow(p *Point, items int) []string {
	row := []string{numberCell(p.Vin), numberCell(p.Iout), numberCell(p.Ambient), textCell(p.State)}
	if !p.Settled() {
		return append(row, make([]string, len(csvHead)-len(row)+items+len(csvTail))...)
	}
	row = append(row, textCell(p.Mode), numberCell(p.Efficiency), numberCell(p.Pin), numberCell(p.Pout), numberCell(p.Loss), numberCell(p.Iin))
	var marks []string
	for _, it := range p.Items {
		row = append(row, numberCell(it.Power))
		if it.Outside {
			marks = append(marks, it.Part+"."+it.Kind)
		}
	}
	t := p.Temperatures
	return append(row, numberCell(t.Switch), numberCell(t.Rectifier), numberCell(t.Inductor), textCell(strings.Join(marks, " ")))
}

// numberCell writes the shortest digits that read back as the same number.
func numberCell(v float64) string { return strconv.FormatFloat(v, 'g', -1, 64) }

// textCell keeps a spreadsheet from taking a text for a formula: OWASP, "CSV
// Injection", names these first characters and the apostrophe against them.
func textCell(text string) string {
	if text != "" && strings.ContainsRune("=+-@\t\r", rune(text[0])) {
		return "'" + text
	}
	return text
}
