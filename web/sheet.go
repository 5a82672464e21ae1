package web

import (
	"context"
	"fmt"
	"net/http"
	"slices"
	"strconv"

	"lossbook/budget"
	"lossbook/store"
	"lossbook/web/view"
)

// sheet is a design on its way to its page.
type sheet struct {
	kept      store.Design
	draft     Draft               // the entries that are shown
	design    *budget.Design      // as far as they can be read
	wrong     []budget.FieldError // what keeps them from a budget
	beside    []budget.FieldError // what is wrong with the load profile or the wanted ripple, which no budget needs
	complete  *budget.Design      // the last complete state; nil if there was none
	last      *milestone          // the last revision; nil if there is none
	revisions []store.RevisionHead
	sight     sight
	steps     store.Steps
	hint      view.Hint
	note      string // typed for the next revision
	way       string // how the entries came about: a step undone or redone
	show      string // id of an entry to be in sight
	demanded  bool   // what is missing is an error here
	now       *Point // of the draft, at full load and nominal input, if it was computed
}

func (s *sheet) address() string { return sheetAddress(s.kept.ID) }

// openSheet reads what a sheet shows besides its draft.
func (s *Server) openSheet(ctx context.Context, kept store.Design, draft Draft, g sight) (*sheet, error) {
	sh := &sheet{kept: kept, draft: draft, sight: g}
	sh.design, sh.wrong = draft.design()
	_, sh.beside = draft.profile(sh.design)
	_, ripple := draft.ripple()
	sh.beside = append(sh.beside, ripple...)
	var err error
	if sh.steps, err = s.store.Steps(ctx, kept.ID); err != nil {
		return nil, err
	}
	if sh.hint, err = s.hintFor(ctx, "sheet", g.address(sh.address())); err != nil {
		return nil, err
	}
	if len(kept.Complete) > 0 {
		if sh.complete, err = readDesign(kept.Complete); err != nil {
			return nil, err
		}
	}
	if kept.LatestRevision == 0 {
		return sh, nil
	}
	if sh.revisions, err = s.store.Revisions(ctx, kept.ID); err != nil {
		return nil, err
	}
	latest, err := s.store.Revision(ctx, kept.ID, kept.LatestRevision)
	if err != nil {
		return nil, err
	}
	sh.last, err = milestoneOf(latest)
	return sh, err
}

// model draws the whole page.
func (s *sheet) model(ctx context.Context) (view.Sheet, error) {
	v := view.Sheet{Page: frame(nameOf(s.draft["name"])), ID: strconv.FormatInt(s.kept.ID, 10), Name: nameOf(s.draft["name"])}
	_, missing := parted(s.wrong)
	bad := s.bad()
	v.Page.Failed = len(bad) > 0
	b := formOf(s.draft, s.design, slices.Concat(s.beside, s.wrong), s.demanded)
	b.send = s.address()
	if s.last != nil {
		b.was = s.last.entries
	}
	v.Sections, v.Profile = b.sections(), b.profile()
	v.Hidden = s.sight.hidden()
	v.Hint = s.hint
	v.Find = view.FindBox{Send: s.address() + "/find", View: v.Hidden}
	v.Hidden.Version, v.Hidden.Structure = strconv.FormatInt(s.kept.Version, 10), s.draft.structure()
	var err error
	if v.Answers, err = s.answersOf(ctx); err != nil {
		return v, err
	}
	if v.Since, err = s.since(ctx); err != nil {
		return v, err
	}
	if err := s.point(&v); err != nil {
		return v, err
	}
	v.State = s.state(len(v.Since.Changes))
	v.Foot = v.Name + " · " + v.State + " · " + moment(s.kept.UpdatedAt)
	v.Heading, v.Problems = summary(bad, missing, s.demanded)
	if s.demanded {
		v.Page.Failed = true
	}
	return v, nil
}

// point puts the steps on the page, and in sight what the last one has changed, or
// what the address asks for.
func (s *sheet) point(v *view.Sheet) (err error) {
	var changed string
	if v.Steps, changed, err = s.stepsOf(); err != nil {
		return err
	}
	if changed != "" {
		v.Steps.To = spotOf(*v, changed)
		reveal(*v, v.Steps.To, true)
	}
	reveal(*v, s.show, true)
	return nil
}

// bad is everything typed that is wrong, not merely missing.
func (s *sheet) bad() []budget.FieldError {
	bad, _ := parted(slices.Concat(s.wrong, s.beside))
	return bad
}

// summary says what is wrong at the top of the page.
func summary(bad, missing []budget.FieldError, demanded bool) (string, []view.Problem) {
	if demanded {
		return "This can’t be kept as a revision yet", problemsOf(append(bad, missing...), true)
	}
	return "Entries to correct", problemsOf(bad, true)
}

// state says in a word where the design stands.
func (s *sheet) state(changes int) string {
	switch {
	case s.last == nil:
		return "draft"
	case len(s.wrong) > 0:
		return fmt.Sprintf("draft since revision %d", s.last.number)
	case changes == 0:
		return fmt.Sprintf("revision %d", s.last.number)
	}
	return fmt.Sprintf("draft, %s since revision %d", plural(changes, "change", "changes"), s.last.number)
}

// draw answers with the sheet as a page, or with the pieces that a live edit
// changes.
func (s *sheet) draw(w http.ResponseWriter, r *http.Request, status int, adjust func(*view.Sheet)) error {
	v, err := s.model(r.Context())
	if err != nil {
		return err
	}
	if adjust != nil {
		adjust(&v)
	}
	if live(r) {
		return show(w, r, status, view.SheetAnswer(v))
	}
	return show(w, r, status, view.SheetPage(v))
}
