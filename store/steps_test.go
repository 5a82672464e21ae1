package store

import (
	"bytes"
	"errors"
	"fmt"
	"testing"
	"time"
)

// history is a design that a test edits, with a clock of its own.
type history struct {
	t   *testing.T
	s   *Store
	d   Design
	now time.Time
}

func newHistory(t *testing.T) *history {
	t.Helper()
	h := &history{t: t, s: openNew(t), now: time.Date(2026, 12, 1, 9, 0, 0, 0, time.UTC)}
	h.s.now = func() time.Time { return h.now }
	h.d = create1(t, h.s, "start")
	return h
}

// edit changes the draft, an hour after whatever was before.
func (h *history) edit(draft string) { h.t.Helper(); h.types("", draft, time.Hour) }

// types changes the draft within a run of typing, so long after the last change.
func (h *history) types(run, draft string, later time.Duration) {
	h.t.Helper()
	h.now = h.now.Add(later)
	h.take(h.s.Update(h.t.Context(), h.d.ID, h.d.Version, Change{Name: "n" + draft, Draft: []byte(draft), Complete: []byte("c" + draft), Run: run}))
}

func (h *history) undo() { h.t.Helper(); h.take(h.s.Undo(h.t.Context(), h.d.ID, h.d.Version)) }
func (h *history) redo() { h.t.Helper(); h.take(h.s.Redo(h.t.Context(), h.d.ID, h.d.Version)) }

func (h *history) take(d Design, err error) {
	h.t.Helper()
	if err != nil {
		h.t.Fatal(err)
	}
	h.d = d
}

// want checks the draft, and where undo and redo lead; "" is nowhere.
func (h *history) want(draft, undo, redo string) {
	h.t.Helper()
	d, err := h.s.Design(h.t.Context(), h.d.ID)
	if err != nil {
		h.t.Fatal(err)
	}
	steps, err := h.s.Steps(h.t.Context(), h.d.ID)
	if err != nil {
		h.t.Fatal(err)
	}
	if string(d.Draft) != draft || string(steps.Undo) != undo || string(steps.Redo) != redo {
		h.t.Errorf("draft %q, undo leads to %q and redo to %q; want %q, %q and %q", d.Draft, steps.Undo, steps.Redo, draft, undo, redo)
	}
}

const began = `{"frequency":"100k"}`

func TestUndoAndRedo(t *testing.T) {
	h := newHistory(t)
	h.want(began, "", "")
	h.edit("1")
	h.edit("2")
	h.want("2", "1", "")
	h.undo()
	h.want("1", began, "2")
	if h.d.Version != 4 || h.d.Name != "n1" || string(h.d.Complete) != "c1" || !h.d.UpdatedAt.Equal(h.now) {
		t.Errorf("undone to %+v", h.d)
	}
	h.undo()
	h.want(began, "", "1")
	if h.d.Name != "start" || h.d.Complete != nil {
		t.Errorf("undone to the name %q and complete %q, want the state without one", h.d.Name, h.d.Complete)
	}
	h.undo() // nothing is left
	if h.d.Version != 5 {
		t.Errorf("undoing nothing gives version %d", h.d.Version)
	}
	h.redo()
	h.redo()
	h.want("2", "1", "")
	h.redo()
	if h.d.Version != 7 {
		t.Errorf("redoing nothing gives version %d", h.d.Version)
	}
	h.undo()
	h.edit("3")
	h.want("3", "1", "") // an edit drops what was undone
}

func TestStepsNeedTheCurrentVersion(t *testing.T) {
	h := newHistory(t)
	h.edit("1")
	h.edit("2")
	h.undo()
	for name, walk := range map[string]func(int64) error{
		"undo": func(v int64) error { _, err := h.s.Undo(t.Context(), h.d.ID, v); return err },
		"redo": func(v int64) error { _, err := h.s.Redo(t.Context(), h.d.ID, v); return err },
	} {
		for _, version := range []int64{h.d.Version - 1, h.d.Version + 1} {
			var stale *StaleError
			if err := walk(version); !errors.As(err, &stale) || stale.Current.Version != h.d.Version {
				t.Errorf("%s from version %d of %d: %v", name, version, h.d.Version, err)
			}
		}
	}
	h.want("1", began, "2")
	if err := h.s.Delete(t.Context(), h.d.ID); err != nil {
		t.Fatal(err)
	}
	if _, err := h.s.Undo(t.Context(), h.d.ID, h.d.Version); !errors.Is(err, ErrNotFound) {
		t.Errorf("undo in the bin: %v", err)
	}
	if _, err := h.s.Restore(t.Context(), h.d.ID); err != nil {
		t.Fatal(err)
	}
	h.want("1", began, "2")
}

