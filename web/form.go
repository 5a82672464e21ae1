package web

import (
	"slices"
	"strings"
	"unicode"

	"lossbook/budget"
	"lossbook/web/quantity"
	"lossbook/web/view"
)

// form draws the entries of a draft, from the one table of fields: a field
// added there appears here.
type form struct {
	draft Draft
	now   Draft             // the same as the program understood it
	was   Draft             // the last revision's; nil if there is none
	wrong map[string]string // what is wrong, by path
	send  string            // where its buttons send it
}

// formOf makes ready to draw a draft. An entry that is merely missing is an
// error only where something was asked for that can't be done without it.
func formOf(t Draft, design *budget.Design, errs []budget.FieldError, demanded bool) form {
	b := form{draft: t, now: draftOf(design), wrong: map[string]string{}}
	for _, e := range errs {
		if !e.Missing || demanded {
			b.wrong[e.Path] = e.Message
		}
	}
	return b
}

// usual are the entries that stand in sight although a budget does without
// them: those that most data sheets give and that move most budgets.
var usual = []string{
	"part", "ambient", "theta_ja", "rds_on_hot_ratio", "r_gate", "q_oss", "q_oss_at", "r_d", "i_leak", "i_leak_voltage",
	"i_leak_temperature", "i_sat", "sat_drop", "esr", "r_gate_on", "r_gate_off", "fed_from", "current",
}

// sections draws every part in use, in the order of a schematic.
func (b form) sections() []view.Section {
	var list []view.Section
	for _, p := range budget.Parts() {
		switch {
		case p.Path == "":
			list = append(list, b.stage(p)...)
		case b.unused(p.Path):
		case strings.Contains(p.Path, "."): // a part of the part before it
			last := &list[len(list)-1]
			last.More = append(last.More, b.within(p))
		default:
			list = append(list, b.section(p))
		}
	}
	return list
}

// unused says that the rectifier's kind has no need of the part; what was typed
// for it is kept.
func (b form) unused(part string) bool { return unused(b.draft["rectifier"], part) }

func unused(kind, part string) bool {
	return part == "diode" && kind != "diode" || part == "sync_switch" && kind != "synchronous"
}

// stage draws the design's own fields: what it is called, and what it has to do.
func (b form) stage(p budget.Part) []view.Section {
	about := view.Section{ID: "part-design", Title: "Design"}
	stage := view.Section{ID: "part-stage", Title: p.Name}
	var rare []view.Field
	for _, f := range p.Fields {
		field := b.field(f, f.Path)
		switch {
		case f.Kind == budget.Text:
			about.Fields = append(about.Fields, field)
		case f.Key == "light_load" && b.draft["rectifier"] != "synchronous":
		case f.Key == "light_load", f.Required, slices.Contains(usual, f.Key):
			stage.Fields = append(stage.Fields, field)
		default:
			rare = append(rare, field)
		}
	}
	stage.More = folded("part-stage", append(rare, b.ripple()))
	return []view.Section{about, stage}
}

// ripple is the one entry that is no part of a design: what an inductor is to
// be chosen by.
func (b form) ripple() view.Field {
	field := b.field(rippleField(), rippleRatio)
	field.Source = nil
	return field
}

func rippleField() budget.Field {
	return budget.Field{Path: rippleRatio, Key: "ripple_ratio", Symbol: "r", Name: "Ripple ratio wanted",
		Where: "peak to peak over mean inductor current, at full load and nominal input", Default: defaultRipple}
}

func (b form) section(p budget.Part) view.Section {
	s := view.Section{ID: "part-" + p.Path, Title: p.Name, Class: classOf(p.Of)}
	if p.List {
		s.List = b.list(p)
		return s
	}
	var rare []view.Field
	for _, f := range p.Fields {
		if f.Required || slices.Contains(usual, f.Key) {
			s.Fields = append(s.Fields, b.field(f, f.Path))
		} else {
			rare = append(rare, b.field(f, f.Path))
		}
	}
	s.More = folded(s.ID, rare)
	return s
}

// within draws a group of the part before it: the winding and core of an
// inductor. It opens when something is entered.
func (b form) within(p budget.Part) view.Section {
	s := view.Section{ID: "part-" + p.Path, Title: p.Name, Class: classOf(p.Of)}
	for _, f := range p.Fields {
		s.Fields = append(s.Fields, b.field(f, f.Path))
	}
	s.Open = anyEntered(s.Fields)
	return s
}

