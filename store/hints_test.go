package store

import "testing"

func TestHintsStayAway(t *testing.T) {
	path := dataFile(t)
	s := openAt(t, path)
	want := func(hint string, away bool) {
		t.Helper()
		if got, err := s.IsAway(t.Context(), hint); err != nil || got != away {
			t.Errorf("%s is away: %v (%v), want %v", hint, got, err, away)
		}
	}
	want("list", false)
	for range 2 {
		if err := s.PutAway(t.Context(), "list"); err != nil {
			t.Fatal(err)
		}
	}
	want("list", true)
	want("sheet", false)
	closeNow(t, s)
	s = openAt(t, path)
	want("list", true)
	want("lis", false)
}
