package web

import (
	"fmt"
	"math"
	"strconv"
	"strings"
	"testing"

	"golang.org/x/net/html"

	"lossbook/budget/formula"
	"lossbook/web/quantity"
)

// read turns a formula as it is displayed back into text that can be evaluated:
// quantities in SI units, and no brackets but those that are drawn or that a
// fraction's line and a root's sign stand for.
func (r *mathReader) read(n *html.Node) string {
	var parts []string
	for c := range n.ChildNodes() {
		if c.Type == html.ElementNode {
			parts = append(parts, r.read(c))
		}
	}
	switch n.Data {
	case "mn", "mi", "mo":
		return words(n)
	case "mtext":
		return "[" + words(n) + "]"
	case "mfrac":
		return "((" + parts[0] + ")/(" + parts[1] + "))"
	case "msqrt":
		return "√(" + strings.Join(parts, "") + ")"
	case "msub":
		return parts[0] + "_" + strings.Trim(parts[1], "[]")
	case "msup":
		return parts[0] + "^(" + parts[1] + ")"
	}
	if len(parts) > 1 && strings.HasPrefix(parts[len(parts)-1], "[") && n.LastChild.Data == "mtext" {
		return r.quantity(strings.Join(parts[:len(parts)-1], ""), strings.Trim(parts[len(parts)-1], "[]"))
	}
	return strings.Join(parts, "")
}

type mathReader struct {
	t      *testing.T
	values int
}

var displayed = []quantity.Unit{"K", "K/W", "V", "A", "Ω", "F", "H", "C", "s", "Hz", "W", "J", "T", "m²", "m³", "V/K", "1/K", "A/s", "°C", "V·s", "1/K²"}

// quantity reads a number with its unit; a power of ten may stand between them.
func (r *mathReader) quantity(number, unit string) string {
	r.t.Helper()
	r.values++
	for _, base := range displayed {
		if v, err := quantity.Parse(strings.ReplaceAll(number, minus, "-")+" "+unit, base); err == nil {
			return strings.Replace(strconv.FormatFloat(v, 'f', -1, 64), "-", minus, 1)
		}
	}
	r.t.Errorf("%q %q is no quantity", number, unit)
	return number
}

func (r *mathReader) value(text string) float64 {
	r.t.Helper()
	e, err := formula.Parse(text)
	if err != nil {
		r.t.Errorf("%v", err)
		return math.NaN()
	}
	v, err := e.Value(nil)
	if err != nil {
		r.t.Errorf("%s: %v", text, err)
	}
	return v
}

// TestWorkingAsDisplayed opens the working of every figure of the samples' ledgers,
// evaluates each formula with the numbers as they are displayed, and wants the result
// that is displayed, and at the top the figure of the cell.
func TestWorkingAsDisplayed(t *testing.T) {
	s := newSite(t)
	r := &mathReader{t: t}
	opened, formulas, reasons := 0, 0, 0
	for i, name := range []string{"frost", "fish", "radar"} {
		s.want(201, "POST", "/api/v1/designs", text(t, designRequest{sample(t, name)}))
		sheet := s.open(200, fmt.Sprintf("/designs/%d", i+1))
		for j, a := range sheet.all(withClass("figure")) {
			if j%3 != i { // each row, at every third load
				continue
			}
			opened++
			p := s.open(200, attr(a, "hx-get"))
			for _, step := range p.all(withClass("step")) {
				if !r.step(attr(a, "hx-get"), step) {
					reasons++
				} else {
					formulas++
				}
			}
		}
	}
	t.Logf("%d workings, %d formulas, %d in words, %d values with units", opened, formulas, reasons, r.values)
	if opened < 200 || formulas < 600 || reasons < 300 || r.values < 3000 {
		t.Error("too little was read")
	}
}

// step reports whether there is a formula in numbers.
func (r *mathReader) step(where string, step *html.Node) bool {
	r.t.Helper()
	var lines []string
	for n := range step.Descendants() {
		if n.Data == "math" {
			lines = append(lines, r.read(n))
		}
	}
	result := r.value(afterEquals(lines[len(lines)-1]))
	if len(lines) < 3 {
		return false
	}
	got := r.value(afterEquals(lines[1]))
	if !(math.Abs(got-result) <= 0.01*math.Abs(result)) {
		r.t.Errorf("%s: %s\n%s is %.5g, displayed as %.5g", where, lines[0], lines[1], got, result)
	}
	return true
}

func afterEquals(line string) string {
	_, after, _ := strings.Cut(line, "=")
	return after
}
