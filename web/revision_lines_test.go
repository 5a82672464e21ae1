package web

import (
	"encoding/json"
	"strings"
	"testing"

	"golang.org/x/net/html"
)

// drawnLines are the points of the efficiency chart, by line, as its data say; and its
// caption.
func (p page) drawnLines() (lines [][][]float64, data, caption string) {
	p.t.Helper()
	charts := p.all(func(n *html.Node) bool {
		return n.Data == "loss-chart" && strings.Contains(attr(n, "data"), `"series"`)
	})
	if len(charts) != 1 {
		p.t.Fatalf("%d charts of lines", len(charts))
	}
	var c struct {
		Series []struct{ Points [][]float64 }
	}
	data = attr(charts[0], "data")
	if err := json.Unmarshal([]byte(data), &c); err != nil {
		p.t.Fatal(err)
	}
	for _, s := range c.Series {
		lines = append(lines, s.Points)
	}
	return lines, data, words(charts[0].Parent)
}

// A revision of today's model draws the very lines that the sheet drew when it was
// kept, whatever becomes of the sheet. Where that can't be known to be so, its lines go
// through the kept points, and the caption says so.
func TestLinesOfARevision(t *testing.T) {
	s := seeded(t)
	const coarse = "straight lines between the kept points"
	_, want, caption := s.open(200, "/designs/1").drawnLines()
	if strings.Contains(caption, coarse) {
		t.Errorf("the sheet: %s", caption)
	}
	first, err := s.store.Revision(t.Context(), 1, 1)
	if err != nil {
		t.Fatal(err)
	}
	points, _, err := savedResults(first)
	if err != nil {
		t.Fatal(err)
	}
	link := s.shared("")
	s.another("0", points)
	points[3].Figures.Efficiency *= 1 + 1e-8
	s.another(first.Model, points)
	s.send("/designs/1", s.open(200, "/designs/1").form("entries", map[string]string{"switch.rds_on": "50m"}))
	for _, path := range []string{"/designs/1/revisions/1", "/designs/1/revisions/1/report", link} {
		lines, data, caption := s.open(200, path).drawnLines()
		if data != want || len(lines) != 3 || len(lines[0]) != len(loads) || strings.Contains(caption, coarse) {
			t.Errorf("%s draws %d lines of %d points, not those of its sheet: %s", path, len(lines), len(lines[0]), caption)
		}
	}
	for _, path := range []string{"/designs/1/revisions/2", "/designs/1/revisions/3", "/designs/1/revisions/2/report"} {
		lines, _, caption := s.open(200, path).drawnLines()
		if len(lines) != 3 || len(lines[0]) != 8 || !strings.Contains(caption, coarse) {
			t.Errorf("%s draws %d lines of %d points: %s", path, len(lines), len(lines[0]), caption)
		}
	}
}
