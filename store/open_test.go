package store

import (
	"crypto/sha256"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
)

// filesBelow lists all files in dir, by their relative paths.
func filesBelow(t testing.TB, dir string) []string {
	t.Helper()
	var list []string
	err := filepath.WalkDir(dir, func(path string, e fs.DirEntry, err error) error {
		if err == nil && !e.IsDir() {
			rel, _ := filepath.Rel(dir, path)
			list = append(list, rel)
		}
		return err
	})
	if err != nil {
		t.Fatal(err)
	}
	return list
}

// stateOf gives the names and hashes of all files in dir.
func stateOf(t testing.TB, dir string) []string {
	t.Helper()
	list := filesBelow(t, dir)
	for i, name := range list {
		b, err := os.ReadFile(filepath.Join(dir, name))
		if err != nil {
			t.Fatal(err)
		}
		list[i] = fmt.Sprintf("%s %x", name, sha256.Sum256(b))
	}
	return list
}

// soundFile makes a data file with something in it.
func soundFile(t testing.TB, path string) {
	t.Helper()
	s := openAt(t, path)
	d := create1(t, s, "d")
	for range 40 {
		save1(t, s, d, strings.Repeat("note ", 500))
	}
	closeNow(t, s)
}

// leaveLog leaves a data file as a crash does: with work in the log beside it.
func leaveLog(t testing.TB, path string, work ...string) {
	t.Helper()
	s := openAt(t, path)
	create1(t, s, "in the log")
	for _, w := range work {
		mustRaw(t, s, w)
	}
	copies := map[string][]byte{}
	for _, suffix := range []string{"", "-wal"} {
		b, err := os.ReadFile(path + suffix)
		if err != nil || len(b) == 0 {
			t.Fatalf("%s%s: %d bytes, %v", path, suffix, len(b), err)
		}
		copies[suffix] = b
	}
	closeNow(t, s)
	for suffix, b := range copies {
		write(t, path+suffix, b)
	}
}

func write(t testing.TB, path string, b []byte) {
	t.Helper()
	if err := os.WriteFile(path, b, 0o600); err != nil {
		t.Fatal(err)
	}
}

func edit(t testing.TB, path string, change func([]byte) []byte) {
	t.Helper()
	b, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	write(t, path, change(b))
}

func inDatabase(statements ...string) func(*testing.T, string) {
	return func(t *testing.T, path string) {
		soundFile(t, path)
		db := loose(t, path)
		for _, s := range statements {
			mustExec(t, db, s)
		}
		if err := db.Close(); err != nil {
			t.Fatal(err)
		}
	}
}

func onBytes(change func([]byte) []byte) func(*testing.T, string) {
	return func(t *testing.T, path string) {
		soundFile(t, path)
		edit(t, path, change)
	}
}

type refusedCase struct {
	what  string
	make  func(t *testing.T, path string)
	kind  error
	words string
}

var refused = []refusedCase{
	{"text", func(t *testing.T, p string) { write(t, p, []byte("vin,iout\n12,3\n")) }, ErrForeign, "not a Lossbook data file"},
	{"one byte", func(t *testing.T, p string) { write(t, p, []byte("x")) }, ErrForeign, "not a Lossbook data file"},
	{"garbage", func(t *testing.T, p string) { write(t, p, []byte(strings.Repeat("\xff\x00\x17", 9999))) }, ErrForeign, "not a Lossbook data file"},
	{"empty", func(t *testing.T, p string) { write(t, p, nil) }, ErrBroken, "is empty"},
	{"another database", func(t *testing.T, p string) {
		db := loose(t, p)
		mustExec(t, db, `CREATE TABLE designs (id INTEGER); PRAGMA application_id = 7`)
		db.Close()
	}, ErrForeign, "another program"},
	{"another database with a log", func(t *testing.T, p string) {
		db := loose(t, p)
		mustExec(t, db, `PRAGMA journal_mode = WAL; CREATE TABLE a (b); PRAGMA wal_checkpoint; INSERT INTO a VALUES (1)`)
		main, _ := os.ReadFile(p)
		log, _ := os.ReadFile(p + "-wal")
		db.Close()
		write(t, p, main)
		write(t, p+"-wal", log)
	}, ErrForeign, "another program"},
	{"our mark without our tables", func(t *testing.T, p string) {
		db := loose(t, p)
		mustExec(t, db, fmt.Sprintf(`CREATE TABLE a (b); PRAGMA application_id = %d`, applicationID))
		db.Close()
	}, ErrBroken, "tables are missing"},
	{"cut in the header", onBytes(func(b []byte) []byte { return b[:60] }), ErrBroken, "ends within its header"},
	{"cut after the header", onBytes(func(b []byte) []byte { return b[:100] }), ErrBroken, "damaged"},
	{"cut to half", onBytes(func(b []byte) []byte { return b[:len(b)/2] }), ErrBroken, "damaged"},
	{"cut by a page", onBytes(func(b []byte) []byte { return b[:len(b)-4096] }), ErrBroken, "damaged"},
	{"cut by a byte", onBytes(func(b []byte) []byte { return b[:len(b)-1] }), ErrBroken, "damaged"},
	{"a page overwritten", onBytes(func(b []byte) []byte {
		copy(b[5*4096:6*4096], strings.Repeat("\xa5", 4096))
		return b
	}), ErrBroken, "damaged"},
	{"first page overwritten behind the header", onBytes(func(b []byte) []byte {
		copy(b[100:4096], strings.Repeat("\xa5", 4096))
		return b
	}), ErrBroken, "damaged"},
	{"orphans", inDatabase(`PRAGMA foreign_keys = 0`, `DELETE FROM designs`), ErrBroken, "refer to others"},
	{"newer", inDatabase(`UPDATE schema_migrations SET version = 99`), ErrNewer, "newer Lossbook (layout 99"},
	{"newer in the log", func(t *testing.T, p string) {
		leaveLog(t, p, `UPDATE schema_migrations SET version = 99`)
	}, ErrNewer, "newer Lossbook"},
	{"half migrated", inDatabase(`UPDATE schema_migrations SET dirty = 1`), ErrBroken, "cut short"},
	{"no version", inDatabase(`DELETE FROM schema_migrations`), ErrBroken, "tables are missing"},
	{"log without its file", func(t *testing.T, p string) {
		leaveLog(t, p)
		os.Remove(p)
	}, ErrBroken, "is missing, but its log"},
	{"folder", func(t *testing.T, p string) { os.Mkdir(p, 0o700) }, ErrUnreadable, "is a folder"},
	{"dangling link", func(t *testing.T, p string) { os.Symlink(p+".gone", p) }, ErrUnreadable, "link to a file that isn't there"},
}

