package web

import (
	"bytes"
	"encoding/csv"
	"net/http"
	"strings"

	"lossbook/budget"
	"lossbook/web/view"
)

// compareCSV sends the page's tables as one: a row a figure, at every load, with
// the same digits. A minus is a hyphen there, digits stand ungrouped, and a plus
// is left out, so that a number is read as one.
func (s *Server) compareCSV(w http.ResponseWriter, r *http.Request) error {
	c, err := s.compare(r.Context(), r.URL.Query())
	if err != nil {
		return err
	}
	body, err := c.csv()
	if err != nil {
		return err
	}
	attach(w, fileName(c.title(), 0, "comparison.csv"), "text/csv; charset=utf-8", body)
	return nil
}

func (c *comparison) csv() ([]byte, error) {
	var body bytes.Buffer
	table := csv.NewWriter(&body)
	table.Write(c.csvHeader())
	c.csvRows(table, "conditions", "", c.conditionTable())
	entries, _, _ := c.entryTable()
	c.csvRows(table, "entries", "", entries)
	for load, part := range budget.LoadGrid() {
		c.csvRows(table, "losses", loadShare(part), c.lossTable(load))
	}
	findings, _ := c.findingTable()
	c.csvRows(table, "findings", "", findings)
	table.Flush()
	return body.Bytes(), table.Error()
}

// csvHeader names the columns: of the baseline its value, of each other revision
// value, difference and share.
func (c *comparison) csvHeader() []string {
	header := []string{"table", "load_%", "row", "unit"}
	for _, h := range c.heads() {
		header = append(header, textCell(h.Label))
		if !h.Base {
			header = append(header, textCell(h.Label+" difference"), textCell(h.Label+" difference_%"))
		}
	}
	return append(header, "marks")
}

func (c *comparison) csvRows(table *csv.Writer, name, load string, t view.CompareTable) {
	group := ""
	for _, l := range t.Lines {
		if l.Square {
			group = l.Head
		} else if l.Unit != c.grain.unit || l.Class == "sum" {
			group = ""
		}
		head := l.Head
		if group != "" && !l.Square {
			head = group + ": " + head
		}
		record := []string{name, load, textCell(head), l.Unit}
		var marks []string
		for i, cell := range l.Cells {
			record = append(record, plainCell(cell.Value))
			if !cell.Base {
				record = append(record, plainCell(cell.Change), plainCell(cell.Share))
			}
			if cell.Marked {
				marks = append(marks, t.Heads[i].Label)
			}
		}
		table.Write(append(record, textCell(strings.Join(marks, "; "))))
	}
}

// plainCell writes what a cell of the page shows: a number as one that programs
// read, and anything else as text.
func plainCell(text string) string {
	digits := strings.NewReplacer(thin, "", minus, "-", "+", "", "±", "").Replace(text)
	if strings.Trim(digits, "-0123456789.") == "" && strings.ContainsAny(digits, "0123456789") {
		return digits
	}
	return textCell(text)
}
