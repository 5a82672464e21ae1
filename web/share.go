package web

import (
	"context"
	"errors"
	"fmt"
	"net/http"
	"strings"
	"time"
	"unicode/utf8"

	"github.com/go-chi/chi/v5"

	"lossbook/budget"
	"lossbook/store"
	"lossbook/web/view"
)

// maxShareNote bounds the note of a link, in characters.
const maxShareNote = 200

// sharePrefix begins the address of everything that a link opens.
const sharePrefix = "/share/"

// shareRoutes are what a link's holder may ask for, all of it reading. Whatever
// else is asked for below the prefix answers as a link that opens nothing.
func shareRoutes(r chi.Router, s *Server) {
	const link = sharePrefix + "{token}"
	r.Get(link, s.handle(s.sharePage))
	r.Get(link+"/efficiency.csv", s.handle(savedCSV(s.sharedDesign)))
	r.Get(link+"/efficiency.xlsx", s.handle(savedXLSX(s.sharedDesign)))
	r.Get(link+"/design.json", s.handle(savedJSON(s.sharedDesign)))
	r.Get(sharePrefix+"*", s.handle(func(http.ResponseWriter, *http.Request) error { return errNoShare }))
}

// errNoShare says the same of a link that was revoked, whose design is gone, or
// that never was: who guesses learns nothing.
var errNoShare = &Failure{Status: http.StatusNotFound, Title: "This link opens nothing",
	Detail: "It may have been revoked, or its address is not whole. Ask for a new one where you got it."}

// isShared reports whether a request is made with nothing but a link.
func isShared(r *http.Request) bool { return strings.HasPrefix(r.URL.Path, sharePrefix) }

// loggedPath is a request's path without the token of a link: who reads the log
// must not come to open it.
func loggedPath(r *http.Request) string {
	token, isLink := strings.CutPrefix(r.URL.Path, sharePrefix)
	if !isLink {
		return r.URL.Path
	}
	_, rest, more := strings.Cut(token, "/")
	if more {
		rest = "/" + rest
	}
	return sharePrefix + "…" + rest
}

// sharedDesign finds the revision that a request's link opens.
func (s *Server) sharedDesign(r *http.Request) (store.Revision, *budget.Design, error) {
	saved, err := s.store.ShareByToken(r.Context(), chi.URLParam(r, "token"))
	if errors.Is(err, store.ErrNotFound) {
		return store.Revision{}, nil, errNoShare
	}
	if err != nil {
		return store.Revision{}, nil, err
	}
	design, err := readDesign(saved.DesignJSON)
	return saved, design, err
}

// sharePage shows a revision to the holder of a link: the revision's own page
// without the ways to other pages.
func (s *Server) sharePage(w http.ResponseWriter, r *http.Request) error {
	saved, design, err := s.sharedDesign(r)
	if err != nil {
		return err
	}
	page, err := savedPage(r.Context(), saved, design, sightOn(r), sharePrefix+chi.URLParam(r, "token"))
	if err != nil {
		return err
	}
	page.Shared = true
	return showRevision(w, r, http.StatusOK, page)
}

// createShare makes a link to a revision.
func (s *Server) createShare(ctx context.Context, id int64, n int, note string) (store.Share, string, error) {
	if wrong := shareNoteError(note); wrong != "" {
		return store.Share{}, "", invalid([]budget.FieldError{{Path: "note", Message: wrong}})
	}
	return s.store.CreateShare(ctx, id, n, note)
}

func shareNoteError(note string) string {
	if n := utf8.RuneCountInString(note); n > maxShareNote {
		return fmt.Sprintf("has %d characters; at most %d are taken", n, maxShareNote)
	}
	return ""
}

// shareURL is a link as it is sent, under the name that this server was called by.
func shareURL(r *http.Request, token string) string {
	return "http://" + r.Host + sharePrefix + token
}

// shareAddress is where a revision's links are made and revoked.
func shareAddress(id int64, n int) string { return revisionAddress(id, n) + "/share" }

// links draws the links of a revision, and the way to make another.
func (s *Server) links(ctx context.Context, saved store.Revision) (*view.Links, error) {
	list, err := s.store.Shares(ctx, saved.Design, saved.Number)
	if err != nil {
		return nil, err
	}
	at := shareAddress(saved.Design, saved.Number)
	links := &view.Links{Send: at, Note: view.Field{Name: "note", Key: "share.note", Label: "Whom it is for", Wide: true}}
	for _, h := range list {
		l := view.ShareLink{Note: h.Note, When: moment(h.CreatedAt), Stamp: h.CreatedAt.Format(time.RFC3339), Revoke: fmt.Sprintf("%s/%d/revoke", at, h.ID)}
		if !h.RevokedAt.IsZero() {
			l.Revoke, l.Revoked = "", moment(h.RevokedAt)
		}
		links.List = append(links.List, l)
	}
	return links, nil
}
