package store

import (
	"errors"
	"fmt"
	"testing"
)

// saves are the writes that a full disk can stop.
func saves(t *testing.T, s *Store, d Design, blob []byte) map[string]func() error {
	return map[string]func() error{
		"create": func() error { _, err := s.Create(t.Context(), NewDesign{Draft: blob}); return err },
		"update": func() error { _, err := s.Update(t.Context(), d.ID, d.Version, Change{Draft: blob}); return err },
		"revision": func() error {
			_, err := s.SaveRevision(t.Context(), d.ID, d.Version, NewRevision{Points: blob})
			return err
		},
		"seed": func() error { return s.Seed(t.Context(), []NewDesign{{Draft: blob}}) },
	}
}

func TestFullDatabase(t *testing.T) {
	blob := make([]byte, 1<<20)
	for _, name := range []string{"create", "update", "revision", "seed"} {
		t.Run(name, func(t *testing.T) {
			s := openNew(t)
			d := create1(t, s, "d")
			var pages int
			if err := s.write.QueryRow(`PRAGMA page_count`).Scan(&pages); err != nil {
				t.Fatal(err)
			}
			mustRaw(t, s, fmt.Sprintf(`PRAGMA max_page_count = %d`, pages+8))
			save := saves(t, s, d, blob)[name]
			for range 3 {
				if err := save(); !errors.Is(err, ErrFull) {
					t.Fatalf("%v, want ErrFull", err)
				}
			}
			if got, err := s.Design(t.Context(), d.ID); err != nil || got.Version != d.Version || got.Revisions != 0 {
				t.Errorf("while full: %+v (%v), want it unchanged", got, err)
			}
			mustRaw(t, s, `PRAGMA max_page_count = 1000000`)
			if err := save(); err != nil {
				t.Errorf("the same save, with room again: %v", err)
			}
		})
	}
}
