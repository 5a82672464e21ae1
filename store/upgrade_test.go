package store

import (
	"fmt"
	"io/fs"
	"path/filepath"
	"slices"
	"strings"
	"testing"
	"testing/fstest"
	"time"

	"github.com/google/go-cmp/cmp"

	"lossbook/migrations"
)

const addColumn = `ALTER TABLE designs ADD COLUMN colour TEXT NOT NULL DEFAULT 'grey';`

// nextLayout is the present layout with steps that a later version might add.
func nextLayout(steps ...string) fs.FS {
	files := fstest.MapFS{}
	present, err := fs.Glob(migrations.Files, "*.sql")
	if err != nil {
		panic(err)
	}
	for _, name := range present {
		b, err := fs.ReadFile(migrations.Files, name)
		if err != nil {
			panic(err)
		}
		files[name] = &fstest.MapFile{Data: b}
	}
	for i, s := range steps {
		files[fmt.Sprintf("%04d_later.up.sql", len(present)+1+i)] = &fstest.MapFile{Data: []byte(s)}
	}
	return files
}

func openNext(t *testing.T, path string, steps ...string) (*Store, error) {
	t.Helper()
	next, err := newSchema(nextLayout(steps...))
	if err != nil {
		t.Fatal(err)
	}
	at := time.Date(2027, 1, 2, 3, 4, 5, 0, time.FixedZone("", 3600))
	return open(t.Context(), path, next, func() time.Time { return at })
}

func TestUpgradeKeepsADatedCopy(t *testing.T) {
	path := filepath.Join(t.TempDir(), "lossbook.db")
	soundFile(t, path)
	leaveLog(t, path) // after a crash, too
	old := openAt(t, path)
	want := dump(t, old.read)
	closeNow(t, old)

	s, err := openNext(t, path, addColumn, `UPDATE designs SET colour = 'blue'`)
	if err != nil {
		t.Fatal(err)
	}
	if diff := cmp.Diff(want, dump(t, s.read)); diff != "" {
		t.Errorf("revisions changed:\n%s", diff)
	}
	var colour string
	if err := s.read.QueryRow(`SELECT min(colour) FROM designs`).Scan(&colour); err != nil || colour != "blue" {
		t.Errorf("the steps did not run: %q, %v", colour, err)
	}
	closeNow(t, s)
	present := current(t).latest
	kept := fmt.Sprintf("%s.layout-%d.20270102T020405Z", path, present)
	if got := filesBelow(t, filepath.Dir(path)); !slices.Equal(got, []string{filepath.Base(path), filepath.Base(kept)}) {
		t.Errorf("left %v", got)
	}
	wantMode(t, path, 0o600)
	wantMode(t, kept, 0o600)
	if diff := cmp.Diff(want, dump(t, openAt(t, kept).read)); diff != "" {
		t.Errorf("the kept copy differs:\n%s", diff)
	}
	checkRefused(t, filepath.Dir(path), path, ErrNewer, fmt.Sprintf("newer Lossbook (layout %d, this one knows up to %d)", present+2, present))

	if s, err = openNext(t, path, addColumn, `never run again`); err != nil {
		t.Fatal(err)
	}
	closeNow(t, s)
}

func TestFailedUpgradeLeavesTheOldFile(t *testing.T) {
	for what, steps := range map[string][]string{
		"not SQL":           {"nonsense"},
		"the second fails":  {addColumn, addColumn},
		"against the rules": {`UPDATE revisions SET note = 'x'`},
		"leaves orphans":    {`CREATE TABLE t (d INTEGER REFERENCES designs (id) DEFERRABLE INITIALLY DEFERRED); INSERT INTO t VALUES (99)`},
	} {
		t.Run(what, func(t *testing.T) {
			path := filepath.Join(t.TempDir(), "lossbook.db")
			soundFile(t, path)
			before := stateOf(t, filepath.Dir(path))
			s, err := openNext(t, path, steps...)
			if err == nil {
				s.Close()
				t.Fatal("was opened")
			}
			t.Log(err)
			if text := err.Error(); !strings.Contains(text, "can't be brought up to date") || strings.Contains(text, "\n") || strings.Contains(text, "TABLE") {
				t.Errorf("words: %q", text)
			}
			if diff := cmp.Diff(before, stateOf(t, filepath.Dir(path))); diff != "" {
				t.Errorf("files changed:\n%s", diff)
			}
			openAt(t, path)
		})
	}
}

// The migration library leaves its transaction open when it can't note that a
// step begins: that must end in an error, and not in a wait.
func TestUpgradeThatCanNotBeNotedEnds(t *testing.T) {
	path := filepath.Join(t.TempDir(), "lossbook.db")
	inDatabase(`CREATE TRIGGER stuck BEFORE DELETE ON schema_migrations BEGIN SELECT RAISE(ABORT, 'stuck'); END`)(t, path)
	before := stateOf(t, filepath.Dir(path))
	ended := make(chan error, 1)
	go func() {
		_, err := openNext(t, path, addColumn)
		ended <- err
	}()
	select {
	case err := <-ended:
		if err == nil || !strings.Contains(err.Error(), "stuck") {
			t.Errorf("%v, want what the database said", err)
		}
	case <-time.After(20 * time.Second):
		t.Fatal("still waiting")
	}
	if diff := cmp.Diff(before, stateOf(t, filepath.Dir(path))); diff != "" {
		t.Errorf("files changed:\n%s", diff)
	}
}

func TestUpgradeStopsWhileAnotherProgramReads(t *testing.T) {
	path := filepath.Join(t.TempDir(), "lossbook.db")
	leaveLog(t, path)
	db := loose(t, path)
	rows, err := db.Query(`SELECT name FROM designs`)
	if err != nil || !rows.Next() {
		t.Fatal(err)
	}
	if s, err := openNext(t, path, addColumn); err == nil || !strings.Contains(err.Error(), "another program is reading") {
		t.Errorf("%v, %v; want it refused", s, err)
	}
	rows.Close()
	db.Close()
	s, err := openNext(t, path, addColumn)
	if err != nil {
		t.Fatal(err)
	}
	closeNow(t, s)
}

func TestStepsThatCanNotBeRead(t *testing.T) {
	for _, files := range []fstest.MapFS{{}, {"readme.txt": {}}} {
		if _, err := newSchema(files); err == nil {
			t.Errorf("%v: taken for a schema", files)
		}
	}
	if got := current(t).latest; got != uint(len(filesIn(t, migrations.Files))) {
		t.Errorf("latest is %d, with %d files", got, len(filesIn(t, migrations.Files)))
	}
}

func filesIn(t *testing.T, files fs.FS) []fs.DirEntry {
	t.Helper()
	list, err := fs.ReadDir(files, ".")
	if err != nil || len(list) == 0 {
		t.Fatal(list, err)
	}
	return list
}
