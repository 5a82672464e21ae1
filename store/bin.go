package store

import (
	"context"
	"database/sql"
	"time"
)

// binTime is how long a deleted design can be taken back. The trigger on the
// revisions knows the same time.
const binTime = 30 * 24 * time.Hour

// Bin lists the deleted designs that can still be restored, the last deleted
// one first.
func (s *Store) Bin(ctx context.Context) (list []Design, err error) {
	err = s.view(ctx, func(q querier) error {
		list, err = designs(ctx, q, `WHERE deleted_at IS NOT NULL ORDER BY deleted_at DESC, id DESC`)
		return err
	})
	return list, err
}

// Delete puts a design into the bin, with its revisions.
func (s *Store) Delete(ctx context.Context, id int64) error {
	return s.change(ctx, func(tx *sql.Tx) error {
		return setBinned(ctx, tx, `UPDATE designs SET deleted_at = ? WHERE id = ? AND deleted_at IS NULL`, s.moment().UnixMicro(), id)
	})
}

// Restore takes a design out of the bin, just as it was.
func (s *Store) Restore(ctx context.Context, id int64) (d Design, err error) {
	err = s.change(ctx, func(tx *sql.Tx) error {
		err := setBinned(ctx, tx, `UPDATE designs SET deleted_at = NULL WHERE id = ? AND deleted_at IS NOT NULL`, id)
		if err != nil {
			return err
		}
		d, err = design(ctx, tx, id)
		return err
	})
	return d, err
}

// setBinned runs an update that must meet one design.
func setBinned(ctx context.Context, tx *sql.Tx, update string, args ...any) error {
	r, err := tx.ExecContext(ctx, update, args...)
	if err != nil {
		return err
	}
	if n, err := r.RowsAffected(); err != nil || n == 1 {
		return err
	}
	return ErrNotFound
}

// Purge removes the designs that have been in the bin for 30 days at the given
// time, with their revisions and links, and tells how many. The database's own
// clock has to agree: no call can shorten the 30 days.
func (s *Store) Purge(ctx context.Context, now time.Time) (purged int, err error) {
	before := now.Add(-binTime).UnixMicro()
	due, err := s.due(ctx, before)
	if err != nil || due == 0 {
		return 0, err // the usual case writes nothing
	}
	err = s.change(ctx, func(tx *sql.Tx) error {
		purged, err = purge(ctx, tx, before)
		return err
	})
	return purged, err
}

const overdue = `deleted_at <= min(?, (unixepoch() - 30 * 86400) * 1000000)`

func (s *Store) due(ctx context.Context, before int64) (n int, err error) {
	err = s.view(ctx, func(q querier) error {
		return q.QueryRowContext(ctx, `SELECT count(*) FROM designs WHERE `+overdue, before).Scan(&n)
	})
	return n, err
}

func purge(ctx context.Context, tx *sql.Tx, before int64) (int, error) {
	for _, remove := range []string{
		`DELETE FROM shares WHERE revision IN (SELECT id FROM revisions WHERE design IN (SELECT id FROM designs WHERE ` + overdue + `))`,
		`DELETE FROM steps WHERE design IN (SELECT id FROM designs WHERE ` + overdue + `)`,
		`DELETE FROM revisions WHERE design IN (SELECT id FROM designs WHERE ` + overdue + `)`,
	} {
		if _, err := tx.ExecContext(ctx, remove, before); err != nil {
			return 0, err
		}
	}
	r, err := tx.ExecContext(ctx, `DELETE FROM designs WHERE `+overdue, before)
	if err != nil {
		return 0, err
	}
	n, err := r.RowsAffected()
	return int(n), err
}
