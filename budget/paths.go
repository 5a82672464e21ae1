package budget

import (
	"reflect"
	"strconv"
	"strings"

	"lossbook/budget/stage"
)

var fieldIndex = indexFields(parts)

// placed writes the full path of every field beside its key.
func placed(ps []Part) []Part {
	for i := range ps {
		for j := range ps[i].Fields {
			ps[i].Fields[j].Path = join(ps[i].Path, ps[i].Fields[j].Key)
		}
	}
	return ps
}

func indexFields(ps []Part) map[string]Field {
	index := map[string]Field{}
	for _, p := range ps {
		for _, f := range p.Fields {
			index[f.Path] = f
		}
	}
	return index
}

func join(part, key string) string {
	if part == "" {
		return key
	}
	return part + "." + key
}

// withoutIndices takes "[3]" out of a path.
func withoutIndices(path string) string {
	for {
		open := strings.IndexByte(path, '[')
		if open < 0 {
			return path
		}
		end := strings.IndexByte(path[open:], ']')
		if end < 0 {
			return path
		}
		path = path[:open] + path[open+end+1:]
	}
}

func topologyOptions() []Option {
	var options []Option
	for _, t := range stage.Topologies() {
		options = append(options, Option{t.Name, t.Title})
	}
	return options
}

// Slot returns the place in the design that a JSON path names: a *Num, *string
// or *Curve. With make it creates the parts on the way and rows of a list up to
// the index named; without it a path through an absent part has no slot.
func (d *Design) Slot(path string, create bool) (any, bool) {
	v := reflect.ValueOf(d).Elem()
	for step := range strings.SplitSeq(path, ".") {
		name, index, indexed := cutIndex(step)
		v = member(v, name)
		if v.IsValid() && indexed {
			v = row(v, index, create)
		}
		if v.IsValid() && v.Kind() == reflect.Pointer {
			v = pointee(v, create)
		}
		if !v.IsValid() {
			return nil, false
		}
	}
	return v.Addr().Interface(), true
}

func cutIndex(step string) (name string, index int, indexed bool) {
	name, rest, ok := strings.Cut(step, "[")
	if !ok {
		return step, 0, false
	}
	digits, _, closed := strings.Cut(rest, "]")
	index, err := strconv.Atoi(digits)
	if err != nil || !closed || index < 0 || index >= MaxRows {
		return step, 0, false
	}
	return name, index, true
}

// MaxRows bounds the rows of a list or of a curve.
const MaxRows = 200

func row(v reflect.Value, index int, create bool) reflect.Value {
	if v.Kind() != reflect.Slice {
		return reflect.Value{}
	}
	for create && v.Len() <= index {
		v.Set(reflect.Append(v, reflect.Zero(v.Type().Elem())))
	}
	if v.Len() <= index {
		return reflect.Value{}
	}
	return v.Index(index)
}

func pointee(v reflect.Value, create bool) reflect.Value {
	if v.IsNil() {
		if !create {
			return reflect.Value{}
		}
		v.Set(reflect.New(v.Type().Elem()))
	}
	return v.Elem()
}

// member finds the struct field of a JSON name, embedded structs included.
func member(v reflect.Value, name string) reflect.Value {
	if index, ok := members[v.Type()][name]; ok {
		return v.FieldByIndex(index)
	}
	return reflect.Value{}
}

// members tells where in the structs of a design each JSON name lies: a sheet asks
// thousands of times for one answer.
var members = map[reflect.Type]map[string][]int{}

func init() { indexMembers(reflect.TypeFor[Design]()) }

func indexMembers(t reflect.Type) {
	for t.Kind() == reflect.Pointer || t.Kind() == reflect.Slice {
		t = t.Elem()
	}
	if t.Kind() != reflect.Struct || members[t] != nil {
		return
	}
	members[t] = map[string][]int{}
	for _, field := range reflect.VisibleFields(t) {
		if !field.Anonymous {
			members[t][jsonName(field)] = field.Index
			indexMembers(field.Type)
		}
	}
}

func jsonName(field reflect.StructField) string {
	name, _, _ := strings.Cut(field.Tag.Get("json"), ",")
	return name
}
