package web

import (
	"fmt"
	"strconv"
	"strings"

	"lossbook/budget"
	"lossbook/web/view"
)

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

// stateWords say in short why a point has no figures; its reason says it in full.
func stateWords(q Point) string {
	if q.State == budget.Runaway.String() {
		return "runs away"
	}
	return "out of reach"
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
		return "Ripple ratio wanted"
	}
	if name, ok := profileLabel(path); ok {
		return name
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
