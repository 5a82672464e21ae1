package web

import (
	"github.com/go-chi/chi/v5"

	"lossbook/assets"
)

func pageRoutes(r chi.Router, s *Server) {
	r.Get("/assets/*", assets.Handler().ServeHTTP)
}
