package store

import (
	"bytes"
	"context"
	"database/sql"
	"errors"
	"time"
)

// The history of a draft is bounded: by what a person could want back, and by
// what that may take up on the disk.
const (
	maxSteps     = 100
	maxStepBytes = 4 << 20
)

// typingPause is the pause that ends a run of typing: the edits of one run are
// one step.
const typingPause = 3 * time.Second

// Steps are the drafts that Undo and Redo would lead to, nil where there is none.
type Steps struct{ Undo, Redo []byte }

// Steps tells where undo and redo lead from the draft as it is.
func (s *Store) Steps(ctx context.Context, id int64) (t Steps, err error) {
	err = s.view(ctx, func(q querier) error {
		behind, err := nextStep(ctx, q, id, undoing)
		if err != nil {
			return err
		}
		ahead, err := nextStep(ctx, q, id, redoing)
		t = Steps{Undo: behind.draft, Redo: ahead.draft}
		return err
	})
	return t, err
}

// Undo takes back the last step from the given version on, which gives the next
// version. From a version that isn't current it changes nothing and returns a
// StaleError. Where there is nothing to take back it changes nothing.
func (s *Store) Undo(ctx context.Context, id, version int64) (d Design, err error) {
	return s.walk(ctx, id, version, undoing)
}

// Redo makes the step again that was undone last, if nothing was changed since.
func (s *Store) Redo(ctx context.Context, id, version int64) (d Design, err error) {
	return s.walk(ctx, id, version, redoing)
}

// direction says on which side of the draft a step lies: behind it or ahead.
type direction int

const (
	undoing direction = 0
	redoing direction = 1
)

// step is a state that a draft had; id 0 is none.
type step struct {
	id              int64
	run, name       string
	draft, complete []byte
}

func (s *Store) walk(ctx context.Context, id, version int64, to direction) (d Design, err error) {
	err = s.change(ctx, func(tx *sql.Tx) error {
		d, err = walk(ctx, tx, id, version, to, s.moment())
		return err
	})
	return d, err
}

func walk(ctx context.Context, tx *sql.Tx, id, version int64, to direction, at time.Time) (Design, error) {
	d, err := currentDesign(ctx, tx, id, version)
	if err != nil {
		return Design{}, err
	}
	t, err := nextStep(ctx, tx, id, to)
	if err != nil || t.id == 0 {
		return d, err
	}
	if err := dropStep(ctx, tx, t); err != nil {
		return Design{}, err
	}
	if err := leaveStep(ctx, tx, d, 1-to, ""); err != nil {
		return Design{}, err
	}
	_, err = tx.ExecContext(ctx,
		`UPDATE designs SET name = ?, draft = ?, complete = ?, updated_at = ?, version = version + 1 WHERE id = ?`,
		t.name, t.draft, nullIfEmpty(t.complete), at.UnixMicro(), id)
	if err != nil {
		return Design{}, err
	}
	return design(ctx, tx, id)
}

// noteStep keeps the design's state before a change, so that it can be undone.
// While the same thing is typed on, the state before the typing is enough; typing
// that ends where it began leaves no step.
func noteStep(ctx context.Context, tx *sql.Tx, d Design, c Change, at time.Time) error {
	r, err := tx.ExecContext(ctx, `DELETE FROM steps WHERE design = ? AND ahead = 1`, d.ID)
	if err != nil {
		return err
	}
	undone, err := r.RowsAffected()
	if err != nil {
		return err
	}
	last, err := nextStep(ctx, tx, d.ID, undoing)
	if err != nil {
		return err
	}
	typing := undone == 0 && last.id != 0 && c.Run != "" && c.Run == last.run && at.Sub(d.UpdatedAt).Abs() < typingPause
	switch {
	case typing && bytes.Equal(c.Draft, last.draft):
		if err := dropStep(ctx, tx, last); err != nil {
			return err
		}
		return endRuns(ctx, tx, d.ID)
	case typing:
		return nil
	}
	if err := leaveStep(ctx, tx, d, undoing, c.Run); err != nil {
		return err
	}
	return forgetSteps(ctx, tx, d.ID)
}

// nextStep is where a walk in that direction leads.
func nextStep(ctx context.Context, q querier, id int64, to direction) (t step, err error) {
	err = q.QueryRowContext(ctx, `SELECT id, run, name, draft, complete FROM steps WHERE design = ? AND ahead = ? ORDER BY id DESC LIMIT 1`, id, to).
		Scan(&t.id, &t.run, &t.name, &t.draft, &t.complete)
	if errors.Is(err, sql.ErrNoRows) {
		return step{}, nil
	}
	t.draft = nonNil(t.draft)
	return t, err
}

// leaveStep keeps the design's present state on that side of what it becomes.
func leaveStep(ctx context.Context, tx *sql.Tx, d Design, side direction, run string) error {
	_, err := tx.ExecContext(ctx, `INSERT INTO steps (design, ahead, run, name, draft, complete) VALUES (?, ?, ?, ?, ?, ?)`,
		d.ID, side, run, d.Name, nonNil(d.Draft), nullIfEmpty(d.Complete))
	return err
}

func dropStep(ctx context.Context, tx *sql.Tx, t step) error {
	_, err := tx.ExecContext(ctx, `DELETE FROM steps WHERE id = ?`, t.id)
	return err
}

// endRuns makes the next edit a step of its own, whatever is typed on.
func endRuns(ctx context.Context, tx *sql.Tx, id int64) error {
	_, err := tx.ExecContext(ctx, `UPDATE steps SET run = '' WHERE design = ? AND run <> ''`, id)
	return err
}

// forgetSteps drops the oldest steps behind a draft that are beyond the bounds.
func forgetSteps(ctx context.Context, tx *sql.Tx, id int64) error {
	_, err := tx.ExecContext(ctx, `DELETE FROM steps WHERE id IN (SELECT id FROM (
		SELECT id, row_number() OVER newest AS n, sum(length(draft) + coalesce(length(complete), 0)) OVER newest AS bytes
		FROM steps WHERE design = ? AND ahead = 0 WINDOW newest AS (ORDER BY id DESC)) WHERE n > ? OR bytes > ?)`,
		id, maxSteps, maxStepBytes)
	return err
}
