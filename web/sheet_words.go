package web

import (
	"fmt"
	"math"
	"strconv"
	"strings"
	"time"

	"lossbook/budget"
	"lossbook/web/quantity"
	"lossbook/web/view"
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

// symbolOf parts a symbol of the field table into letter and subscript.
func symbolOf(symbol string) view.Symbol {
	base, sub, _ := strings.Cut(symbol, "_")
	return view.Symbol{Base: base, Sub: sub}
}

// partWords names the parts a loss or a finding can belong to.
var partWords = map[string]string{
	"switch": "switch", "rectifier": "rectifier", "inductor": "inductor", "input_capacitor": "input capacitor",
	"output_capacitor": "output capacitor", "snubber": "snubber", "drive": "gate drive", "controller": "controller", "layout": "copper",
}

// lossWords names the losses within their part.
var lossWords = map[string]string{
	"turn_on": "turn-on", "turn_off": "turn-off", "output_charge": "output charge", "dead_time": "dead time",
	"winding_dc": "winding, dc", "winding_ac": "winding, ac", "gate": "gate charge", "regulator": "gate regulator",
	"supply": "controller supply", "fixed": "controller, fixed", "rc": "snubber",
}

// itemWords is how a row of the ledger reads under its part.
func itemWords(it Item) string {
	switch {
	case it.Part == "input_capacitor":
		return "input ESR"
	case it.Part == "output_capacitor":
		return "output ESR"
	case it.Part == "layout":
		return it.Kind
	}
	if words, ok := lossWords[it.Kind]; ok {
		return words
	}
	return strings.ReplaceAll(it.Kind, "_", " ")
}

// problemsOf words field errors for a summary. With links each leads to its
// entry; without, the path is said, as in a file there is nothing to lead to.
func problemsOf(errs []budget.FieldError, links bool) []view.Problem {
	problems := make([]view.Problem, len(errs))
	for i, e := range errs {
		problems[i] = view.Problem{Label: e.Path, Message: e.Message}
		if links {
			problems[i].Label, problems[i].Href = labelOf(e.Path), "#f-"+e.Path
		}
	}
	return problems
}

// missingParts groups what is missing by part. Only what is not plainly required
// needs a word why it is asked for.
func missingParts(errs []budget.FieldError) []view.MissingPart {
	var parts []view.MissingPart
	for _, e := range errs {
		title, label := partAndName(e.Path)
		if len(parts) == 0 || parts[len(parts)-1].Title != title {
			parts = append(parts, view.MissingPart{Title: title})
		}
		entry := view.Problem{Label: label, Href: "#f-" + e.Path}
		if f, _ := budget.FieldAt(e.Path); !f.Required {
			entry.Message = e.Message
		}
		last := &parts[len(parts)-1]
		last.Entries = append(last.Entries, entry)
	}
	return parts
}

// labelOf names the entry at a path as its sheet does, with its part where the
// name alone would not tell.
func labelOf(path string) string {
	if path == rippleRatio {
		return "Ripple ratio"
	}
	if field, ok := strings.CutPrefix(path, sources); ok {
		return "Source of " + labelOf(field)
	}
	title, name := partAndName(path)
	if title == stageTitle {
		return name
	}
	return title + ": " + name
}

// stageTitle heads the design's own fields.
var stageTitle = budget.Parts()[0].Name

// partAndName names the part of the entry at a path, and the entry within it.
func partAndName(path string) (title, name string) {
	f, ok := budget.FieldAt(path)
	if !ok {
		return stageTitle, path
	}
	for _, p := range budget.Parts() {
		if p.Path != "" && f.Path == below(p.Path, f.Key) {
			return p.Name, f.Name + rowNumber(path)
		}
	}
	return stageTitle, f.Name
}

// rowNumber says which row of a list or curve a path is in, counted from 1.
func rowNumber(path string) string {
	_, rest, ok := strings.Cut(path, "[")
	if !ok {
		return ""
	}
	digits, _, _ := strings.Cut(rest, "]")
	i, err := strconv.Atoi(digits)
	if err != nil {
		return ""
	}
	return fmt.Sprintf(", row %d", i+1)
}