func TestRefusedFilesStayUntouched(t *testing.T) {
	for _, c := range refused {
		t.Run(c.what, func(t *testing.T) {
			dir := t.TempDir()
			path := filepath.Join(dir, "lossbook.db")
			c.make(t, path)
			checkRefused(t, dir, path, c.kind, c.words)
		})
	}
}

func checkRefused(t *testing.T, dir, path string, kind error, words string) {
	t.Helper()
	readable := !strings.Contains(t.Name(), "pipe") && !strings.Contains(t.Name(), "link")
	list := func() []string {
		if readable {
			return stateOf(t, dir)
		}
		return filesBelow(t, dir)
	}
	before := list()
	s, err := Open(t.Context(), path)
	if err == nil {
		s.Close()
		t.Fatal("was opened")
	}
	t.Log(err)
	if !errors.Is(err, kind) || !strings.Contains(err.Error(), words) || strings.Contains(err.Error(), "\n") {
		t.Errorf("refused with %q, want one line of kind %q with %q", err, kind, words)
	}
	if diff := cmp.Diff(before, list()); diff != "" {
		t.Errorf("files changed:\n%s", diff)
	}
}

func TestFileBelowAFileIsRefused(t *testing.T) {
	dir := t.TempDir()
	write(t, filepath.Join(dir, "file"), []byte("x"))
	checkRefused(t, dir, filepath.Join(dir, "file", "lossbook.db"), ErrUnreadable, "not a directory")
}

func TestCloseLeavesOneFile(t *testing.T) {
	path := dataFile(t)
	s := openAt(t, path)
	create1(t, s, "d")
	if got := filesBelow(t, filepath.Dir(path)); !slices.Contains(got, "lossbook.db-wal") {
		t.Errorf("no log while open: %v", got)
	}
	closeNow(t, s)
	if got := filesBelow(t, filepath.Dir(path)); !slices.Equal(got, []string{"lossbook.db"}) {
		t.Errorf("left %v", got)
	}
}

func TestLogOfACrashIsWorkedIn(t *testing.T) {
	path := dataFile(t)
	leaveLog(t, path)
	scratch := t.TempDir()
	t.Setenv("TMPDIR", scratch)
	wantNames(t, openAt(t, path), "in the log")
	if left := filesBelow(t, scratch); len(left) > 0 {
		t.Errorf("the inspection left %v", left)
	}
}

// A crash while the file was first made leaves only its draft.
func TestLeftDraftIsReplaced(t *testing.T) {
	path := dataFile(t)
	os.MkdirAll(filepath.Dir(path), 0o700)
	write(t, path+".building", []byte("half"))
	write(t, path+".building-wal", []byte("half"))
	s := openAt(t, path)
	create1(t, s, "d")
	closeNow(t, s)
	if got := filesBelow(t, filepath.Dir(path)); !slices.Equal(got, []string{"lossbook.db"}) {
		t.Errorf("left %v", got)
	}
}

func TestRefusalIsOneLine(t *testing.T) {
	err := refusal("x.db", errors.Join(errors.New("this"), errors.New("that")))
	if want := "data file x.db can't be opened: this; that; mend that, or name another file"; err.Error() != want {
		t.Errorf("%q, want %q", err, want)
	}
}
