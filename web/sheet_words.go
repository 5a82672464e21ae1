package web

import (
	"math"
	"strconv"
	"strings"
	"time"

	"lossbook/web/quantity"
)

// minus is the sign that lines up with figures; a hyphen is shorter.
const minus = "−"

// thin parts groups of digits: a comma or a point would read as a decimal sign
// somewhere.
const thin = "\u202f"

// sheetAddress is the address of a design's sheet.
func sheetAddress(id int64) string { return "/designs/" + strconv.FormatInt(id, 10) }

// nameOf is what a design is called; one without a name must still be reachable.
func nameOf(name string) string {
	if blank(name) {
		return "Unnamed design"
	}
	return name
}

func plural(n int, one, many string) string {
	if n == 1 {
		return "1 " + one
	}
	return strconv.Itoa(n) + " " + many
}

// moment is a time as a person reads it, where the program runs.
func moment(t time.Time) string { return t.Local().Format("2 Jan 2006, 15:04") }

// decimals writes a number with so many decimals, never as -0.
func decimals(v float64, n int) string {
	if math.IsNaN(v) || math.IsInf(v, 0) {
		return quantity.NoFigure
	}
	text := strconv.FormatFloat(v, 'f', n, 64)
	if strings.Trim(text, "-0.") == "" {
		return strings.TrimPrefix(text, "-")
	}
	return strings.Replace(grouped(text), "-", minus, 1)
}

// grouped parts the digits before the point by threes, from five digits on or
// where a table has both.
func grouped(text string) string {
	whole, fraction, dot := strings.Cut(text, ".")
	sign := ""
	if strings.HasPrefix(whole, "-") {
		sign, whole = "-", whole[1:]
	}
	for i := len(whole) - 3; i > 0; i -= 3 {
		whole = whole[:i] + thin + whole[i:]
	}
	if dot {
		whole += "." + fraction
	}
	return sign + whole
}

// quantityOf writes a value as it would be entered: up to so many digits, without
// zeros that say nothing. Number and unit stay on one line.
func quantityOf(v float64, unit quantity.Unit, digits int) string {
	return strings.ReplaceAll(quantity.Format(round(v, digits), unit), " ", "\u00a0")
}

// round keeps so many significant digits.
func round(v float64, digits int) float64 {
	short, err := strconv.ParseFloat(strconv.FormatFloat(v, 'g', digits, 64), 64)
	if err != nil {
		return v
	}
	return short
}

// percent writes a share of 0…1 with the digits an efficiency is told apart by.
func percent(share float64) string { return decimals(100*share, 2) }

// share writes a share of full load: "5", "12.5".
func loadShare(part float64) string {
	return strconv.FormatFloat(math.Round(part*1e4)/100, 'f', -1, 64)
}

// degrees writes a temperature without its unit.
func degrees(t float64) string { return decimals(t, 0) }

// signed writes a difference with its sign, also in front of a positive one.
func signed(v float64, show func(float64) string) string {
	text := show(math.Abs(v))
	switch {
	case !strings.ContainsAny(text, "123456789"): // it rounds to nothing
		return "±" + text
	case v < 0:
		return minus + text
	}
	return "+" + text
}
