package store

import (
	"context"
	"database/sql"
	"time"
)

// PutAway notes that a hint was read and is not to be shown again.
func (s *Store) PutAway(ctx context.Context, hint string) error {
	return s.change(ctx, func(tx *sql.Tx) error {
		_, err := tx.ExecContext(ctx, `INSERT INTO meta (key, value) VALUES ('away:' || ?, ?) ON CONFLICT DO NOTHING`,
			hint, s.moment().Format(time.RFC3339))
		return err
	})
}

// IsAway tells whether a hint was put away.
func (s *Store) IsAway(ctx context.Context, hint string) (away bool, err error) {
	err = s.view(ctx, func(q querier) error {
		return q.QueryRowContext(ctx, `SELECT EXISTS (SELECT 1 FROM meta WHERE key = 'away:' || ?)`, hint).Scan(&away)
	})
	return away, err
}
