package web

import (
	"context"
	"net/http"
	"net/url"
	"strings"

	"lossbook/store"
	"lossbook/web/view"
)

// undoEdit takes the last edit of a sheet back; redoEdit makes it again. What the
// form holds that was not kept yet is an edit too, and so the one to be undone.
func (s *Server) undoEdit(w http.ResponseWriter, r *http.Request) error {
	return s.walk(w, r, s.store.Undo, undone)
}

func (s *Server) redoEdit(w http.ResponseWriter, r *http.Request) error {
	return s.walk(w, r, s.store.Redo, redone)
}

// What an address says of a step that was just made.
const (
	undone = "undone"
	redone = "redone"
)

func (s *Server) walk(w http.ResponseWriter, r *http.Request, step func(context.Context, int64, int64) (store.Design, error), way string) error {
	e, sh, err := s.takeExactly(r)
	if err != nil {
		return s.notTaken(w, r, e, sh, err)
	}
	before := sh.kept.Version
	kept, err := step(r.Context(), sh.kept.ID, before)
	if err != nil {
		return s.notTaken(w, r, e, sh, err)
	}
	draft, err := readDraft(kept.Draft)
	if err != nil {
		return err
	}
	if sh, err = s.openSheet(r.Context(), kept, draft, e.sight); err != nil {
		return err
	}
	sh.note, sh.way = e.note, way
	if kept.Version == before {
		sh.way = "no " + way
	}
	if live(r) {
		return sh.draw(w, r, http.StatusOK, func(v *view.Sheet) { v.Whole = true })
	}
	v, err := sh.model(r.Context())
	if err != nil {
		return err
	}
	return back(w, r, sh.entryAddress(url.Values{"step": {sh.way}}, v.Steps.To))
}

// entryAddress is the sheet as it is looked at, with an entry in sight and what else
// is to be said.
func (s *sheet) entryAddress(q url.Values, to string) string {
	if to != "" {
		q.Set("show", to)
	}
	address, also := s.sight.address(s.address()), "?"
	if strings.Contains(address, "?") {
		also = "&"
	}
	address += also + q.Encode()
	if to != "" {
		address += "#" + to
	}
	return address
}

// stepsOf words where undo and redo lead, and what has just been done if that is
// true. The place is the first entry that this has changed.
func (s *sheet) stepsOf() (v view.Steps, place string, err error) {
	// What was undone lies ahead, what was redone behind.
	for _, side := range []struct {
		kept []byte
		step *view.Step
		way  string
		word string
	}{{s.steps.Redo, &v.Redo, undone, "Undone"}, {s.steps.Undo, &v.Undo, redone, "Redone"}} {
		if side.kept == nil {
			continue
		}
		now, err := readDraft(s.kept.Draft)
		if err != nil {
			return v, "", err
		}
		t, err := readDraft(side.kept)
		if err != nil {
			return v, "", err
		}
		*side.step = turn(now, t)
		if list := drifts(t, now); s.way == side.way && len(list) > 0 {
			v.Said, place = side.word+": "+turn(t, now).Words(), list[0].first()
		}
	}
	switch {
	case s.way == "no "+undone && v.Undo.Label == "":
		v.Said = "There is nothing to undo."
	case s.way == "no "+redone && v.Redo.Label == "":
		v.Said = "There is nothing to redo."
	}
	v.Undo.Send, v.Redo.Send = s.address()+"/undo", s.address()+"/redo"
	return v, place, nil
}
