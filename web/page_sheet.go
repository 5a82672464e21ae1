package web

import (
	"context"
	"errors"
	"fmt"
	"maps"
	"net/http"
	"strconv"
	"strings"

	"lossbook/store"
	"lossbook/web/view"
)

// sheetPage shows a design with its entries and its budget.
func (s *Server) sheetPage(w http.ResponseWriter, r *http.Request) error {
	kept, err := s.design(r)
	if err != nil {
		return err
	}
	draft, err := readDraft(kept.Draft)
	if err != nil {
		return err
	}
	sh, err := s.openSheet(r.Context(), kept, draft, sightOn(r))
	if err != nil {
		return err
	}
	q := r.URL.Query()
	sh.way, sh.show = q.Get("step"), q.Get("show")
	v, err := sh.model(r.Context())
	if err != nil {
		return err
	}
	if live(r) {
		return show(w, r, http.StatusOK, view.ViewAnswer(v))
	}
	v.Page.Notice = sh.notice(q.Get("kept"), q.Get("reopened"))
	return show(w, r, http.StatusOK, view.SheetPage(v))
}

// notice says what has just been done, if the address says so and it is true.
func (s *sheet) notice(kept, reopened string) view.Notice {
	if n, err := strconv.Atoi(kept); err == nil && n > 0 && n <= s.kept.LatestRevision {
		return view.Notice{Text: fmt.Sprintf("Kept as revision %d.", n)}
	}
	if n, err := strconv.Atoi(reopened); err == nil && n > 0 && n <= s.kept.LatestRevision {
		return view.Notice{Text: fmt.Sprintf("Revision %d is open as the draft.", n)}
	}
	return view.Notice{}
}

// editSheet keeps what was typed, whether or not it is right, and answers with
// what follows from it.
func (s *Server) editSheet(w http.ResponseWriter, r *http.Request) error {
	e, sh, err := s.take(r)
	if err != nil {
		return s.notTaken(w, r, e, sh, err)
	}
	status := http.StatusOK
	if len(sh.bad()) > 0 {
		status = http.StatusUnprocessableEntity
	}
	if !live(r) && status == http.StatusOK {
		return back(w, r, e.sight.address(sh.address())+e.place())
	}
	return sh.draw(w, r, status, func(v *view.Sheet) { v.Whole = e.structure != v.Hidden.Structure })
}

// place is where on the page a button left off.
func (e edit) place() string {
	if parts := command.FindStringSubmatch(e.do); parts != nil {
		return "#add-" + parts[2]
	}
	return ""
}

// take reads the form and keeps its entries as the draft. With an error the
// sheet holds what was typed, if it could be read.
func (s *Server) take(r *http.Request) (edit, *sheet, error) { return s.takeForm(r, false) }

// takeExactly does so from the current version alone, even where the form holds
// nothing new: for what goes on from the state that the page showed.
func (s *Server) takeExactly(r *http.Request) (edit, *sheet, error) { return s.takeForm(r, true) }

func (s *Server) takeForm(r *http.Request, exactly bool) (edit, *sheet, error) {
	kept, err := s.design(r)
	if err != nil {
		return edit{}, nil, err
	}
	e, err := readEdit(r)
	if err != nil {
		return e, nil, err
	}
	before, err := readDraft(kept.Draft)
	if err != nil {
		return e, nil, err
	}
	draft, err := e.apply(before)
	if err != nil {
		return e, nil, err
	}
	if maps.Equal(draft, before) && !exactly { // nothing to overwrite, whichever version it came from
		e.version = kept.Version
	}
	saved, failed := s.keepDraft(r.Context(), kept.ID, e.version, draft, run(before, draft))
	if failed == nil {
		kept = saved
	}
	sh, err := s.openSheet(r.Context(), kept, draft, e.sight)
	if err != nil {
		return e, nil, err
	}
	sh.note = e.note
	return e, sh, failed
}

func (s *Server) keepDraft(ctx context.Context, id, version int64, t Draft, run string) (store.Design, error) {
	draft, complete, err := t.stored()
	if err != nil {
		return store.Design{}, err
	}
	return s.store.Update(ctx, id, version, store.Change{Name: nameOf(strings.TrimSpace(t["name"])), Draft: draft, Complete: complete, Run: run})
}

// notTaken answers an edit that was not kept: what was typed stays on the page,
// with the reason and the ways on.
func (s *Server) notTaken(w http.ResponseWriter, r *http.Request, e edit, sh *sheet, err error) error {
	var stale *store.StaleError
	switch {
	case sh == nil:
		return err
	case errors.As(err, &stale):
		return staleSheet(w, r, e, sh)
	case live(r):
		return err
	}
	f := failureOf(err)
	if f.Status != http.StatusInsufficientStorage {
		return err
	}
	s.log.ErrorContext(r.Context(), f.Title, "path", r.URL.Path, "cause", err)
	return sh.draw(w, r, f.Status, func(v *view.Sheet) {
		v.Page.Failed, v.Heading = true, f.Title
		v.Problems = []view.Problem{{Message: f.Detail + " What you typed is still on this page."}}
		v.Hidden.Version = strconv.FormatInt(e.version, 10)
	})
}

// staleSheet offers both: to overwrite what was changed elsewhere, or to load
// it and drop what was typed here.
func staleSheet(w http.ResponseWriter, r *http.Request, e edit, sh *sheet) error {
	v, err := sh.model(r.Context())
	if err != nil {
		return err
	}
	v.Page.Failed, v.Heading, v.Problems = true, "", nil
	v.Hidden.Version = strconv.FormatInt(e.version, 10)
	v.Stale = &view.Stale{
		Words: "This design was changed in another window, or by a script, on " + moment(sh.kept.UpdatedAt) +
			". What you typed here is not kept yet.",
		Keep: "Keep mine instead", Theirs: "Load the other and drop mine", Version: strconv.FormatInt(sh.kept.Version, 10),
	}
	if live(r) {
		return show(w, r, http.StatusConflict, view.StaleAnswer(v))
	}
	return show(w, r, http.StatusConflict, view.SheetPage(v))
}
