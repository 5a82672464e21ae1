package web

import (
	"fmt"
	"reflect"
	"strconv"
	"strings"

	"github.com/go-json-experiment/json/jsontext"

	"lossbook/budget"
)

func (r *jsonReader) scalar(path string, want, kind jsontext.Kind, v reflect.Value) error {
	if kind != want {
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
	if field, ok := fieldNamed(v, name); ok {
		return r.read(below(path, name), field)
	}
	words := "is no field of this format"
	if like := fieldLike(v.Type(), name); like != "" {
		words += fmt.Sprintf("; did you mean %q?", like)
	}
	r.refuse(below(path, name), "%s", words)
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

// fieldNamed finds the field of a struct by its JSON name, embedded structs
// included.
func fieldNamed(v reflect.Value, name string) (reflect.Value, bool) {
	for _, f := range reflect.VisibleFields(v.Type()) {
		if !f.Anonymous && jsonName(f) == name {
			return v.FieldByIndex(f.Index), true
		}
	}
	return reflect.Value{}, false
}

// fieldLike finds the name that was meant by one in the wrong case.
func fieldLike(t reflect.Type, name string) string {
	for _, f := range reflect.VisibleFields(t) {
		if !f.Anonymous && strings.EqualFold(jsonName(f), name) {
			return jsonName(f)
		}
	}
	return ""
}

func jsonName(f reflect.StructField) string {
	name, _, _ := strings.Cut(f.Tag.Get("json"), ",")
	return name
}
