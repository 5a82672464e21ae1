package store

import (
	"bytes"
	"encoding/json"
	"errors"
	"flag"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"strings"
	"testing"
	"time"

	"github.com/google/go-cmp/cmp"
)

var update = flag.Bool("update", false, "write the old database of the present layout, if there is none yet")

const oldDatabases = "../testdata/databases"

// contents is all that a data file holds.
type contents struct {
	Designs, Bin []Design
	Revisions    []Revision
	Shares       []Share         `json:",omitempty"` // none in layout 1
	Steps        map[int64]Steps `json:",omitempty"` // by design; none before layout 3
}

// Data files of every layout there has been keep opening, and say the same.
func TestOldDatabases(t *testing.T) {
	known := current(t)
	if *update {
		writeOldDatabase(t, known)
	}
	files, err := filepath.Glob(filepath.Join(oldDatabases, "layout-*.sqlite"))
	if err != nil || len(files) != int(known.latest) {
		t.Fatalf("%d old databases (%v), want one for each of %d layouts", len(files), err, known.latest)
	}
	for _, file := range files {
		want, err := os.ReadFile(strings.TrimSuffix(file, ".sqlite") + ".json")
		if err != nil {
			t.Fatal(err)
		}
		path := filepath.Join(t.TempDir(), "lossbook.db")
		if err := copyFile(file, path); err != nil {
			t.Fatal(err)
		}
		got := readAll(t, path, known)
		if diff := cmp.Diff(string(want), got); diff != "" {
			t.Errorf("%s (-as written +as read):\n%s", file, diff)
		}
	}
}

// goldenTime is soon after the old databases were written: read by the present
// clock, their bins would one day be purged.
func goldenTime() time.Time { return time.Date(2026, 12, 1, 0, 0, 0, 0, time.UTC) }

func readAll(t *testing.T, path string, known schema) string {
	t.Helper()
	s, err := open(t.Context(), path, known, goldenTime)
	if err != nil {
		t.Fatal(err)
	}
	defer s.Close()
	var all contents
	var errs [2]error
	all.Designs, errs[0] = s.Designs(t.Context())
	all.Bin, errs[1] = s.Bin(t.Context())
	for _, d := range all.Designs {
		if steps, err := s.Steps(t.Context(), d.ID); err != nil || steps.Undo != nil || steps.Redo != nil {
			errs[1] = errors.Join(errs[1], err)
			all.noteSteps(d.ID, steps)
		}
		for n := range d.Revisions {
			r, err := s.Revision(t.Context(), d.ID, n+1)
			links, err2 := s.Shares(t.Context(), d.ID, n+1)
			errs[0] = errors.Join(errs[0], err, err2)
			all.Revisions, all.Shares = append(all.Revisions, r), append(all.Shares, links...)
		}
	}
	if err := errors.Join(errs[:]...); err != nil {
		t.Fatal(err)
	}
	var text bytes.Buffer
	e := json.NewEncoder(&text)
	e.SetIndent("", "  ")
	if err := e.Encode(all); err != nil {
		t.Fatal(err)
	}
	return text.String()
}

func (c *contents) noteSteps(id int64, steps Steps) {
	if c.Steps == nil {
		c.Steps = map[int64]Steps{}
	}
	c.Steps[id] = steps
}

// writeOldDatabase never writes over one: what is there is what users have.
func writeOldDatabase(t *testing.T, known schema) {
	t.Helper()
	base := filepath.Join(oldDatabases, fmt.Sprintf("layout-%d", known.latest))
	if _, err := os.Stat(base + ".sqlite"); !errors.Is(err, fs.ErrNotExist) {
		return
	}
	path := filepath.Join(t.TempDir(), "lossbook.db")
	fillOldDatabase(t, path, known)
	if err := copyFile(path, base+".sqlite"); err != nil {
		t.Fatal(err)
	}
	write(t, base+".json", []byte(readAll(t, path, known)))
}

func fillOldDatabase(t *testing.T, path string, known schema) {
	t.Helper()
	s, err := open(t.Context(), path, known, fixedClock())
	if err != nil {
		t.Fatal(err)
	}
	if err := s.Seed(t.Context(), []NewDesign{{Name: "A sample", Sample: true, Draft: []byte(`{"name":"A sample"}`)}}); err != nil {
		t.Fatal(err)
	}
	d := create1(t, s, "Wandler \"µ\" <b>'4k7'</b>")
	save1(t, s, d, "as drawn")
	d, err = s.Update(t.Context(), d.ID, d.Version, Change{Name: d.Name, Draft: []byte(`{"frequency":"150k"}`), Complete: []byte(`{"format":"lossbook/1"}`)})
	if err != nil {
		t.Fatal(err)
	}
	save1(t, s, d, "")
	share1(t, s, d, 1, "for the review")
	revoked, _ := share1(t, s, d, 1, "sent by mistake")
	if err := s.RevokeShare(t.Context(), d.ID, 1, revoked.ID); err != nil {
		t.Fatal(err)
	}
	share1(t, s, d, 2, "")
	d, err = s.Update(t.Context(), d.ID, d.Version, Change{Name: d.Name, Draft: []byte(`{"frequency":"200k"}`)})
	if err != nil {
		t.Fatal(err)
	}
	if _, err := s.Undo(t.Context(), d.ID, d.Version); err != nil {
		t.Fatal(err)
	}
	binned := create1(t, s, "in the bin")
	save1(t, s, binned, "its revision")
	if err := s.Delete(t.Context(), binned.ID); err != nil {
		t.Fatal(err)
	}
	closeNow(t, s)
}