// folded hides rarely needed entries until one of them is filled.
func folded(id string, fields []view.Field) []view.Section {
	if len(fields) == 0 {
		return nil
	}
	return []view.Section{{ID: id + "-more", Title: "more entries", Fields: fields, Open: anyEntered(fields)}}
}

func anyEntered(fields []view.Field) bool {
	return slices.ContainsFunc(fields, func(f view.Field) bool {
		chosen := slices.ContainsFunc(f.Options, func(o view.Option) bool { return o.Chosen && o.Value != "" })
		return f.Value != "" || f.Error != "" || chosen || f.Curve != nil && len(f.Curve.Rows) > 0
	})
}

// field draws one entry at a path.
func (b form) field(f budget.Field, path string) view.Field {
	text := b.draft[path]
	field := view.Field{
		Name: path, Label: f.Name, Symbol: symbolOf(f.Symbol), Value: text, Where: f.Where, Required: f.Required,
		Error: b.wrong[path], Source: &view.Source{Name: sources + path, Value: b.draft[sources+path]},
	}
	switch f.Kind {
	case budget.Number:
		field.Numeric = true
		field.Unit, field.Read, field.Assumed = unitBeside(f, text, b.now[path]), understood(f, text, b.now[path]), assumed(f)
		if doubt := doubtful(f, text); doubt != "" && field.Error == "" {
			field.Read = strings.TrimPrefix(field.Read+"; "+doubt, "; ")
		}
	case budget.Choice:
		field.Value, field.Options, field.Source = "", choices(f, text), nil
	case budget.Rows:
		field.Value, field.Curve = "", b.curve(f, path)
	case budget.Text:
		field.Source, field.Wide = nil, true
	}
	field.Was = b.before(f, path)
	return field
}

// before says what the last revision has at the path, if it is something else.
func (b form) before(f budget.Field, path string) string {
	if b.was == nil || b.wrong[path] != "" || f.Kind == budget.Rows || b.was[path] == b.now[path] {
		return ""
	}
	if was := b.was[path]; was != "" {
		return "was " + worded(f, was)
	}
	return "was not given"
}

// worded is the value of an entry as a person reads it.
func worded(f budget.Field, text string) string {
	if f.Kind == budget.Choice {
		return optionLabel(f.Path, text)
	}
	return text
}

// unitBeside is the unit behind an input, unless the text says it.
func unitBeside(f budget.Field, text, read string) string {
	_, prefixed, _ := strings.Cut(read, " ")
	text = strings.TrimSpace(text)
	if f.Unit == "" || text != "" && (strings.HasSuffix(text, f.Unit) || prefixed != "" && strings.HasSuffix(text, prefixed)) {
		return ""
	}
	return f.Unit
}

// understood says how a number was read, unless the text says just that.
func understood(f budget.Field, text, read string) string {
	if blank(text) || read == "" || bare(text, f.Unit) == bare(read, f.Unit) {
		return ""
	}
	return "= " + read
}

// bare takes blanks and the unit away, so that "11 m" and "11 mΩ" are equal.
func bare(text, unit string) string {
	text = strings.Map(func(r rune) rune {
		if unicode.IsSpace(r) {
			return -1
		}
		return r
	}, text)
	return strings.TrimSuffix(text, unit)
}

func assumed(f budget.Field) string {
	if f.Required || f.Default == 0 {
		return ""
	}
	number, _ := quantity.Split(f.Default, quantity.Unit(f.Unit))
	return number + " assumed"
}

// choices offers the values of a field. The default of an optional one stands
// for an absent entry, so that looking at a sheet states nothing.
func choices(f budget.Field, chosen string) []view.Option {
	var options []view.Option
	if f.Required && !slices.ContainsFunc(f.Options, func(o budget.Option) bool { return o.Value == chosen }) {
		options = append(options, view.Option{Value: chosen, Label: "choose …", Chosen: true})
	}
	for i, o := range f.Options {
		option := view.Option{Value: o.Value, Label: o.Label, Chosen: o.Value == chosen}
		if i == 0 && !f.Required && chosen != o.Value {
			option.Value, option.Chosen = "", blank(chosen)
		}
		options = append(options, option)
	}
	return options
}

// classOf is the colour of the part of the loss that a part belongs to.
func classOf(of string) string {
	for _, g := range groups {
		if slices.Contains(g.parts, of) {
			return g.class
		}
	}
	return ""
}
