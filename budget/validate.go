package budget

import (
	"fmt"
	"math"
	"slices"
	"strings"
)

// Validate returns everything that is wrong with the design, at once and in the
// order of the table of fields. Missing entries are marked as such, so that an
// unfinished design can be told from a wrong one. The entries of the rectifier that
// is not in use are kept and not judged.
func Validate(d *Design) []FieldError {
	v := &verdict{design: d}
	v.format()
	for _, part := range parts {
		if part.Needed || d.uses(part.Path) {
			v.part(part)
		}
	}
	for _, rule := range rules {
		rule(v)
	}
	slices.SortStableFunc(v.errors, func(a, b FieldError) int { return place(a.Path) - place(b.Path) })
	return v.errors
}

// place is the rank of a path in the table; what stands in no row comes first.
func place(path string) int {
	path = withoutIndices(path)
	for i, row := range rowOrder {
		if row == path {
			return i + 1
		}
	}
	return 0
}

var rowOrder = func() (order []string) {
	for _, p := range parts {
		for _, f := range p.Fields {
			order = append(order, f.Path)
		}
	}
	return order
}()

// verdict gathers the errors of a design.
type verdict struct {
	design *Design
	errors []FieldError
}

func (v *verdict) wrong(path, format string, args ...any) {
	v.errors = append(v.errors, FieldError{Path: path, Message: fmt.Sprintf(format, args...)})
}

func (v *verdict) missing(path, format string, args ...any) {
	v.errors = append(v.errors, FieldError{Path: path, Message: fmt.Sprintf(format, args...), Missing: true})
}

// needs asks for a number that must be there since another one is.
func (v *verdict) needs(path string, n Num, why string) {
	if !n.Stated {
		v.missing(path, "is needed: %s", why)
	} else if n.V == 0 {
		v.wrong(path, "must be above 0: %s", why)
	}
}

func (v *verdict) format() {
	switch v.design.Format {
	case Format:
	case "":
		v.missing("format", "must be %q", Format)
	default:
		v.wrong("format", "must be %q; this file says %q", Format, v.design.Format)
	}
}

// part judges the fields of one part, each by itself.
func (v *verdict) part(p Part) {
	switch {
	case p.List && len(v.design.Series) > MaxRows:
		v.wrong(p.Path, "must have %d rows at most", MaxRows)
	case p.List:
		for i := range v.design.Series {
			v.fields(p, fmt.Sprintf("%s[%d].", p.Path, i))
		}
	case p.Path == "":
		v.fields(p, "")
	default:
		v.fields(p, p.Path+".")
	}
}

// uses tells whether a part that is not always needed is in the design or must be.
func (d *Design) uses(path string) bool {
	switch path {
	case "":
		return true
	case "diode":
		return d.Rectifier == "diode"
	case "sync_switch":
		return d.Rectifier == "synchronous"
	case "series_resistances":
		return len(d.Series) > 0
	case "inductor.winding":
		return d.Inductor != nil && d.Inductor.Winding != nil
	case "inductor.core":
		return d.Inductor != nil && d.Inductor.Core != nil
	case "input_capacitor":
		return d.InputCapacitor != nil
	case "output_capacitor":
		return d.OutputCapacitor != nil
	case "snubber":
		return d.Snubber != nil
	case "controller":
		return d.Controller != nil
	}
	return false
}

func (v *verdict) fields(p Part, prefix string) {
	for _, f := range p.Fields {
		path := prefix + f.Key
		slot, there := v.design.Slot(path, false)
		if !there {
			if f.Required {
				v.missing(path, "is needed")
			}
			continue
		}
		switch value := slot.(type) {
		case *Num:
			v.number(f, path, *value)
		case *string:
			v.text(f, path, *value)
		case *Curve:
			v.curve(f, path, *value)
		}
	}
}

// Largest is the largest magnitude a number may have: far above what any converter
// holds, and small enough that no product of several runs out of numbers.
const Largest = 1e15

