package web

import (
	"errors"
	"fmt"
	"maps"
	"mime"
	"net/http"
	"net/url"
	"regexp"
	"strconv"
	"strings"
	"unicode/utf8"

	"lossbook/budget"
)

// maxEntry bounds one entry, in characters: a note may be a page long, no value is.
const maxEntry = 4000

// edit is what a sheet's form sends.
type edit struct {
	values    url.Values
	version   int64
	structure string // of the form that was sent
	do        string // the button: rows to add or remove
	note      string // for the next revision
	sight     sight
}

// readEdit reads the form of a sheet.
func readEdit(r *http.Request) (edit, error) {
	if err := parseForm(r); err != nil {
		return edit{}, err
	}
	v := r.PostForm
	e := edit{values: v, structure: v.Get("structure"), do: v.Get("do"), note: v.Get("note.revision"), sight: sightOf(v, "view.")}
	e.sight.whole = !live(r)
	var err error
	e.version, err = versionOf(v["version"])
	return e, err
}

// versionOf returns the highest version that a form carries: the button that
// overwrites brings the current one, beside the older one of the form. A browser
// sends them in the order of the page, whichever was pressed.
func versionOf(texts []string) (int64, error) {
	if len(texts) == 0 {
		return 0, &Failure{Status: http.StatusBadRequest, Title: "Incomplete form", Detail: "The form came without its version. Load the sheet again."}
	}
	var highest int64
	for _, text := range texts {
		version, err := strconv.ParseInt(text, 10, 64)
		if err != nil {
			return 0, &Failure{Status: http.StatusBadRequest, Title: "Unreadable form", Detail: "Its version is no number. Load the sheet again."}
		}
		highest = max(highest, version)
	}
	return highest, nil
}

// parseForm reads a form of the usual kind, and says clearly what else came.
func parseForm(r *http.Request) error {
	kind, _, err := mime.ParseMediaType(r.Header.Get("Content-Type"))
	if err != nil || kind != "application/x-www-form-urlencoded" {
		return &Failure{Status: http.StatusUnsupportedMediaType, Title: "Not a form", Detail: "This address takes the form of a page; scripts use /api/v1."}
	}
	if err := r.ParseForm(); err != nil {
		var tooLarge *http.MaxBytesError
		if errors.As(err, &tooLarge) {
			return err
		}
		return &Failure{Status: http.StatusBadRequest, Title: "Unreadable form", Detail: "The form did not arrive whole. Send it again.", cause: err}
	}
	return nil
}

// apply returns the draft with what was typed. Entries that the form does not
// show, the other kind of rectifier's for one, stay as they are.
func (e edit) apply(t Draft) (Draft, error) {
	next := maps.Clone(t)
	for name, texts := range e.values {
		if !isEntry(name) {
			continue
		}
		text := strings.ToValidUTF8(texts[len(texts)-1], "\uFFFD") // as it is kept
		if n := utf8.RuneCountInString(text); n > maxEntry {
			return nil, invalid([]budget.FieldError{{Path: name, Message: fmt.Sprintf("has %d characters; at most %d are kept", n, maxEntry)}})
		}
		next.set(name, text)
	}
	next.act(e.do)
	return next, nil
}

// set keeps an entry as typed. A blank one is no entry, but in a row it holds
// the row's place.
func (t Draft) set(name, text string) {
	if blank(text) && (!strings.Contains(name, "[") || strings.HasPrefix(name, sources)) {
		delete(t, name)
		return
	}
	t[name] = text
}

var indices = regexp.MustCompile(`\[\d{1,3}\]`)

// isEntry reports whether a form may set the name: a field of the table with as
// many row numbers as it has, or the source of one.
func isEntry(name string) bool {
	if field, ok := strings.CutPrefix(name, sources); ok {
		f, known := budget.FieldAt(field)
		return known && len(indices.FindAllString(field, -1)) == rowsAround(f) && plain(field)
	}
	f, known := budget.FieldAt(name)
	want := rowsAround(f)
	if f.Kind == budget.Rows {
		want += 2
	}
	return name == rippleRatio || isProfileEntry(name) || known && len(indices.FindAllString(name, -1)) == want && plain(name) && withinRows(name)
}

// plain refuses brackets that are no row numbers.
func plain(name string) bool { return !strings.ContainsAny(indices.ReplaceAllString(name, ""), "[]") }

// withinRows refuses rows beyond those a design holds.
func withinRows(name string) bool {
	for _, index := range indices.FindAllString(name, -1) {
		if i, err := strconv.Atoi(index[1 : len(index)-1]); err != nil || i >= budget.MaxRows {
			return false
		}
	}
	return true
}

// rowsAround is 1 for a field of a list, 0 for another.
func rowsAround(f budget.Field) int {
	for _, p := range budget.Parts() {
		if p.List && f.Path == below(p.Path, f.Key) {
			return 1
		}
	}
	return 0
}
