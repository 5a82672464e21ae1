package store

import (
	"errors"
	"fmt"
	"sync"
	"sync/atomic"
	"testing"

	"github.com/google/go-cmp/cmp"
)

func TestDesignKeepsWhatItIsGiven(t *testing.T) {
	s := openNew(t)
	given := NewDesign{Name: "Frost mast", Sample: true, Draft: []byte("{\"a\":\"4k7\",\n \"b\":\"\x00µ\"}"), Complete: []byte(`{"format":"lossbook/1"}`)}
	made, err := s.Create(t.Context(), given)
	if err != nil {
		t.Fatal(err)
	}
	read, err := s.Design(t.Context(), made.ID)
	if err != nil {
		t.Fatal(err)
	}
	if diff := cmp.Diff(made, read); diff != "" {
		t.Errorf("created and read differ (-created +read):\n%s", diff)
	}
	want := Design{ID: made.ID, Name: given.Name, Sample: true, CreatedAt: read.CreatedAt, UpdatedAt: read.CreatedAt,
		Version: 1, Draft: given.Draft, Complete: given.Complete}
	if diff := cmp.Diff(want, read); diff != "" {
		t.Errorf("-want +got:\n%s", diff)
	}
	if read.CreatedAt.IsZero() {
		t.Error("no time of creation")
	}
}

func TestIncompleteDesignHasNoCompleteState(t *testing.T) {
	s := openNew(t)
	for _, none := range [][]byte{nil, {}} {
		d, err := s.Create(t.Context(), NewDesign{Complete: none})
		if err != nil {
			t.Fatal(err)
		}
		if d.Complete != nil || len(d.Draft) != 0 {
			t.Errorf("complete %v, draft %v; want nil and empty", d.Complete, d.Draft)
		}
	}
}

func TestUpdate(t *testing.T) {
	s := openNew(t)
	d := create1(t, s, "first")
	steps := []struct {
		what    string
		change  Change
		version int64
		want    string // complete
	}{
		{"a draft", Change{Name: "first", Draft: []byte(`{"x":"1"}`)}, 2, ""},
		{"the same again", Change{Name: "first", Draft: []byte(`{"x":"1"}`)}, 2, ""},
		{"complete", Change{Name: "first", Draft: []byte(`{"x":"2"}`), Complete: []byte(`{"x":2}`)}, 3, `{"x":2}`},
		{"incomplete again keeps the complete one", Change{Name: "first", Draft: []byte(`{"x":""}`)}, 4, `{"x":2}`},
		{"a name", Change{Name: "second", Draft: []byte(`{"x":""}`)}, 5, `{"x":2}`},
		{"the same, complete named", Change{Name: "second", Draft: []byte(`{"x":""}`), Complete: []byte(`{"x":2}`)}, 5, `{"x":2}`},
		{"only complete", Change{Name: "second", Draft: []byte(`{"x":""}`), Complete: []byte(`{"x":3}`)}, 6, `{"x":3}`},
	}
	for _, step := range steps {
		before := d
		var err error
		if d, err = s.Update(t.Context(), d.ID, d.Version, step.change); err != nil {
			t.Fatalf("%s: %v", step.what, err)
		}
		if d.Version != step.version || d.Name != step.change.Name || string(d.Draft) != string(step.change.Draft) || string(d.Complete) != step.want {
			t.Errorf("%s: got version %d, %q, %s, %s", step.what, d.Version, d.Name, d.Draft, d.Complete)
		}
		if kept := d.UpdatedAt.Equal(before.UpdatedAt); kept != (d.Version == before.Version) {
			t.Errorf("%s: version %d → %d, but time of change kept: %v", step.what, before.Version, d.Version, kept)
		}
	}
}

