package store

import (
	"context"
	"database/sql"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"testing"
	"time"

	"lossbook/migrations"
)

// TestMain lets a test start this binary again as one of its helpers.
func TestMain(m *testing.M) {
	if run, ok := children[os.Getenv(childEnv)]; ok {
		if err := run(os.Args[1:]); err != nil {
			fmt.Fprintln(os.Stderr, err)
			os.Exit(1)
		}
		os.Exit(0)
	}
	os.Exit(m.Run())
}

const childEnv = "LOSSBOOK_TEST_CHILD"

// children are the parts of tests that need a process of their own.
var children = map[string]func(args []string) error{
	"open":              openOnly,
	"save until killed": saveUntilKilled,
}

func dataFile(t testing.TB) string {
	t.Helper()
	return filepath.Join(t.TempDir(), "data", "lossbook.db")
}

func openAt(t testing.TB, path string) *Store {
	t.Helper()
	s, err := Open(t.Context(), path)
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { s.Close() })
	return s
}

func openNew(t testing.TB) *Store {
	t.Helper()
	return openAt(t, dataFile(t))
}

func closeNow(t testing.TB, s *Store) {
	t.Helper()
	if err := s.Close(); err != nil {
		t.Fatal(err)
	}
}

func create1(t testing.TB, s *Store, name string) Design {
	t.Helper()
	d, err := s.Create(t.Context(), NewDesign{Name: name, Draft: []byte(`{"frequency":"100k"}`)})
	if err != nil {
		t.Fatal(err)
	}
	return d
}

func save1(t testing.TB, s *Store, d Design, note string) Revision {
	t.Helper()
	r, err := s.SaveRevision(t.Context(), d.ID, d.Version, someRevision(note))
	if err != nil {
		t.Fatal(err)
	}
	return r
}

func someRevision(note string) NewRevision {
	return NewRevision{
		Note: note, Model: "1.0.0",
		DesignJSON: []byte(`{"format":"lossbook/1"}`), Draft: []byte(`{"frequency":"100k"}`),
		Points: []byte(`[{"vin":12}]`), Findings: []byte(`[]`),
	}
}

// raw runs SQL that the store itself never would.
func raw(t testing.TB, s *Store, query string, args ...any) error {
	t.Helper()
	_, err := s.write.ExecContext(t.Context(), query, args...)
	return err
}

func mustRaw(t testing.TB, s *Store, query string, args ...any) {
	t.Helper()
	if err := raw(t, s, query, args...); err != nil {
		t.Fatal(err)
	}
}

// loose opens a database without any of the store's settings, as other
// programs would.
func loose(t testing.TB, path string) *sql.DB {
	t.Helper()
	db, err := sql.Open("sqlite", path)
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { db.Close() })
	return db
}

func mustExec(t testing.TB, db *sql.DB, query string) {
	t.Helper()
	if _, err := db.Exec(query); err != nil {
		t.Fatal(err)
	}
}

// fixedClock goes on by a second each time it is read.
func fixedClock() func() time.Time {
	at := time.Date(2026, 11, 30, 9, 0, 0, 0, time.UTC)
	return func() time.Time {
		at = at.Add(time.Second)
		return at
	}
}

func current(t testing.TB) schema {
	t.Helper()
	known, err := newSchema(migrations.Files)
	if err != nil {
		t.Fatal(err)
	}
	return known
}

// openOnly opens the file its argument names, and closes it.
func openOnly(args []string) error {
	s, err := Open(context.Background(), args[0])
	if err != nil {
		return err
	}
	return s.Close()
}

func wantMode(t *testing.T, path string, mode fs.FileMode) {
	t.Helper()
	info, err := os.Stat(path)
	if err != nil || info.Mode().Perm() != mode {
		t.Errorf("%s: mode %v (%v), want %v", path, info.Mode(), err, mode)
	}
}
