package store

import (
	"database/sql"
	"errors"
	"strings"
	"sync"
	"testing"
	"time"

	"github.com/google/go-cmp/cmp"
)

func TestRevisionReadsAsSaved(t *testing.T) {
	s := openNew(t)
	d := create1(t, s, "d")
	first, second := save1(t, s, d, "first"), save1(t, s, d, "")
	if first.Number != 1 || second.Number != 2 {
		t.Errorf("numbers %d, %d; want 1, 2", first.Number, second.Number)
	}
	for _, want := range []Revision{first, second} {
		got, err := s.Revision(t.Context(), d.ID, want.Number)
		if err != nil || cmp.Diff(want, got) != "" {
			t.Errorf("revision %d (%v) (-saved +read):\n%s", want.Number, err, cmp.Diff(want, got))
		}
	}
	heads, err := s.Revisions(t.Context(), d.ID)
	if err != nil || cmp.Diff([]RevisionHead{head(second), head(first)}, heads) != "" {
		t.Errorf("heads (%v): %+v", err, heads)
	}
	after, _ := s.Design(t.Context(), d.ID)
	if after.Revisions != 2 || after.LatestRevision != 2 || after.Version != d.Version {
		t.Errorf("design afterwards: %+v", after)
	}
	if _, err := s.Revision(t.Context(), d.ID, 3); !errors.Is(err, ErrNotFound) {
		t.Errorf("revision 3: %v, want ErrNotFound", err)
	}
}

func head(r Revision) RevisionHead {
	return RevisionHead{r.Design, r.Number, r.Note, r.CreatedAt, r.Model, r.Hash}
}

func TestEmptyRevision(t *testing.T) {
	s := openNew(t)
	d := create1(t, s, "d")
	saved, err := s.SaveRevision(t.Context(), d.ID, d.Version, NewRevision{})
	if err != nil {
		t.Fatal(err)
	}
	got, err := s.Revision(t.Context(), d.ID, 1)
	if err != nil || cmp.Diff(saved, got) != "" {
		t.Errorf("%v:\n%s", err, cmp.Diff(saved, got))
	}
}

func TestConcurrentRevisionsAreNumberedOnce(t *testing.T) {
	const savers = 16
	s := openNew(t)
	d := create1(t, s, "d")
	var numbers sync.Map
	var all sync.WaitGroup
	for range savers {
		all.Go(func() {
			r, err := s.SaveRevision(t.Context(), d.ID, d.Version, someRevision(""))
			if _, twice := numbers.LoadOrStore(r.Number, true); err != nil || twice || r.Number > savers {
				t.Errorf("number %d, twice: %v, %v", r.Number, twice, err)
			}
		})
	}
	all.Wait()
}

// attempts are ways to change or lose revision 1 of design 1, which has two.
var attempts = []string{
	`UPDATE revisions SET note = 'x'`,
	`UPDATE revisions SET points = x'' WHERE number = 2`,
	`UPDATE revisions SET number = 3 WHERE number = 2`,
	`UPDATE OR REPLACE revisions SET number = 1 WHERE number = 2`,
	`DELETE FROM revisions`,
	`DELETE FROM revisions WHERE number = 2`,
	`INSERT OR REPLACE INTO revisions SELECT id + 10, design, number, created_at, model, hash, 'x', complete, draft, points, findings FROM revisions WHERE number = 1`,
	`INSERT OR REPLACE INTO revisions SELECT id + 10, design, number, created_at, model, hash, 'x', complete, draft, points, findings FROM revisions WHERE number = 2`,
	`REPLACE INTO revisions SELECT id, design, 5, created_at, model, hash, 'x', complete, draft, points, findings FROM revisions WHERE number = 1`,
	`REPLACE INTO revisions SELECT id, design, 3, created_at, model, hash, 'x', complete, draft, points, findings FROM revisions WHERE number = 1`,
	`REPLACE INTO revisions (_rowid_, design, number, created_at, model, hash, note, complete, draft, points, findings)
		SELECT id, design, 3, created_at, model, hash, 'x', complete, draft, points, findings FROM revisions WHERE number = 2`,
	`UPDATE OR REPLACE revisions SET id = 1 WHERE number = 2`,
	`INSERT INTO revisions SELECT * FROM revisions WHERE true ON CONFLICT DO UPDATE SET note = 'x'`,
	`DELETE FROM designs`,
	`UPDATE designs SET id = 9`,
	`UPDATE designs SET deleted_at = (unixepoch() - 29 * 86400) * 1000000; DELETE FROM revisions`,
	`UPDATE designs SET deleted_at = unixepoch() * 1000000; DELETE FROM revisions`,
}