func TestARunOfTypingIsOneStep(t *testing.T) {
	const short, long = typingPause - time.Microsecond, typingPause
	for name, c := range map[string]struct {
		edit func(h *history)
		undo string
	}{
		"one run":               {func(h *history) { h.types("f", "b", short); h.types("f", "c", short) }, began},
		"a pause ends it":       {func(h *history) { h.types("f", "b", long) }, "a"},
		"another entry":         {func(h *history) { h.types("g", "b", short) }, "a"},
		"no entry":              {func(h *history) { h.types("", "b", short) }, "a"},
		"a clock set back":      {func(h *history) { h.types("f", "b", -long) }, "a"},
		"undone between":        {func(h *history) { h.types("f", "b", long); h.undo(); h.types("f", "c", short) }, "a"},
		"redone between":        {func(h *history) { h.undo(); h.redo(); h.types("f", "b", short) }, "a"},
		"saved between":         {func(h *history) { save1(h.t, h.s, h.d, ""); h.types("f", "b", short) }, "a"},
		"ends where it began":   {func(h *history) { h.types("f", "b", short); h.types("f", began, short) }, ""},
		"and typing begins new": {func(h *history) { h.types("f", began, short); h.types("f", "b", short) }, began},
		"an older run of the same entry": {func(h *history) {
			h.types("f", "b", long)
			h.types("f", "a", short) // back to the start of the second run
			h.types("f", "b", short) // must not become part of the first
		}, "a"},
	} {
		t.Run(name, func(t *testing.T) {
			h := newHistory(t)
			h.types("f", "a", time.Hour)
			c.edit(h)
			if steps, err := h.s.Steps(t.Context(), h.d.ID); err != nil || string(steps.Undo) != c.undo {
				t.Errorf("undo leads to %q (%v), want %q", steps.Undo, err, c.undo)
			}
		})
	}
}

func TestHistoryOutlivesTheProgram(t *testing.T) {
	path := dataFile(t)
	s := openAt(t, path)
	d := create1(t, s, "start")
	for _, draft := range []string{"1", "2", "3"} {
		var err error
		if d, err = s.Update(t.Context(), d.ID, d.Version, Change{Name: "n", Draft: []byte(draft)}); err != nil {
			t.Fatal(err)
		}
	}
	if d, _ = s.Undo(t.Context(), d.ID, d.Version); string(d.Draft) != "2" {
		t.Fatalf("undone to %q", d.Draft)
	}
	closeNow(t, s)
	s = openAt(t, path)
	steps, err := s.Steps(t.Context(), d.ID)
	if err != nil || string(steps.Undo) != "1" || string(steps.Redo) != "3" {
		t.Errorf("undo leads to %q, redo to %q (%v)", steps.Undo, steps.Redo, err)
	}
	if d, err = s.Redo(t.Context(), d.ID, d.Version); err != nil || string(d.Draft) != "3" {
		t.Errorf("redone to %q (%v)", d.Draft, err)
	}
}

func TestHistoryIsBounded(t *testing.T) {
	h := newHistory(t)
	other := create1(t, h.s, "another design")
	if _, err := h.s.Update(t.Context(), other.ID, other.Version, Change{Name: "other", Draft: []byte("x")}); err != nil {
		t.Fatal(err)
	}
	count := func() (n, bytes int) {
		t.Helper()
		row := h.s.read.QueryRow(`SELECT count(*), coalesce(sum(length(draft) + length(complete)), 0) FROM steps WHERE design = ?`, h.d.ID)
		if err := row.Scan(&n, &bytes); err != nil {
			t.Fatal(err)
		}
		return n, bytes
	}
	for i := range maxSteps + 3 {
		h.edit(fmt.Sprint(i))
	}
	if n, _ := count(); n != maxSteps {
		t.Errorf("%d steps are kept, want %d", n, maxSteps)
	}
	for range maxSteps + 3 {
		h.undo()
	}
	h.want("2", "", "3") // the oldest were let go
	large := func(i int) string { return fmt.Sprint(i) + string(bytes.Repeat([]byte("x"), maxStepBytes/5)) }
	for i := range 6 {
		h.edit(large(i))
	}
	if n, size := count(); n != 2 || size > maxStepBytes {
		t.Errorf("%d steps of %d bytes are kept, want 2 within %d", n, size, maxStepBytes)
	}
	h.want(large(5), large(4), "")
	if steps, err := h.s.Steps(t.Context(), other.ID); err != nil || string(steps.Undo) != began {
		t.Errorf("another design's history: %q (%v)", steps.Undo, err)
	}
}
