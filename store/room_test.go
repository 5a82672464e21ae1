package store

import (
	"errors"
	"os"
	"path/filepath"
	"runtime"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
)

// A new layout is not begun without room for it: the boundary is tried on both sides,
// with a log beside the file and without.
func TestUpgradeNeedsRoom(t *testing.T) {
	for what, prepare := range map[string]func(testing.TB, string){"at rest": soundFile, "after a crash": func(t testing.TB, path string) {
		soundFile(t, path)
		leaveLog(t, path)
	}} {
		t.Run(what, func(t *testing.T) {
			path := filepath.Join(t.TempDir(), "lossbook.db")
			prepare(t, path)
			size := uint64(0)
			for _, name := range []string{path, path + "-wal"} {
				if info, err := os.Stat(name); err == nil {
					size += uint64(info.Size())
				}
			}
			next, err := newSchema(nextLayout(addColumn))
			if err != nil {
				t.Fatal(err)
			}
			before := stateOf(t, filepath.Dir(path))
			asked := ""
			next.room = func(folder string) (uint64, bool) { asked = folder; return 3*size - 1, true }
			_, err = open(t.Context(), path, next, fixedClock())
			var refused *OpenError
			if !errors.Is(err, ErrNoRoom) || !errors.As(err, &refused) || !strings.Contains(refused.Words, "needs about ") || !strings.Contains(refused.Words, " MB are free; make room and start again") {
				t.Fatalf("with a byte too little: %v", err)
			}
			t.Log(err)
			if diff := cmp.Diff(before, stateOf(t, filepath.Dir(path))); diff != "" {
				t.Errorf("files changed:\n%s", diff)
			}
			if asked != filepath.Dir(path) {
				t.Errorf("asked for the room of %q", asked)
			}
			for _, room := range []func(string) (uint64, bool){
				func(string) (uint64, bool) { return 3 * size, true }, func(string) (uint64, bool) { return 0, false },
			} {
				again := filepath.Join(t.TempDir(), "lossbook.db")
				prepare(t, again)
				next.room = room
				s, err := open(t.Context(), again, next, fixedClock())
				if err != nil {
					t.Fatal(err)
				}
				closeNow(t, s)
			}
		})
	}
}

func TestFreeRoom(t *testing.T) {
	free, known := freeRoom(t.TempDir())
	if runtime.GOOS == "linux" && (!known || free == 0 || free > 1<<60) {
		t.Errorf("%d bytes are free, known: %t", free, known)
	}
	if _, known := freeRoom(filepath.Join(t.TempDir(), "none")); known {
		t.Error("a folder that isn't there has room")
	}
	for n, want := range map[uint64]string{0: "0.0 MB", 1: "0.1 MB", 100_000: "0.1 MB", 100_001: "0.2 MB", 12_300_000: "12.3 MB"} {
		if got := megabytes(n); got != want {
			t.Errorf("%d bytes are %q, want %q", n, got, want)
		}
	}
}

// A copy is checked before a layout is built on it, and what was built is checked before
// it takes the file's place. A row that refers to none is damage that neither the copy
// nor the step meets.
func TestUpgradeChecksItsCopies(t *testing.T) {
	const orphan = `CREATE TABLE t (d INTEGER REFERENCES designs (id)); INSERT INTO t VALUES (99);`
	for what, c := range map[string]struct{ before, step, says string }{
		"a step that breaks it":  {"", `COMMIT; PRAGMA foreign_keys = OFF; BEGIN; ` + orphan, "what came of it is not sound (1 rows refer to others that are missing)"},
		"a step that mends it":   {orphan, `DELETE FROM t`, "a copy of it is not sound (1 rows refer to others that are missing)"},
		"a step that ignores it": {orphan, addColumn, "a copy of it is not sound (1 rows refer to others that are missing)"},
	} {
		t.Run(what, func(t *testing.T) {
			path := filepath.Join(t.TempDir(), "lossbook.db")
			soundFile(t, path)
			if c.before != "" {
				db := loose(t, path)
				db.SetMaxOpenConns(1)
				mustExec(t, db, c.before)
				db.Close()
			}
			next, err := newSchema(nextLayout(c.step))
			if err != nil {
				t.Fatal(err)
			}
			before := stateOf(t, filepath.Dir(path))
			err = upgrade(t.Context(), path, current(t).latest, next, fixedClock()())
			if err == nil || !strings.Contains(err.Error(), c.says) {
				t.Errorf("%v, want %q", err, c.says)
			}
			if errors.Is(refusal(path, err), ErrBroken) {
				t.Error("the file itself is said to be damaged")
			}
			if diff := cmp.Diff(before, stateOf(t, filepath.Dir(path))); diff != "" {
				t.Errorf("files changed:\n%s", diff)
			}
		})
	}
}
