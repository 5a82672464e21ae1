package web

import (
	"bytes"
	"encoding/json"
	"fmt"
	"mime"
	"net/http"
	"strings"

	"github.com/go-chi/chi/v5"

	"lossbook/budget"
	"lossbook/store"
)

// exportRoutes are the machine twins of the pages, under the pages' addresses.
func exportRoutes(r chi.Router, s *Server) {
	r.Get("/designs/{id:[0-9]+}/efficiency.csv", s.handle(s.draftCSV))
	r.Get("/designs/{id:[0-9]+}/efficiency.xlsx", s.handle(s.draftXLSX))
	r.Get("/designs/{id:[0-9]+}/revisions/{n:[0-9]+}/efficiency.xlsx", s.handle(savedXLSX(s.savedDesign)))
	r.Get("/designs/{id:[0-9]+}/design.json", s.handle(s.draftJSON))
	r.Get("/designs/{id:[0-9]+}/revisions/{n:[0-9]+}/efficiency.csv", s.handle(savedCSV(s.savedDesign)))
	r.Get("/designs/{id:[0-9]+}/revisions/{n:[0-9]+}/design.json", s.handle(savedJSON(s.savedDesign)))
	r.Get("/compare.csv", s.handle(s.compareCSV))
}

// finder finds the revision that a request's address names, by its number or by
// a link.
type finder func(r *http.Request) (store.Revision, *budget.Design, error)

// savedCSV gives the table as it was saved.
func savedCSV(find finder) handler {
	return func(w http.ResponseWriter, r *http.Request) error {
		saved, design, err := find(r)
		if err != nil {
			return err
		}
		revision := revisionOf(saved)
		rows, err := revision.rows()
		if err != nil {
			return err
		}
		return writeCSV(w, fileName(design.Name, saved.Number, "efficiency.csv"), design, rows)
	}
}

// savedJSON gives the design as it was saved.
func savedJSON(find finder) handler {
	return func(w http.ResponseWriter, r *http.Request) error {
		saved, design, err := find(r)
		if err != nil {
			return err
		}
		return writeFile(w, fileName(design.Name, saved.Number, "design.json"), saved.DesignJSON)
	}
}

func (s *Server) savedDesign(r *http.Request) (store.Revision, *budget.Design, error) {
	saved, err := s.revision(r)
	if err != nil {
		return store.Revision{}, nil, err
	}
	design, err := readDesign(saved.DesignJSON)
	return saved, design, err
}

// draftCSV computes the table of the design as it stands on its sheet.
func (s *Server) draftCSV(w http.ResponseWriter, r *http.Request) error {
	design, err := s.completeDraft(r)
	if err != nil {
		return err
	}
	found, wrong, err := compute(r.Context(), design, nil)
	if err != nil {
		return err
	}
	if len(wrong) > 0 {
		return invalid(wrong)
	}
	return writeCSV(w, fileName(design.Name, 0, "efficiency.csv"), design, found.Points)
}

func (s *Server) draftJSON(w http.ResponseWriter, r *http.Request) error {
	design, err := s.completeDraft(r)
	if err != nil {
		return err
	}
	text, err := json.Marshal(design)
	if err != nil {
		return err
	}
	return writeFile(w, fileName(design.Name, 0, "design.json"), text)
}

// completeDraft reads the design on the sheet, and refuses one that is not
// complete: a file of it could not be read back.
func (s *Server) completeDraft(r *http.Request) (*budget.Design, error) {
	kept, err := s.design(r)
	if err != nil {
		return nil, err
	}
	draft, err := readDraft(kept.Draft)
	if err != nil {
		return nil, err
	}
	return draft.complete()
}

func (t Draft) complete() (*budget.Design, error) {
	design, wrong := t.design()
	if len(wrong) > 0 {
		return nil, invalid(wrong)
	}
	return design, nil
}

// writeFile sends a design file, indented for people who read it.
func writeFile(w http.ResponseWriter, name string, design []byte) error {
	var body bytes.Buffer
	if err := json.Indent(&body, design, "", "  "); err != nil {
		return fmt.Errorf("stored design: %w", err)
	}
	body.WriteByte('\n')
	attach(w, name, "application/json", body.Bytes())
	return nil
}

// attach sends a file to be saved under a name.
func attach(w http.ResponseWriter, name, kind string, body []byte) {
	w.Header().Set("Content-Type", kind)
	w.Header().Set("Content-Disposition", mime.FormatMediaType("attachment", map[string]string{"filename": name}))
	w.Write(body)
}

// fileName makes a name that is safe on every system out of a design's own:
// letters, digits and dashes of ASCII, never a path, and not too long.
func fileName(design string, revision int, ending string) string {
	return fileStem(design, revision) + "-" + ending
}

// fileStem is what the names of a design's files begin with; revision 0 is its draft.
func fileStem(design string, revision int) string {
	if revision > 0 {
		return slug(design) + fmt.Sprintf("-r%d", revision)
	}
	return slug(design)
}

func slug(text string) string {
	words := strings.FieldsFunc(strings.ToLower(text), func(r rune) bool {
		return (r < 'a' || r > 'z') && (r < '0' || r > '9')
	})
	name := strings.Join(words, "-")
	if len(name) > 60 {
		name = strings.TrimRight(name[:60], "-")
	}
	if name == "" {
		return "design"
	}
	return name
}
