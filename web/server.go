// Package web serves the pages and the API of Lossbook.
//
// Data walks one way, and every step is a value: a form or JSON becomes a
// budget.Design, which is validated, prepared and computed at its points into
// one list of rows, from which page, CSV and JSON are drawn.
package web

import (
	"errors"
	"io/fs"
	"log/slog"
	"net/http"
	"sync"

	"github.com/go-chi/chi/v5"
	"github.com/go-chi/chi/v5/middleware"

	"lossbook/store"
)

// Config is what a server needs to know.
type Config struct {
	Store *store.Store
	Log   *slog.Logger
	Host  string // the host:port it listens on, "127.0.0.1:8470"

	Evidence fs.FS // what the figures were checked against: the folder testdata
	Gallery  bool  // pages of awkward data are served too
}

// Server holds what the handlers share. It keeps no state of its own: that is
// the store's.
type Server struct {
	store     *store.Store
	log       *slog.Logger
	evidence  func() (*evidence, error) // worked out when it is asked for first; it never changes
	errorPage func(w http.ResponseWriter, r *http.Request, f *Failure)
}

// New returns the handler of all addresses.
func New(c Config) (http.Handler, error) {
	if c.Store == nil || c.Log == nil || c.Evidence == nil {
		return nil, errors.New("web: a server needs a store, a log and its evidence")
	}
	router, err := newRouter(c)
	if err != nil {
		return nil, err
	}
	return router, nil
}

// newRouter returns the router itself, so that a test can walk its routes.
func newRouter(c Config) (chi.Router, error) {
	hosts, err := hostsOf(c.Host)
	if err != nil {
		return nil, err
	}
	s := &Server{store: c.Store, log: c.Log, errorPage: plainErrorPage,
		evidence: sync.OnceValues(func() (*evidence, error) { return gather(c.Evidence) })}
	r := chi.NewRouter()
	r.Use(secureHeaders, s.recovered, s.onlyHosts(hosts), s.sameOrigin, boundedBody, middleware.GetHead)
	r.NotFound(s.handle(func(http.ResponseWriter, *http.Request) error { return errNoPage }))
	r.MethodNotAllowed(s.handle(methodNotAllowed(r)))
	routes(r, s)
	if c.Gallery {
		galleryRoutes(r, s)
	}
	return r, nil
}

func routes(r chi.Router, s *Server) {
	apiRoutes(r, s)
	exportRoutes(r, s)
	mapRoutes(r, s)
	shareRoutes(r, s)
	pageRoutes(r, s)
}

// handler is a request's work; an error it returns is answered in one place,
// so it must return one only before it has written anything.
type handler func(w http.ResponseWriter, r *http.Request) error

func (s *Server) handle(h handler) http.HandlerFunc {
	return func(w http.ResponseWriter, r *http.Request) {
		if err := h(w, r); err != nil {
			s.fail(w, r, err)
		}
	}
}

// methodNotAllowed answers with the methods that would have been allowed.
func methodNotAllowed(routes chi.Routes) handler {
	return func(w http.ResponseWriter, r *http.Request) error {
		for _, method := range []string{"GET", "POST", "PUT", "DELETE"} {
			if routes.Match(chi.NewRouteContext(), method, r.URL.Path) {
				w.Header().Add("Allow", method)
			}
		}
		return errMethod
	}
}
