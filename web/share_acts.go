package web

import (
	"net/http"
	"strings"

	"lossbook/budget"
	"lossbook/store"
	"lossbook/web/view"
)

// makeLink makes a link to a revision, and shows the revision's page with it:
// nothing can show it again, so it is no redirect to a page that would.
func (s *Server) makeLink(w http.ResponseWriter, r *http.Request) error {
	saved, design, err := s.savedDesign(r)
	if err != nil {
		return err
	}
	if err := parseForm(r); err != nil {
		return err
	}
	note := strings.TrimSpace(r.PostForm.Get("note"))
	if wrong := shareNoteError(note); wrong != "" {
		return s.showLink(w, r, saved, design, func(page *view.Revision) int {
			f := &page.Answers.Links.Note
			f.Value, f.Error = r.PostForm.Get("note"), wrong
			page.Page.Failed = true
			page.Answers.Links.Problems = []view.Problem{{Label: f.Label, Message: wrong, Href: "#" + f.ID()}}
			return http.StatusUnprocessableEntity
		})
	}
	_, token, err := s.createShare(r.Context(), saved.Design, saved.Number, note)
	if err != nil {
		return err
	}
	return s.showLink(w, r, saved, design, func(page *view.Revision) int {
		page.Answers.Links.Made = shareURL(r, token)
		return http.StatusCreated
	})
}

// showLink shows a revision's page with what was just done to its links.
func (s *Server) showLink(w http.ResponseWriter, r *http.Request, saved store.Revision, design *budget.Design, done func(*view.Revision) int) error {
	page, err := s.revisionModel(r, saved, design)
	if err != nil {
		return err
	}
	status := done(&page)
	return show(w, r, status, view.RevisionPage(page))
}

// linksPlace is what the address of a link's making shows when it is only opened,
// or reloaded: the list.
func (s *Server) linksPlace(w http.ResponseWriter, r *http.Request) error {
	saved, err := s.revision(r)
	if err != nil {
		return err
	}
	return back(w, r, revisionAddress(saved.Design, saved.Number)+"#links")
}

// revokeLink makes a link open nothing.
func (s *Server) revokeLink(w http.ResponseWriter, r *http.Request) error {
	saved, err := s.revision(r)
	if err != nil {
		return err
	}
	share, err := number(r, "share")
	if err != nil {
		return err
	}
	if err := s.store.RevokeShare(r.Context(), saved.Design, saved.Number, share); err != nil {
		return err
	}
	return back(w, r, revisionAddress(saved.Design, saved.Number)+"#links")
}
