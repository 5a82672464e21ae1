package web

import (
	"encoding/json"
	"errors"
	"io"
	"net/http"
	"net/url"
	"strconv"

	"lossbook/assets"
	"lossbook/budget"
	"lossbook/store"
	"lossbook/web/view"
)

// startDesign makes a new design out of a specification, a sample or another
// design, and opens its sheet.
func (s *Server) startDesign(w http.ResponseWriter, r *http.Request) error {
	if err := parseForm(r); err != nil {
		return err
	}
	switch r.PostForm.Get("start") {
	case "specification":
		return s.startFromSpecification(w, r)
	case "sample":
		return s.startFromSample(w, r)
	case "copy":
		id, err := strconv.ParseInt(r.PostForm.Get("from"), 10, 64)
		if err != nil {
			return errNoPage
		}
		return s.copyOf(w, r, id)
	}
	return &Failure{Status: http.StatusUnprocessableEntity, Title: "Nothing to start from",
		Detail: "A design starts from a specification, a sample, a file or another design."}
}

// specification is what a converter has to do, as typed.
type specification struct {
	draft Draft
	wrong []budget.FieldError
}

// asked are the entries of a specification, in order.
var asked = []string{"name", "topology", "rectifier", "input.min", "input.nominal", "input.max", "output.voltage", "output.current", "frequency"}

// fields draws its form.
func (p specification) fields() []view.Field {
	b := formOf(p.draft, &budget.Design{}, p.wrong, true)
	var fields []view.Field
	for _, path := range asked {
		f, ok := budget.FieldAt(path)
		if !ok {
			continue
		}
		field := b.field(f, path)
		field.Source = nil
		fields = append(fields, field)
	}
	return append(fields, b.ripple())
}

// specificationOf reads the form; what a part needs is no concern of it yet.
func specificationOf(form url.Values) specification {
	p := specification{draft: Draft{}}
	for _, path := range append([]string{rippleRatio}, asked...) {
		if text := form.Get(path); !blank(text) {
			p.draft[path] = text
		}
	}
	design, wrong := p.draft.design()
	_, sizing := budget.Size(design, defaultRipple)
	_, ripple := p.draft.ripple()
	named := map[string]bool{}
	for _, e := range append(append(wrong, sizing...), ripple...) {
		if (isAsked(e.Path) || e.Path == rippleRatio) && !named[e.Path] {
			named[e.Path] = true
			p.wrong = append(p.wrong, e)
		}
	}
	return p
}

func isAsked(path string) bool {
	for _, a := range asked {
		if a == path {
			return true
		}
	}
	return false
}

func (s *Server) startFromSpecification(w http.ResponseWriter, r *http.Request) error {
	p := specificationOf(r.PostForm)
	if len(p.wrong) > 0 {
		return s.showList(w, r, http.StatusUnprocessableEntity, p, problemsOf(p.wrong, true))
	}
	return s.start(w, r, p.draft)
}

func (s *Server) startFromSample(w http.ResponseWriter, r *http.Request) error {
	for _, sample := range assets.Samples() {
		if sample.Name != r.PostForm.Get("from") {
			continue
		}
		d, wrong, err := decodeDesign(sample.JSON)
		if err != nil {
			return err
		}
		if len(wrong) > 0 {
			return invalid(wrong)
		}
		return s.start(w, r, draftOf(d))
	}
	return errNoPage
}

// start keeps a draft as a new design and opens its sheet.
func (s *Server) start(w http.ResponseWriter, r *http.Request, t Draft) error {
	draft, complete, err := t.stored()
	if err != nil {
		return err
	}
	d, err := s.store.Create(r.Context(), store.NewDesign{Name: nameOf(t["name"]), Draft: draft, Complete: complete})
	if err != nil {
		return err
	}
	return back(w, r, sheetAddress(d.ID))
}

// maxFile bounds a design file; the largest that a sheet can write is under it.
const maxFile = 2 << 20

// uploadDesign makes a design out of a file. Everything that is wrong with it
// is listed at once, with its path; a file whose parts are not all there yet
// is no error.
func (s *Server) uploadDesign(w http.ResponseWriter, r *http.Request) error {
	raw, err := uploaded(r)
	if err != nil {
		return err
	}
	d, wrong, err := decodeDesign(raw)
	var syntax *syntaxError
	if errors.As(err, &syntax) {
		return s.refuseFile(w, r, []view.Problem{{Message: syntax.words}})
	}
	if err != nil {
		return err
	}
	if wrong = fileErrors(d, wrong); len(wrong) > 0 {
		return s.refuseFile(w, r, problemsOf(wrong, false))
	}
	return s.start(w, r, draftOf(d))
}

// fileErrors adds to what could not be read what no design may have.
func fileErrors(d *budget.Design, wrong []budget.FieldError) []budget.FieldError {
	named := map[string]bool{}
	for _, e := range wrong {
		named[e.Path] = true
	}
	for _, e := range budget.Validate(d) {
		if (!e.Missing || e.Path == "format") && !named[e.Path] {
			wrong = append(wrong, e)
		}
	}
	return wrong
}

func (s *Server) refuseFile(w http.ResponseWriter, r *http.Request, problems []view.Problem) error {
	return s.showList(w, r, http.StatusUnprocessableEntity, specification{}, problems)
}

var errNoFile = &Failure{Status: http.StatusUnprocessableEntity, Title: "No file", Detail: "Choose a design file first."}

// uploaded reads the file of the form; a browser sends an empty part without a name
// when none was chosen.
func uploaded(r *http.Request) ([]byte, error) {
	form, err := r.MultipartReader()
	if err != nil {
		return nil, &Failure{Status: http.StatusUnsupportedMediaType, Title: "Not a file", Detail: "Choose a design file on the list of designs."}
	}
	for {
		part, err := form.NextPart()
		switch {
		case errors.Is(err, io.EOF):
			return nil, errNoFile
		case err != nil:
			return nil, unreadable(err)
		case part.FormName() != "file":
			continue
		case part.FileName() == "":
			return nil, errNoFile
		}
		raw, err := io.ReadAll(http.MaxBytesReader(nil, part, maxFile))
		if err != nil {
			return nil, unreadable(err)
		}
		return raw, nil
	}
}

// copyDesign makes a copy of a design and opens it.
func (s *Server) copyDesign(w http.ResponseWriter, r *http.Request) error {
	id, err := number(r, "id")
	if err != nil {
		return err
	}
	return s.copyOf(w, r, id)
}

// copyOf copies what is typed, complete or not, under a name that says so.
func (s *Server) copyOf(w http.ResponseWriter, r *http.Request, id int64) error {
	kept, err := s.store.Design(r.Context(), id)
	if err != nil {
		return err
	}
	c, err := renamed(kept, "Copy of "+nameOf(kept.Name))
	if err != nil {
		return err
	}
	d, err := s.store.Create(r.Context(), store.NewDesign{Name: c.Name, Draft: c.Draft, Complete: c.Complete})
	if err != nil {
		return err
	}
	return back(w, r, sheetAddress(d.ID))
}

// renamed is a design under another name, in its draft and in its last
// complete state.
func renamed(kept store.Design, name string) (store.Change, error) {
	c := store.Change{Name: name}
	draft, err := readDraft(kept.Draft)
	if err != nil {
		return c, err
	}
	draft["name"] = name
	if c.Draft, err = json.Marshal(draft); err != nil || len(kept.Complete) == 0 {
		return c, err
	}
	complete, err := readDesign(kept.Complete)
	if err != nil {
		return c, err
	}
	complete.Name = name
	c.Complete, err = json.Marshal(complete)
	return c, err
}
