package web

import (
	"reflect"
	"strconv"
	"strings"
	"sync"

	"github.com/go-json-experiment/json/jsontext"

	"lossbook/budget"
)

func (r *jsonReader) scalar(path string, want, kind jsontext.Kind, v reflect.Value) error {
	if kind != want && !(want == 't' && kind == 'f') {
		return r.mismatch(path, want, kind)
	}
	token, err := r.token()
	if err != nil {
		return err
	}
	text := token.String()
	switch v.Kind() {
	case reflect.String:
		v.SetString(text)
	case reflect.Bool:
		v.SetBool(token.Kind() == 't')
	case reflect.Float64:
		value, words := parseNumber(text)
		if words != "" {
			r.refuse(path, "%s", words)
		}
		v.SetFloat(value)
	case reflect.Int64:
		value, err := strconv.ParseInt(text, 10, 64)
		if err != nil {
			r.refuse(path, "must be a whole number")
		}
		v.SetInt(value)
	}
	return nil
}

// parseNumber reads the digits of a JSON number. One too large, or so small
// that it would become 0, is refused rather than replaced.
func parseNumber(text string) (v float64, words string) {
	v, err := strconv.ParseFloat(text, 64)
	if err != nil {
		return 0, "is larger than any number that can be kept"
	}
	digits, _, _ := strings.Cut(strings.ToLower(text), "e")
	if v == 0 && strings.ContainsAny(digits, "123456789") {
		return 0, "is smaller than any number that can be kept; write 0 if you mean none"
	}
	return v + 0, "" // -0 becomes 0
}

func (r *jsonReader) object(path string, kind jsontext.Kind, member func(name string) error) error {
	if kind != '{' {
		return r.mismatch(path, '{', kind)
	}
	if _, err := r.token(); err != nil {
		return err
	}
	for r.dec.PeekKind() != '}' {
		name, err := r.token()
		if err != nil {
			return err
		}
		if err := member(name.String()); err != nil {
			return err
		}
	}
	_, err := r.token()
	return err
}

func (r *jsonReader) member(path, name string, v reflect.Value) error {
	if index, ok := placesOf(v.Type())[name]; ok {
		return r.read(below(path, name), v.FieldByIndex(index))
	}
	if like := nameLike(v.Type(), name); like != "" {
		r.refuse(below(path, name), "is no field of this format; did you mean %q?", like)
	} else {
		r.refuse(below(path, name), "is no field of this format")
	}
	return r.skip()
}

func (r *jsonReader) entry(path, name string, v reflect.Value) error {
	value := reflect.New(v.Type().Elem()).Elem()
	if err := r.read(path, value); err != nil {
		return err
	}
	v.SetMapIndex(reflect.ValueOf(name), value)
	return nil
}

// array reads a list, or a row of fixed length.
func (r *jsonReader) array(path string, kind jsontext.Kind, v reflect.Value) error {
	if kind != '[' {
		return r.mismatch(path, '[', kind)
	}
	if _, err := r.token(); err != nil {
		return err
	}
	if v.Kind() == reflect.Slice { // an empty list is not an absent one
		v.Set(reflect.MakeSlice(v.Type(), 0, 0))
	}
	count := 0
	for ; r.dec.PeekKind() != ']'; count++ {
		if err := r.element(rowPath(path, count), count, v); err != nil {
			return err
		}
	}
	if most := atMost(v.Type()); v.Kind() == reflect.Array && count != most {
		r.refuse(path, "must be a row of %d numbers, not %d", most, count)
	} else if count > most {
		r.refuse(path, "holds %d entries; at most %d are taken", count, most)
	}
	_, err := r.token()
	return err
}

// element reads the next value of a list; beyond the list's bound it is only
// passed over.
func (r *jsonReader) element(path string, i int, v reflect.Value) error {
	if i >= atMost(v.Type()) {
		return r.skip()
	}
	if v.Kind() == reflect.Slice {
		v.Set(reflect.Append(v, reflect.Zero(v.Type().Elem())))
	}
	return r.read(path, v.Index(i))
}

// atMost bounds a list while it is read.
func atMost(t reflect.Type) int {
	switch {
	case t.Kind() == reflect.Array:
		return t.Len()
	case t == reflect.TypeFor[[]requestPoint]():
		return maxPoints
	}
	return budget.MaxRows
}

// places keeps, for each struct type read so far, where each JSON name lies.
var places sync.Map // reflect.Type → map[string][]int

// placesOf finds the fields of a struct by their JSON names, those of embedded
// structs included.
func placesOf(t reflect.Type) map[string][]int {
	if known, ok := places.Load(t); ok {
		return known.(map[string][]int)
	}
	found := map[string][]int{}
	for _, f := range reflect.VisibleFields(t) {
		if !f.Anonymous {
			found[jsonName(f)] = f.Index
		}
	}
	places.Store(t, found)
	return found
}

// nameLike finds the name that was meant by one in the wrong case.
func nameLike(t reflect.Type, name string) string {
	for known := range placesOf(t) {
		if strings.EqualFold(known, name) {
			return known
		}
	}
	return ""
}

func jsonName(f reflect.StructField) string {
	name, _, _ := strings.Cut(f.Tag.Get("json"), ",")
	return name
}