// Smallest is the smallest magnitude of a number that isn't 0, for the same reason.
const Smallest = 1e-30

func (v *verdict) number(f Field, path string, n Num) {
	switch {
	case !n.Stated && f.Required:
		v.missing(path, "is needed")
	case !n.Stated:
	case !finite(n.V):
		v.wrong(path, "must be an ordinary number")
	case n.V > Largest || n.V < -Largest:
		v.wrong(path, "is larger than any converter holds; must be below %g", Largest)
	case f.Path == "output.voltage" && n.V < 0:
		v.wrong(path, "must be above 0 V: enter the magnitude, also of a negative rail")
	case f.Domain == Positive && n.V <= 0:
		v.wrong(path, "must be above 0%s", unitAfter(f.Unit))
	case f.Domain == NotNegative && n.V < 0:
		v.wrong(path, "must be 0%s or more", unitAfter(f.Unit))
	case f.Domain == NotPositive && n.V > 0:
		v.wrong(path, "must be 0%s or below", unitAfter(f.Unit))
	case n.V != 0 && math.Abs(n.V) < Smallest:
		v.wrong(path, "is smaller than any converter holds; must be %g or more", Smallest)
	case f.Below != 0 && n.V > f.Below:
		v.wrong(path, "must be %g at most", f.Below)
	}
}

func unitAfter(unit string) string {
	if unit == "" {
		return ""
	}
	return " " + unit
}

func (v *verdict) text(f Field, path, value string) {
	switch {
	case strings.TrimSpace(value) == "" && f.Required:
		v.missing(path, "is needed")
	case value == "" || f.Kind != Choice:
	case !slices.ContainsFunc(f.Options, func(o Option) bool { return o.Value == value }):
		v.wrong(path, "must be %s; %q is none of these", alternatives(f.Options), value)
	}
}

func alternatives(options []Option) string {
	var words []string
	for _, o := range options {
		words = append(words, fmt.Sprintf("%q", o.Value))
	}
	last := len(words) - 1
	return strings.Join(words[:last], ", ") + " or " + words[last]
}

func (v *verdict) curve(f Field, path string, rows Curve) {
	if len(rows) > MaxRows {
		v.wrong(path, "must have %d rows at most", MaxRows)
		return
	}
	for i, row := range rows {
		x, y := fmt.Sprintf("%s[%d][0]", path, i), fmt.Sprintf("%s[%d][1]", path, i)
		switch {
		case !finite(row[0]):
			v.wrong(x, "must be an ordinary number")
		case math.Abs(row[0]) > Largest:
			v.wrong(x, "is larger than any converter holds; must be below %g", Largest)
		case f.XUnit == "Hz" && row[0] <= 0:
			v.wrong(x, "must be above 0 Hz")
		case f.XUnit == "A" && row[0] < 0:
			v.wrong(x, "must be 0 A or more: the curve holds for both directions")
		case i > 0 && !(row[0] > rows[i-1][0]):
			v.wrong(x, "must be above the row before it: %s has to increase", f.XName)
		}
		if !finite(row[1]) || row[1] < Smallest || row[1] > Largest {
			v.wrong(y, "must be above 0%s", unitAfter(f.Unit))
		}
	}
}

// ValidatePoints returns what is wrong with the operating points asked for, with
// paths such as "points[3].vin".
func ValidatePoints(points []Point) []FieldError {
	v := &verdict{}
	for i, p := range points {
		at := func(name string) string { return fmt.Sprintf("points[%d].%s", i, name) }
		if !finite(p.Vin) || p.Vin < Smallest || p.Vin > Largest {
			v.wrong(at("vin"), "must be above 0 V")
		}
		if !finite(p.Iout) || p.Iout < 0 || p.Iout > Largest {
			v.wrong(at("iout"), "must be 0 A or more")
		}
		if !finite(p.Ambient) || p.Ambient < absoluteZero || p.Ambient > beyondAll {
			v.wrong(at("ambient"), "must be %g °C or more", absoluteZero)
		}
	}
	return v.errors
}
