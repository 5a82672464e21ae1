package store

import (
	"context"
	"database/sql"
	"slices"
	"time"
)

// Seed keeps the given designs, listed in this order, once in the life of a
// data file: what was removed since stays away.
func (s *Store) Seed(ctx context.Context, samples []NewDesign) error {
	return s.change(ctx, func(tx *sql.Tx) error { return seed(ctx, tx, samples, s.moment()) })
}

func seed(ctx context.Context, tx *sql.Tx, samples []NewDesign, at time.Time) error {
	r, err := tx.ExecContext(ctx,
		`INSERT INTO meta (key, value) VALUES ('seeded', ?) ON CONFLICT DO NOTHING`, at.Format(time.RFC3339))
	if err != nil {
		return err
	}
	if n, err := r.RowsAffected(); err != nil || n == 0 {
		return err
	}
	// The list shows the newest first.
	for _, n := range slices.Backward(samples) {
		if _, err := createDesign(ctx, tx, n, at); err != nil {
			return err
		}
	}
	return nil
}
