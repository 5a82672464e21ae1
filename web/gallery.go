package web

import (
	"context"
	"net/http"

	"github.com/a-h/templ"
	"github.com/go-chi/chi/v5"

	"lossbook/web/view"
)

// exhibit is a page drawn of awkward data that no store holds.
type exhibit struct {
	name, words string
	draw        func(ctx context.Context) (templ.Component, error)
}

// galleryRoutes show every page's template with awkward data, for tests and for eyes.
// They are there only if that is asked for at the start.
func galleryRoutes(r chi.Router, s *Server) {
	r.Get("/gallery", s.handle(galleryIndex))
	r.Get("/gallery/{exhibit:[a-z-]+}", s.handle(showExhibit))
}

func galleryIndex(w http.ResponseWriter, r *http.Request) error {
	index := view.Gallery{Page: frame("Gallery")}
	for _, e := range exhibits {
		index.Exhibits = append(index.Exhibits, view.Link{Text: e.words, Href: "/gallery/" + e.name})
	}
	return show(w, r, http.StatusOK, view.GalleryPage(index))
}

func showExhibit(w http.ResponseWriter, r *http.Request) error {
	for _, e := range exhibits {
		if e.name != chi.URLParam(r, "exhibit") {
			continue
		}
		page, err := e.draw(r.Context())
		if err != nil {
			return err
		}
		return show(w, r, http.StatusOK, page)
	}
	return errNoPage
}
