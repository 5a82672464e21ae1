package web

import (
	"context"
	"encoding/json"
	"fmt"
	"net/http"
	"time"
	"unicode/utf8"

	"lossbook/budget"
	"lossbook/store"
)

// maxNote bounds the note of a revision, in characters.
const maxNote = 2000

// revisionHead is a revision in a list.
type revisionHead struct {
	Number    int       `json:"number"`
	Note      string    `json:"note"`
	CreatedAt time.Time `json:"created_at"`
	Model     string    `json:"model"`
}

type revisionRequest struct {
	Note string `json:"note"`
}

// revisionOf gives a stored revision as it was saved: nothing is computed anew.
func revisionOf(r store.Revision) Revision {
	return Revision{Number: r.Number, Note: r.Note, CreatedAt: r.CreatedAt, Model: r.Model,
		Design: r.DesignJSON, Points: r.Points, Findings: r.Findings}
}

// rows reads the points as they were saved.
func (r *Revision) rows() ([]Point, error) {
	var points []Point
	if err := json.Unmarshal(r.Points, &points); err != nil {
		return nil, fmt.Errorf("stored points: %w", err)
	}
	return points, nil
}

// saveRevision keeps the design as it stands with its results over the default
// grid. A draft that is not complete has none, and is refused with what it lacks.
func (s *Server) saveRevision(ctx context.Context, d store.Design, note string) (store.Revision, error) {
	if utf8.RuneCountInString(note) > maxNote {
		return store.Revision{}, invalid([]budget.FieldError{{Path: "note", Message: fmt.Sprintf("must be at most %d characters", maxNote)}})
	}
	draft, err := readDraft(d.Draft)
	if err != nil {
		return store.Revision{}, err
	}
	design, wrong := draft.design()
	if len(wrong) > 0 {
		return store.Revision{}, invalid(underDesign(wrong))
	}
	found, wrong, err := compute(ctx, design, nil)
	if err != nil {
		return store.Revision{}, err
	}
	if len(wrong) > 0 {
		return store.Revision{}, invalid(underDesign(wrong))
	}
	kept, err := newRevision(note, d.Draft, design, found)
	if err != nil {
		return store.Revision{}, err
	}
	return s.store.SaveRevision(ctx, d.ID, d.Version, kept)
}

func newRevision(note string, draft []byte, design *budget.Design, found Answer) (store.NewRevision, error) {
	kept := store.NewRevision{Note: note, Model: budget.ModelVersion, Draft: draft}
	for _, part := range []struct {
		into  *[]byte
		value any
	}{{&kept.DesignJSON, design}, {&kept.Points, found.Points}, {&kept.Findings, found.Findings}} {
		text, err := json.Marshal(part.value)
		if err != nil {
			return store.NewRevision{}, err
		}
		*part.into = text
	}
	return kept, nil
}

// underDesign places paths of a design in a body that holds one.
func underDesign(errs []budget.FieldError) []budget.FieldError {
	placed := make([]budget.FieldError, len(errs))
	for i, e := range errs {
		e.Path = below("design", e.Path)
		placed[i] = e
	}
	return placed
}

func (s *Server) listRevisions(w http.ResponseWriter, r *http.Request) error {
	id, err := number(r, "id")
	if err != nil {
		return err
	}
	saved, err := s.store.Revisions(r.Context(), id)
	if err != nil {
		return err
	}
	heads := make([]revisionHead, len(saved))
	for i, h := range saved {
		heads[i] = revisionHead{h.Number, h.Note, h.CreatedAt, h.Model}
	}
	return writeJSON(w, http.StatusOK, map[string]any{"revisions": heads})
}

func (s *Server) postRevision(w http.ResponseWriter, r *http.Request) error {
	d, err := s.design(r)
	if err != nil {
		return err
	}
	var ask revisionRequest
	wrong, err := readJSON(r, &ask)
	if err != nil {
		return err
	}
	if len(wrong) > 0 {
		return invalid(wrong)
	}
	saved, err := s.saveRevision(r.Context(), d, ask.Note)
	if err != nil {
		return staleFrom(d.Version, err)
	}
	w.Header().Set("Location", fmt.Sprintf("/api/v1/designs/%d/revisions/%d", saved.Design, saved.Number))
	return writeJSON(w, http.StatusCreated, revisionOf(saved))
}

func (s *Server) getRevision(w http.ResponseWriter, r *http.Request) error {
	saved, err := s.revision(r)
	if err != nil {
		return err
	}
	return writeJSON(w, http.StatusOK, revisionOf(saved))
}

// revision finds the revision that a request's address names.
func (s *Server) revision(r *http.Request) (store.Revision, error) {
	id, n, err := revisionNumbers(r)
	if err != nil {
		return store.Revision{}, err
	}
	return s.store.Revision(r.Context(), id, n)
}

// revisionNumbers reads the design and the revision of a request's address.
func revisionNumbers(r *http.Request) (id int64, n int, err error) {
	if id, err = number(r, "id"); err != nil {
		return 0, 0, err
	}
	of, err := number(r, "n")
	return id, int(of), err
}
