package web

import (
	"context"
	"net/http"
	"strings"

	"github.com/go-chi/chi/v5"

	"lossbook/web/view"
)

// hints are the words for those who see a page for the first time: three sentences
// at most, shown until they are put away, and then never again.
var hints = map[string]string{
	"list": "Lossbook shows where every watt of a DC-DC converter goes. Open a sample and change a value, or start a design of your own below " +
		"from what it has to do. All of it stays on this machine.",
	"sheet": "Type values as on a schematic (4k7, 22u): the budget follows, and Ctrl+Z takes any edit back. " +
		"A figure of the ledger opens how it came about. Keep a revision first, and the sheet says what a change did.",
}

// hintFor is a page's hint; to is where putting it away leads without a script.
func (s *Server) hintFor(ctx context.Context, name, to string) (view.Hint, error) {
	away, err := s.store.IsAway(ctx, name)
	if err != nil || away {
		return view.Hint{}, err
	}
	return view.Hint{Text: hints[name], Send: "/hints/" + name + "/away", To: to}, nil
}

// putAway takes a hint away for good.
func (s *Server) putAway(w http.ResponseWriter, r *http.Request) error {
	name := chi.URLParam(r, "hint")
	if hints[name] == "" {
		return errNoPage
	}
	if err := parseForm(r); err != nil {
		return err
	}
	if err := s.store.PutAway(r.Context(), name); err != nil {
		return err
	}
	if live(r) {
		return show(w, r, http.StatusOK, view.HintAway())
	}
	return back(w, r, ownAddress(r.PostForm.Get("to")))
}

// ownAddress lets a form lead to pages of this server alone.
func ownAddress(to string) string {
	if to == "/" || strings.HasPrefix(to, "/designs/") {
		return to
	}
	return "/"
}
