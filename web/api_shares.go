package web

import (
	"net/http"
	"time"
)

type shareRequest struct {
	Note string `json:"note"`
}

// shareMade is a new link: the one time that its address is told.
type shareMade struct {
	ID  int64  `json:"id"`
	URL string `json:"url"`
}

// shareHead is a link in a list, without its address: that is not kept.
type shareHead struct {
	ID        int64     `json:"id"`
	Note      string    `json:"note"`
	CreatedAt time.Time `json:"created_at"`
	Revoked   bool      `json:"revoked"`
}

func (s *Server) postShare(w http.ResponseWriter, r *http.Request) error {
	id, n, err := revisionNumbers(r)
	if err != nil {
		return err
	}
	var ask shareRequest
	wrong, err := readJSON(r, &ask)
	if err != nil {
		return err
	}
	if len(wrong) > 0 {
		return invalid(wrong)
	}
	made, token, err := s.createShare(r.Context(), id, n, ask.Note)
	if err != nil {
		return err
	}
	url := shareURL(r, token)
	w.Header().Set("Location", url)
	return writeJSON(w, http.StatusCreated, shareMade{made.ID, url})
}

func (s *Server) listShares(w http.ResponseWriter, r *http.Request) error {
	id, n, err := revisionNumbers(r)
	if err != nil {
		return err
	}
	list, err := s.store.Shares(r.Context(), id, n)
	if err != nil {
		return err
	}
	heads := make([]shareHead, len(list))
	for i, h := range list {
		heads[i] = shareHead{h.ID, h.Note, h.CreatedAt, !h.RevokedAt.IsZero()}
	}
	return writeJSON(w, http.StatusOK, map[string]any{"shares": heads})
}

func (s *Server) deleteShares(w http.ResponseWriter, r *http.Request) error {
	id, n, err := revisionNumbers(r)
	if err != nil {
		return err
	}
	if err := s.store.RevokeShares(r.Context(), id, n); err != nil {
		return err
	}
	w.WriteHeader(http.StatusNoContent)
	return nil
}

func (s *Server) deleteShare(w http.ResponseWriter, r *http.Request) error {
	id, n, err := revisionNumbers(r)
	if err != nil {
		return err
	}
	share, err := number(r, "share")
	if err != nil {
		return err
	}
	if err := s.store.RevokeShare(r.Context(), id, n, share); err != nil {
		return err
	}
	w.WriteHeader(http.StatusNoContent)
	return nil
}
