package web

import (
	"encoding/json"
	"errors"
	"fmt"
	"maps"
	"net/http"
	"strconv"
	"time"

	"lossbook/budget"
	"lossbook/store"
)

// designResource is a design as the API gives it: complete, and with what its
// sheet lacks if that was edited on since.
type designResource struct {
	ID        int64          `json:"id"`
	Design    *budget.Design `json:"design"` // the last complete state; null if there was none
	UpdatedAt time.Time      `json:"updated_at"`
	Version   int64          `json:"version"`
	Missing   []fieldProblem `json:"missing,omitempty"`
}

// designHead is a design in the list.
type designHead struct {
	ID        int64     `json:"id"`
	Name      string    `json:"name"`
	UpdatedAt time.Time `json:"updated_at"`
	Revisions int       `json:"revisions"`
}

type designRequest struct {
	Design *budget.Design `json:"design"`
}

type changeRequest struct {
	Design  *budget.Design `json:"design"`
	Version *int64         `json:"version"`
}

func resourceOf(d store.Design) (*designResource, error) {
	draft, err := readDraft(d.Draft)
	if err != nil {
		return nil, err
	}
	resource := &designResource{ID: d.ID, UpdatedAt: d.UpdatedAt, Version: d.Version}
	if len(d.Complete) > 0 {
		if resource.Design, err = readDesign(d.Complete); err != nil {
			return nil, err
		}
	}
	_, wrong := draft.design()
	resource.Missing = fieldProblems(wrong)
	return resource, nil
}

// readDesign reads a design as it was kept.
func readDesign(stored []byte) (*budget.Design, error) {
	d := new(budget.Design)
	if err := json.Unmarshal(stored, d); err != nil {
		return nil, fmt.Errorf("stored design: %w", err)
	}
	return d, nil
}

func (s *Server) listDesigns(w http.ResponseWriter, r *http.Request) error {
	designs, err := s.store.Designs(r.Context())
	if err != nil {
		return err
	}
	heads := make([]designHead, len(designs))
	for i, d := range designs {
		heads[i] = designHead{d.ID, d.Name, d.UpdatedAt, d.Revisions}
	}
	return writeJSON(w, http.StatusOK, map[string]any{"designs": heads})
}

func (s *Server) postDesign(w http.ResponseWriter, r *http.Request) error {
	var ask designRequest
	wrong, err := readJSON(r, &ask)
	if err != nil {
		return err
	}
	if wrong = designErrors(wrong, ask.Design); len(wrong) > 0 {
		return invalid(wrong)
	}
	draft, complete, err := keptAs(ask.Design)
	if err != nil {
		return err
	}
	d, err := s.store.Create(r.Context(), store.NewDesign{Name: ask.Design.Name, Draft: draft, Complete: complete})
	if err != nil {
		return err
	}
	w.Header().Set("Location", "/api/v1/designs/"+strconv.FormatInt(d.ID, 10))
	return writeDesign(w, http.StatusCreated, d)
}

// keptAs returns a complete design as the store keeps it.
func keptAs(d *budget.Design) (draft, complete []byte, err error) {
	if draft, err = json.Marshal(draftOf(d)); err != nil {
		return nil, nil, err
	}
	complete, err = json.Marshal(d)
	return draft, complete, err
}

// keptBeside returns a complete design as the store keeps it, with the entries of
// the draft before it that no design has.
func keptBeside(d *budget.Design, before []byte) (draft, complete []byte, err error) {
	typed, err := readDraft(before)
	if err != nil {
		return nil, nil, err
	}
	next := draftOf(d)
	maps.Copy(next, typed.besides())
	if draft, err = json.Marshal(next); err != nil {
		return nil, nil, err
	}
	complete, err = json.Marshal(d)
	return draft, complete, err
}

func writeDesign(w http.ResponseWriter, status int, d store.Design) error {
	resource, err := resourceOf(d)
	if err != nil {
		return err
	}
	return writeJSON(w, status, resource)
}

func (s *Server) getDesign(w http.ResponseWriter, r *http.Request) error {
	d, err := s.design(r)
	if err != nil {
		return err
	}
	return writeDesign(w, http.StatusOK, d)
}

// design finds the design that a request's address names.
func (s *Server) design(r *http.Request) (store.Design, error) {
	id, err := number(r, "id")
	if err != nil {
		return store.Design{}, err
	}
	return s.store.Design(r.Context(), id)
}

func (s *Server) putDesign(w http.ResponseWriter, r *http.Request) error {
	id, err := number(r, "id")
	if err != nil {
		return err
	}
	var ask changeRequest
	wrong, err := readJSON(r, &ask)
	if err != nil {
		return err
	}
	if wrong = ask.check(wrong); len(wrong) > 0 {
		return invalid(wrong)
	}
	before, err := s.store.Design(r.Context(), id)
	if err != nil {
		return err
	}
	draft, complete, err := keptBeside(ask.Design, before.Draft)
	if err != nil {
		return err
	}
	d, err := s.store.Update(r.Context(), id, *ask.Version, store.Change{Name: ask.Design.Name, Draft: draft, Complete: complete})
	if err != nil {
		return staleFrom(*ask.Version, err)
	}
	return writeDesign(w, http.StatusOK, d)
}

func (ask *changeRequest) check(wrong []budget.FieldError) []budget.FieldError {
	wrong = designErrors(wrong, ask.Design)
	if ask.Version == nil {
		wrong = append(wrong, budget.FieldError{Path: "version", Missing: true,
			Message: "is missing; read the design and send the version it had"})
	}
	return wrong
}

// staleFrom adds to a stale save the version it was made from, so that the
// answer names both.
func staleFrom(sent int64, err error) error {
	var stale *store.StaleError
	if !errors.As(err, &stale) {
		return err
	}
	f := staleFailure(stale)
	f.Sent = sent
	return f
}

func (s *Server) deleteDesign(w http.ResponseWriter, r *http.Request) error {
	id, err := number(r, "id")
	if err != nil {
		return err
	}
	if err := s.store.Delete(r.Context(), id); err != nil {
		return err
	}
	w.WriteHeader(http.StatusNoContent)
	return nil
}
