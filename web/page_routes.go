package web

import (
	"github.com/go-chi/chi/v5"

	"lossbook/assets"
)

// pageRoutes are the addresses a person visits. Whatever changes something is a
// POST, and answers with a redirect to a page that only shows.
func pageRoutes(r chi.Router, s *Server) {
	s.errorPage = failurePage
	r.Get("/assets/*", assets.Handler().ServeHTTP)
	r.Get("/", s.handle(s.listPage))
	r.Post("/hints/{hint:[a-z]+}/away", s.handle(s.putAway))
	r.Post("/designs", s.handle(s.startDesign))
	r.Post("/designs/upload", s.handle(s.uploadDesign))
	const design = "/designs/{id:[0-9]+}"
	r.Get(design, s.handle(s.sheetPage))
	r.Post(design, s.handle(s.editSheet))
	r.Get(design+"/find", s.handle(s.findPage))
	r.Post(design+"/undo", s.handle(s.undoEdit))
	r.Post(design+"/redo", s.handle(s.redoEdit))
	r.Get(design+"/rename", s.handle(s.renamePage))
	r.Post(design+"/rename", s.handle(s.renameDesign))
	r.Post(design+"/copy", s.handle(s.copyDesign))
	r.Post(design+"/delete", s.handle(s.removeDesign))
	r.Post(design+"/restore", s.handle(s.restoreDesign))
	r.Post(design+"/revisions", s.handle(s.keepRevision))
	const revision = design + "/revisions/{n:[0-9]+}"
	r.Get(revision, s.handle(s.revisionPage))
	r.Get(revision+"/report", s.handle(s.reportPage))
	r.Post(revision+"/reopen", s.handle(s.reopenRevision))
	r.Get(revision+"/share", s.handle(s.linksPlace))
	r.Post(revision+"/share", s.handle(s.makeLink))
	r.Post(revision+"/share/{share:[0-9]+}/revoke", s.handle(s.revokeLink))
	r.Get(accuracyAddress, s.handle(s.accuracyPage))
	r.Get("/compare", s.handle(s.comparePage))
	r.Get("/compare/choose", s.handle(s.chooserPage))
}
