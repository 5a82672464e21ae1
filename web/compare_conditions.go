package web

import (
	"strings"

	"lossbook/budget"
	"lossbook/web/quantity"
)

// condition is one of the things that must be the same for losses to be compared
// as such, with what each revision has.
type condition struct {
	name   string
	paths  []string // the entries that say it; none of the model
	texts  []string
	differ bool
	point  bool // a point can be computed under another's
}

// conditionsAmong lists what the revisions were saved under.
func conditionsAmong(sides []side) []condition {
	list := []condition{
		{name: "topology", paths: []string{"topology"}},
		{name: "input range", paths: []string{"input.min", "input.nominal", "input.max"}, point: true},
		{name: "output voltage", paths: []string{"output.voltage"}},
		{name: "full load", paths: []string{"output.current"}, point: true},
		{name: "ambient", paths: []string{"ambient"}, point: true},
		{name: "switching frequency", paths: []string{"frequency"}},
		{name: "model version"},
	}
	for n := range list {
		c := &list[n]
		for _, s := range sides {
			c.texts = append(c.texts, c.of(s))
		}
		c.differ = !sheetEntry{texts: c.texts}.alike()
	}
	return list
}

func (c condition) of(s side) string {
	if len(c.paths) == 0 {
		return s.model
	}
	texts := make([]string, len(c.paths))
	for i, path := range c.paths {
		f, _ := budget.FieldAt(path)
		texts[i] = worded(f, s.entries[path])
		if blank(texts[i]) && f.Kind == budget.Number { // an assumed one is as good as a given one here
			texts[i] = quantity.Format(f.Default, quantity.Unit(f.Unit))
		}
	}
	return strings.Join(texts, " / ")
}

// ofConditions reports whether an entry is told among the conditions, or names
// the design, which every column does.
func ofConditions(path string) bool {
	switch path {
	case "name", "topology", "frequency", "input.min", "input.nominal", "input.max", "output.voltage", "output.current", "ambient":
		return true
	}
	return false
}

// saidFinding is one thing said of some of the revisions; nil where it is not said.
type saidFinding struct {
	Finding
	by      []*Finding
	unknown []bool // of a side without figures nothing can be said
}

// findingsAmong lists what is said of the sides. A finding is the same one if it
// comes from the same rule about the same part; its level and figures may differ.
func findingsAmong(sides []side) []saidFinding {
	type key struct {
		part, rule string
		turn       int
	}
	var list []saidFinding
	known := map[key]int{}
	unknown := make([]bool, len(sides))
	for i := range sides {
		unknown[i] = sides[i].reason != ""
		turn := map[key]int{}
		for n := range sides[i].findings {
			f := &sides[i].findings[n]
			k := key{part: f.Part, rule: f.Rule}
			turn[k]++
			k.turn = turn[key{part: f.Part, rule: f.Rule}]
			at, ok := known[k]
			if !ok {
				at = len(list)
				known[k] = at
				list = append(list, saidFinding{*f, make([]*Finding, len(sides)), unknown})
			}
			list[at].by[i] = f
		}
	}
	return list
}

// change says what became of the finding from one side to another: "gained",
// "lost", its levels if they differ, or "".
func (s saidFinding) change(base, i int) string {
	was, is := s.by[base], s.by[i]
	switch {
	case was == nil && is == nil, s.unknown[base], s.unknown[i]:
		return ""
	case was == nil:
		return "gained"
	case is == nil:
		return "lost"
	case was.Level != is.Level:
		return "now " + is.Level
	}
	return ""
}

// common reports whether all sides that can have it do, at one level.
func (s saidFinding) common() bool {
	for i := range s.by {
		for j := range i {
			if s.change(i, j) != "" {
				return false
			}
		}
	}
	return true
}