func TestStaleUpdateChangesNothing(t *testing.T) {
	s := openNew(t)
	old := create1(t, s, "mine")
	now, err := s.Update(t.Context(), old.ID, old.Version, Change{Name: "theirs", Draft: []byte(`{}`)})
	if err != nil {
		t.Fatal(err)
	}
	for _, version := range []int64{old.Version, now.Version + 1, 0} {
		var stale *StaleError
		_, err = s.Update(t.Context(), old.ID, version, Change{Name: "mine again"})
		if !errors.As(err, &stale) {
			t.Fatalf("from version %d: %v, want a StaleError", version, err)
		}
		if diff := cmp.Diff(now, stale.Current); diff != "" {
			t.Errorf("the error carries another state (-stored +carried):\n%s", diff)
		}
		if _, err = s.SaveRevision(t.Context(), old.ID, version, someRevision("")); !errors.As(err, &stale) {
			t.Errorf("revision from version %d: %v, want a StaleError", version, err)
		}
	}
	if got, _ := s.Design(t.Context(), old.ID); cmp.Diff(now, got) != "" {
		t.Errorf("changed by a stale update:\n%s", cmp.Diff(now, got))
	}
}

func TestMissingDesign(t *testing.T) {
	s := openNew(t)
	binned := create1(t, s, "binned")
	save1(t, s, binned, "")
	if err := s.Delete(t.Context(), binned.ID); err != nil {
		t.Fatal(err)
	}
	for _, id := range []int64{binned.ID, binned.ID + 1, 0, -1} {
		calls := map[string]func() error{
			"Design":       func() error { _, err := s.Design(t.Context(), id); return err },
			"Update":       func() error { _, err := s.Update(t.Context(), id, 1, Change{}); return err },
			"Delete":       func() error { return s.Delete(t.Context(), id) },
			"SaveRevision": func() error { _, err := s.SaveRevision(t.Context(), id, 1, NewRevision{}); return err },
			"Revisions":    func() error { _, err := s.Revisions(t.Context(), id); return err },
			"Revision":     func() error { _, err := s.Revision(t.Context(), id, 1); return err },
		}
		for name, call := range calls {
			if err := call(); !errors.Is(err, ErrNotFound) {
				t.Errorf("%s of design %d: %v, want ErrNotFound", name, id, err)
			}
		}
	}
}

func TestListNewestFirst(t *testing.T) {
	s := openNew(t)
	a, b, c := create1(t, s, "a"), create1(t, s, "b"), create1(t, s, "c")
	if _, err := s.Update(t.Context(), a.ID, 1, Change{Name: "a2"}); err != nil {
		t.Fatal(err)
	}
	if err := s.Delete(t.Context(), c.ID); err != nil {
		t.Fatal(err)
	}
	wantNames(t, s, "a2", b.Name)
}

func wantNames(t *testing.T, s *Store, want ...string) {
	t.Helper()
	list, err := s.Designs(t.Context())
	if err != nil {
		t.Fatal(err)
	}
	var got []string
	for _, d := range list {
		got = append(got, d.Name)
	}
	if diff := cmp.Diff(want, got); diff != "" {
		t.Errorf("designs listed (-want +got):\n%s", diff)
	}
}

// Each writer goes on from the version it read until its change is taken: in
// the end every change was taken once.
func TestConcurrentWriters(t *testing.T) {
	const writers, changes = 16, 8
	s := openNew(t)
	d := create1(t, s, "shared")
	var stale atomic.Int64
	var all sync.WaitGroup
	for w := range writers {
		all.Go(func() {
			for c := range changes {
				err := changeOnce(t, s, d.ID, fmt.Sprintf("%d.%d", w, c), &stale)
				if err != nil {
					t.Error(err)
					return
				}
			}
		})
	}
	all.Wait()
	got, err := s.Design(t.Context(), d.ID)
	if err != nil || got.Version != 1+writers*changes {
		t.Errorf("version %d (%v), want %d", got.Version, err, 1+writers*changes)
	}
	if stale.Load() == 0 {
		t.Error("no change was ever stale: the writers never met")
	}
}

func changeOnce(t *testing.T, s *Store, id int64, name string, refused *atomic.Int64) error {
	for {
		d, err := s.Design(t.Context(), id)
		if err != nil {
			return err
		}
		_, err = s.Update(t.Context(), id, d.Version, Change{Name: name})
		var stale *StaleError
		if !errors.As(err, &stale) {
			return err
		}
		refused.Add(1)
	}
}
