package web

import (
	"bytes"
	"errors"
	"fmt"
	"io"
	"reflect"
	"strconv"

	"github.com/go-json-experiment/json/jsontext"

	"lossbook/budget"
)

const (
	maxDepth  = 16  // a design file nests 5 deep
	maxErrors = 100 // named at once; a body full of nonsense names no more
)

// syntaxError says why bytes are not the JSON that is read here.
type syntaxError struct{ words string }

func (e *syntaxError) Error() string { return e.words }

// decodeDesign reads a design file. Unknown names, wrong types and numbers that
// cannot be held come back all at once, each at its path; the error is for what
// is no JSON at all. Whether the design is complete is for budget.Validate.
func decodeDesign(raw []byte) (*budget.Design, []budget.FieldError, error) {
	d := new(budget.Design)
	wrong, err := decode(raw, d)
	return d, wrong, err
}

// decode reads one JSON value into what target points at, strictly: names are
// told apart by case, a name given twice, a second value and null are refused,
// and so is everything that target has no place for. It follows the types, so
// a field added to them is read without a change here.
func decode(raw []byte, target any) ([]budget.FieldError, error) {
	r := &jsonReader{dec: jsontext.NewDecoder(bytes.NewReader(raw))}
	if err := r.read("", reflect.ValueOf(target).Elem()); err != nil {
		return nil, syntaxOf(err)
	}
	switch _, err := r.dec.ReadToken(); {
	case err == nil:
		return nil, &syntaxError{"A second value follows the first; send one."}
	case !errors.Is(err, io.EOF):
		return nil, syntaxOf(err)
	}
	return r.wrong, nil
}

// syntaxOf words an error of the library, whose own words may change.
func syntaxOf(err error) error {
	var syntax *jsontext.SyntacticError
	var own *syntaxError
	switch {
	case errors.As(err, &own):
		return own
	case errors.Is(err, io.EOF):
		return &syntaxError{"The body is empty; send one JSON value."}
	case errors.Is(err, io.ErrUnexpectedEOF):
		return &syntaxError{"The JSON ends before it is complete."}
	case errors.Is(err, jsontext.ErrDuplicateName) && errors.As(err, &syntax):
		return &syntaxError{fmt.Sprintf("%q is given twice; keep one of the two.", pathOf(syntax.JSONPointer))}
	case errors.As(err, &syntax):
		return &syntaxError{fmt.Sprintf("This is not valid JSON at byte %d (%v).", syntax.ByteOffset, syntax.Err)}
	}
	return err
}

// pathOf writes a JSON pointer as the paths of field errors are written.
func pathOf(pointer jsontext.Pointer) string {
	path := ""
	for token := range pointer.Tokens() {
		if _, err := strconv.Atoi(token); err == nil {
			path += "[" + token + "]"
			continue
		}
		path = below(path, token)
	}
	return path
}

type jsonReader struct {
	dec   *jsontext.Decoder
	wrong []budget.FieldError
}

func (r *jsonReader) refuse(path, format string, args ...any) {
	if len(r.wrong) < maxErrors {
		r.wrong = append(r.wrong, budget.FieldError{Path: path, Message: fmt.Sprintf(format, args...)})
	}
}

// skip passes over a value that has no place, token by token, so that its depth
// is bounded too.
func (r *jsonReader) skip() error {
	for depth := r.dec.StackDepth(); ; {
		if _, err := r.token(); err != nil {
			return err
		}
		if r.dec.StackDepth() <= depth {
			return nil
		}
	}
}

func (r *jsonReader) token() (jsontext.Token, error) {
	token, err := r.dec.ReadToken()
	if err == nil && r.dec.StackDepth() > maxDepth {
		err = &syntaxError{fmt.Sprintf("The JSON nests more than %d deep; no request does.", maxDepth)}
	}
	return token, err
}

var numType = reflect.TypeFor[budget.Num]()

// read fills v with the next value. An error is one of syntax: what is merely
// wrong is noted, and reading goes on.
func (r *jsonReader) read(path string, v reflect.Value) error {
	kind := r.dec.PeekKind()
	switch {
	case kind == 'n':
		r.refuse(path, "is null; leave it out, or give it a value")
		return r.skip()
	case v.Type() == numType:
		v.FieldByName("Stated").SetBool(kind == '0')
		return r.scalar(path, '0', kind, v.FieldByName("V"))
	}
	switch v.Kind() {
	case reflect.Pointer:
		if wants(v.Type().Elem()) == kind {
			v.Set(reflect.New(v.Type().Elem()))
			return r.read(path, v.Elem())
		}
		return r.mismatch(path, wants(v.Type().Elem()), kind)
	case reflect.Struct:
		return r.object(path, kind, func(name string) error { return r.member(path, name, v) })
	case reflect.Map:
		v.Set(reflect.MakeMap(v.Type()))
		return r.object(path, kind, func(name string) error { return r.entry(below(path, name), name, v) })
	case reflect.Slice, reflect.Array:
		return r.array(path, kind, v)
	}
	return r.scalar(path, wants(v.Type()), kind, v)
}

// wants is the kind of JSON value that a type is read from.
func wants(t reflect.Type) jsontext.Kind {
	switch {
	case t == numType:
		return '0'
	case t.Kind() == reflect.String:
		return '"'
	case t.Kind() == reflect.Bool:
		return 't'
	case t.Kind() == reflect.Struct || t.Kind() == reflect.Map:
		return '{'
	case t.Kind() == reflect.Slice || t.Kind() == reflect.Array:
		return '['
	}
	return '0'
}

var kindWords = map[jsontext.Kind]string{
	'0': "a number", '"': "a text", '{': "an object", '[': "a list", 't': "true", 'f': "false",
}

func (r *jsonReader) mismatch(path string, want, got jsontext.Kind) error {
	if words, ok := kindWords[got]; ok { // else the syntax is broken, and skip says how
		wanted := kindWords[want]
		if want == 't' {
			wanted = "true or false"
		}
		r.refuse(path, "must be %s, not %s", wanted, words)
	}
	return r.skip()
}
