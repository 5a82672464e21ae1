package web

import (
	"fmt"
	"net/http"
	"strconv"
	"strings"
	"unicode/utf8"

	"lossbook/budget"
	"lossbook/store"
	"lossbook/web/view"
)

// maxName bounds a design's name, in characters.
const maxName = 200

// renamePage asks for another name.
func (s *Server) renamePage(w http.ResponseWriter, r *http.Request) error {
	kept, err := s.design(r)
	if err != nil {
		return err
	}
	return showRename(w, r, http.StatusOK, kept, kept.Name, "")
}

func showRename(w http.ResponseWriter, r *http.Request, status int, kept store.Design, typed, wrong string) error {
	f, _ := budget.FieldAt("name")
	page := view.Nameplate{Page: frame("Rename " + nameOf(kept.Name)), ID: strconv.FormatInt(kept.ID, 10),
		Field: view.Field{Name: "name", Label: f.Name, Where: f.Where, Value: typed, Error: wrong, Required: true, Wide: true}}
	page.Page.Failed = wrong != ""
	if wrong != "" {
		page.Problems = []view.Problem{{Label: f.Name, Message: wrong, Href: "#f-name"}}
	}
	return show(w, r, status, view.Rename(page))
}

// renameDesign gives a design another name, on top of whatever its sheet says.
func (s *Server) renameDesign(w http.ResponseWriter, r *http.Request) error {
	kept, err := s.design(r)
	if err != nil {
		return err
	}
	if err := parseForm(r); err != nil {
		return err
	}
	name := strings.TrimSpace(r.PostForm.Get("name"))
	if wrong := nameError(name); wrong != "" {
		return showRename(w, r, http.StatusUnprocessableEntity, kept, r.PostForm.Get("name"), wrong)
	}
	change, err := renamed(kept, name)
	if err != nil {
		return err
	}
	if _, err := s.store.Update(r.Context(), kept.ID, kept.Version, change); err != nil {
		return err
	}
	return back(w, r, "/")
}

func nameError(name string) string {
	switch n := utf8.RuneCountInString(name); {
	case n == 0:
		return "is empty; give the design a name"
	case n > maxName:
		return fmt.Sprintf("has %d characters; at most %d are taken", n, maxName)
	}
	return ""
}

// removeDesign puts a design into the bin; the list then offers to undo it.
func (s *Server) removeDesign(w http.ResponseWriter, r *http.Request) error {
	id, err := number(r, "id")
	if err != nil {
		return err
	}
	if err := s.store.Delete(r.Context(), id); err != nil {
		return err
	}
	return back(w, r, "/?deleted="+strconv.FormatInt(id, 10))
}

// restoreDesign takes a design out of the bin.
func (s *Server) restoreDesign(w http.ResponseWriter, r *http.Request) error {
	id, err := number(r, "id")
	if err != nil {
		return err
	}
	if _, err := s.store.Restore(r.Context(), id); err != nil {
		return err
	}
	return back(w, r, "/#design-"+strconv.FormatInt(id, 10))
}