func TestRevisionsCanNotBeChanged(t *testing.T) {
	path := dataFile(t)
	s := openAt(t, path)
	d := create1(t, s, "d")
	save1(t, s, d, "one")
	save1(t, s, d, "two")
	want := dump(t, s.write)
	for _, attempt := range attempts {
		if err := raw(t, s, attempt); err == nil {
			t.Errorf("went through: %s", attempt)
		}
		mustRaw(t, s, `UPDATE designs SET deleted_at = NULL`)
	}
	if diff := cmp.Diff(want, dump(t, s.write)); diff != "" {
		t.Errorf("revisions changed:\n%s", diff)
	}
}

// Another program opens the file without recursive_triggers, with which
// REPLACE deletes past the triggers on DELETE, and without foreign keys.
func TestRevisionsCanNotBeReplacedByOthers(t *testing.T) {
	path := dataFile(t)
	s := openAt(t, path)
	d := create1(t, s, "d")
	save1(t, s, d, "one")
	save1(t, s, d, "two")
	closeNow(t, s)
	db := loose(t, path)
	want := dump(t, db)
	for _, attempt := range attempts {
		db.Exec(attempt)
		db.Exec(`UPDATE designs SET deleted_at = NULL`)
	}
	if diff := cmp.Diff(want, dump(t, db)); diff != "" {
		t.Errorf("revisions changed:\n%s", diff)
	}
}

func dump(t *testing.T, db *sql.DB) []string {
	t.Helper()
	rows, err := db.Query(`SELECT concat_ws('|', id, design, number, created_at, model, hash, note, hex(complete), hex(draft), hex(points), hex(findings)) FROM revisions`)
	if err != nil {
		t.Fatal(err)
	}
	defer rows.Close()
	var list []string
	for rows.Next() {
		var line string
		if err := rows.Scan(&line); err != nil {
			t.Fatal(err)
		}
		list = append(list, line)
	}
	return list
}

// Whoever drops the triggers first can change a revision, but not unnoticed.
func TestTamperedRevisionIsNoticed(t *testing.T) {
	tampering := map[string]string{
		"number":     `UPDATE revisions SET number = 7`,
		"created_at": `UPDATE revisions SET created_at = created_at + 1`,
		"model":      `UPDATE revisions SET model = '1.0.1'`,
		"hash":       `UPDATE revisions SET hash = replace(hash, substr(hash, 1, 1), 'x')`,
		"note":       `UPDATE revisions SET note = 'other'`,
		"complete":   `UPDATE revisions SET complete = x'7b7d'`,
		"draft":      `UPDATE revisions SET draft = x'7b7d'`,
		"points":     `UPDATE revisions SET points = x'5b5d'`,
		"findings":   `UPDATE revisions SET findings = x'7b7d'`,
		"boundary":   `UPDATE revisions SET note = note || substr(model, 1, 1), model = substr(model, 2)`,
	}
	for what, change := range tampering {
		t.Run(what, func(t *testing.T) {
			s := openNew(t)
			d := create1(t, s, "d")
			save1(t, s, d, "note")
			mustRaw(t, s, `DROP TRIGGER revisions_never_change`)
			mustRaw(t, s, change)
			heads, err := s.Revisions(t.Context(), d.ID)
			if err != nil || len(heads) != 1 {
				t.Fatal(heads, err)
			}
			_, err = s.Revision(t.Context(), d.ID, heads[0].Number)
			if !errors.Is(err, ErrCorrupt) || !strings.Contains(err.Error(), "not what was saved") {
				t.Errorf("read it with %v, want ErrCorrupt", err)
			}
		})
	}
}

// The hash is kept in data files: what it is computed from can't change.
func TestContentHashStays(t *testing.T) {
	r := Revision{Design: 4, Number: 3, Note: "n", CreatedAt: time.UnixMicro(1).UTC(), Model: "m",
		DesignJSON: []byte("d"), Draft: []byte("e"), Points: []byte("p"), Findings: []byte("f")}
	const want = "2be14ddc2e064bfbc24b0d78ba42eb5fc7385bd68d10386cf3e3e973d18a65f2"
	if got := r.contentHash(); got != want {
		t.Errorf("hash %s, want %s", got, want)
	}
}
