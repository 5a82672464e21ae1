package store

import (
	"errors"
	"testing"
	"time"

	"github.com/google/go-cmp/cmp"
)

func TestDeleteAndRestore(t *testing.T) {
	s := openNew(t)
	d := create1(t, s, "kept")
	r := save1(t, s, d, "note")
	want, _ := s.Design(t.Context(), d.ID)
	if err := s.Delete(t.Context(), d.ID); err != nil {
		t.Fatal(err)
	}
	wantNames(t, s)
	if bin, err := s.Bin(t.Context()); err != nil || len(bin) != 1 || bin[0].ID != d.ID || bin[0].DeletedAt.IsZero() {
		t.Errorf("bin holds %+v (%v)", bin, err)
	}
	got, err := s.Restore(t.Context(), d.ID)
	if err != nil || cmp.Diff(want, got) != "" {
		t.Errorf("restored (%v):\n%s", err, cmp.Diff(want, got))
	}
	back, err := s.Revision(t.Context(), d.ID, 1)
	if err != nil || cmp.Diff(r, back) != "" {
		t.Errorf("revision after restoring (%v):\n%s", err, cmp.Diff(r, back))
	}
	if _, err := s.Restore(t.Context(), d.ID); !errors.Is(err, ErrNotFound) {
		t.Errorf("restored what isn't in the bin: %v", err)
	}
	if bin, _ := s.Bin(t.Context()); len(bin) != 0 {
		t.Errorf("bin still holds %+v", bin)
	}
}

func TestPurge(t *testing.T) {
	s := openNew(t)
	binnedFor := map[string]time.Duration{"just in": 0, "a minute left": binTime - time.Minute, "due": binTime + 2*time.Second}
	for name, age := range binnedFor {
		d := create1(t, s, name)
		save1(t, s, d, "")
		share1(t, s, d, 1, "")
		if _, err := s.Update(t.Context(), d.ID, d.Version, Change{Name: name, Draft: []byte(`{"a":"b"}`)}); err != nil {
			t.Fatal(err)
		}
		mustRaw(t, s, `UPDATE designs SET deleted_at = ? WHERE id = ?`, time.Now().Add(-age).UnixMicro(), d.ID)
	}
	kept := create1(t, s, "kept")
	save1(t, s, kept, "")

	// A caller's clock that is ahead shortens nothing; one that is behind waits.
	if n, err := s.Purge(t.Context(), time.Now().Add(-time.Hour)); n != 0 || err != nil {
		t.Errorf("an hour early: purged %d (%v), want none", n, err)
	}
	if n, err := s.Purge(t.Context(), time.Now().Add(365*24*time.Hour)); n != 1 || err != nil {
		t.Errorf("a year ahead: purged %d (%v), want the one that is due", n, err)
	}
	if n, err := s.Purge(t.Context(), time.Now()); n != 0 || err != nil {
		t.Errorf("again: purged %d (%v), want none", n, err)
	}
	var designs, revisions, links, steps int
	const counts = `SELECT (SELECT count(*) FROM designs), (SELECT count(*) FROM revisions), (SELECT count(*) FROM shares), (SELECT count(*) FROM steps)`
	if err := s.read.QueryRow(counts).Scan(&designs, &revisions, &links, &steps); err != nil {
		t.Fatal(err)
	}
	if designs != 3 || revisions != 3 || links != 2 || steps != 2 {
		t.Errorf("%d designs, %d revisions, %d links and %d steps left, want 3, 3, 2 and 2", designs, revisions, links, steps)
	}
}

func TestOpenPurges(t *testing.T) {
	path := dataFile(t)
	s := openAt(t, path)
	d := create1(t, s, "due")
	save1(t, s, d, "")
	mustRaw(t, s, `UPDATE designs SET deleted_at = ?`, time.Now().Add(-binTime-2*time.Second).UnixMicro())
	closeNow(t, s)
	s = openAt(t, path)
	if bin, err := s.Bin(t.Context()); err != nil || len(bin) != 0 {
		t.Errorf("still in the bin: %+v (%v)", bin, err)
	}
	if next := create1(t, s, "next"); next.ID <= d.ID {
		t.Errorf("id %d given again", next.ID)
	}
}

func TestSeedOnce(t *testing.T) {
	path := dataFile(t)
	s := openAt(t, path)
	samples := []NewDesign{{Name: "one", Sample: true}, {Name: "two", Sample: true}, {Name: "three", Sample: true}}
	if err := s.Seed(t.Context(), samples); err != nil {
		t.Fatal(err)
	}
	wantNames(t, s, "one", "two", "three")
	list, _ := s.Designs(t.Context())
	if err := s.Delete(t.Context(), list[1].ID); err != nil {
		t.Fatal(err)
	}
	closeNow(t, s)
	s = openAt(t, path)
	if err := s.Seed(t.Context(), samples); err != nil {
		t.Fatal(err)
	}
	wantNames(t, s, "one", "three")
}
