package store

import (
	"bytes"
	"context"
	"database/sql"
	"errors"
	"time"
)

// Design is a design as it stands: what is typed on its sheet, and the last
// state of it that was complete.
type Design struct {
	ID             int64
	Name           string
	Sample         bool // came with the program
	CreatedAt      time.Time
	UpdatedAt      time.Time // of the last change that was kept
	DeletedAt      time.Time // when it went into the bin; zero outside it
	Version        int64     // from 1, one more with each change that was kept
	Draft          []byte    // JSON: the entries as typed
	Complete       []byte    // JSON: the last complete design; nil if there never was one
	Revisions      int       // how many it has
	LatestRevision int       // number of the latest, 0 if it has none
}

// NewDesign is what a design begins as.
type NewDesign struct {
	Name     string
	Sample   bool
	Draft    []byte
	Complete []byte // nil if it isn't complete yet
}

// Change is the state a design is to have.
type Change struct {
	Name     string
	Draft    []byte
	Complete []byte // nil keeps the one that is stored
	Run      string // what is being typed: its edits in quick succession are one step to undo; "" for any other change
}

const selectDesigns = `SELECT id, name, sample, created_at, updated_at, deleted_at, version, draft, complete,
	(SELECT count(*) FROM revisions WHERE design = designs.id),
	(SELECT coalesce(max(number), 0) FROM revisions WHERE design = designs.id)
	FROM designs `

// Designs lists the designs outside the bin, the last changed one first.
func (s *Store) Designs(ctx context.Context) (list []Design, err error) {
	err = s.view(ctx, func(q querier) error {
		list, err = designs(ctx, q, `WHERE deleted_at IS NULL ORDER BY updated_at DESC, id DESC`)
		return err
	})
	return list, err
}

// Design gives one design, ErrNotFound if it doesn't exist or is in the bin.
func (s *Store) Design(ctx context.Context, id int64) (d Design, err error) {
	err = s.view(ctx, func(q querier) error {
		d, err = design(ctx, q, id)
		return err
	})
	return d, err
}

// Create keeps a new design.
func (s *Store) Create(ctx context.Context, n NewDesign) (d Design, err error) {
	err = s.change(ctx, func(tx *sql.Tx) error {
		d, err = createDesign(ctx, tx, n, s.moment())
		return err
	})
	return d, err
}

// Update changes the design from the given version on, to the next one. From
// a version that isn't current it changes nothing and returns a StaleError. A
// change that changes nothing keeps version and time.
func (s *Store) Update(ctx context.Context, id, version int64, c Change) (d Design, err error) {
	err = s.change(ctx, func(tx *sql.Tx) error {
		d, err = updateDesign(ctx, tx, id, version, c, s.moment())
		return err
	})
	return d, err
}

func designs(ctx context.Context, q querier, where string, args ...any) ([]Design, error) {
	rows, err := q.QueryContext(ctx, selectDesigns+where, args...)
	if err != nil {
		return nil, err
	}
	defer rows.Close()
	var list []Design
	for rows.Next() {
		d, err := scanDesign(rows)
		if err != nil {
			return nil, err
		}
		list = append(list, d)
	}
	return list, rows.Err()
}

func design(ctx context.Context, q querier, id int64) (Design, error) {
	return scanDesign(q.QueryRowContext(ctx, selectDesigns+`WHERE id = ? AND deleted_at IS NULL`, id))
}

// currentDesign is the design, provided that it still is at the given version.
func currentDesign(ctx context.Context, q querier, id, version int64) (Design, error) {
	d, err := design(ctx, q, id)
	if err == nil && d.Version != version {
		return Design{}, &StaleError{Current: d}
	}
	return d, err
}

func createDesign(ctx context.Context, tx *sql.Tx, n NewDesign, at time.Time) (Design, error) {
	r, err := tx.ExecContext(ctx,
		`INSERT INTO designs (name, sample, created_at, updated_at, draft, complete) VALUES (?, ?, ?, ?, ?, ?)`,
		n.Name, n.Sample, at.UnixMicro(), at.UnixMicro(), nonNil(n.Draft), nullIfEmpty(n.Complete))
	if err != nil {
		return Design{}, err
	}
	id, err := r.LastInsertId()
	if err != nil {
		return Design{}, err
	}
	return design(ctx, tx, id)
}

func updateDesign(ctx context.Context, tx *sql.Tx, id, version int64, c Change, at time.Time) (Design, error) {
	d, err := currentDesign(ctx, tx, id, version)
	if err != nil {
		return Design{}, err
	}
	if len(c.Complete) == 0 {
		c.Complete = d.Complete
	}
	if c.Name == d.Name && bytes.Equal(c.Draft, d.Draft) && bytes.Equal(c.Complete, d.Complete) {
		return d, nil
	}
	if c.Name != d.Name || !bytes.Equal(c.Draft, d.Draft) {
		if err := noteStep(ctx, tx, d, c, at); err != nil {
			return Design{}, err
		}
	}
	_, err = tx.ExecContext(ctx,
		`UPDATE designs SET name = ?, draft = ?, complete = ?, updated_at = ?, version = version + 1 WHERE id = ?`,
		c.Name, nonNil(c.Draft), nullIfEmpty(c.Complete), at.UnixMicro(), id)
	if err != nil {
		return Design{}, err
	}
	return design(ctx, tx, id)
}

// row is what one row can be read from: *sql.Row or *sql.Rows.
type row interface{ Scan(dest ...any) error }

func scanDesign(r row) (Design, error) {
	var d Design
	var created, updated int64
	var deleted sql.NullInt64
	err := r.Scan(&d.ID, &d.Name, &d.Sample, &created, &updated, &deleted, &d.Version,
		&d.Draft, &d.Complete, &d.Revisions, &d.LatestRevision)
	if err != nil {
		return Design{}, notFound(err)
	}
	d.Draft = nonNil(d.Draft)
	d.CreatedAt, d.UpdatedAt = fromMicro(created), fromMicro(updated)
	if deleted.Valid {
		d.DeletedAt = fromMicro(deleted.Int64)
	}
	return d, nil
}

func notFound(err error) error {
	if errors.Is(err, sql.ErrNoRows) {
		return ErrNotFound
	}
	return err
}

func fromMicro(t int64) time.Time { return time.UnixMicro(t).UTC() }

// nonNil is for content that is never absent, only empty: the driver writes
// nil as NULL, and reads what is empty as nil.
func nonNil(b []byte) []byte {
	if b == nil {
		return []byte{}
	}
	return b
}

// nullIfEmpty is for content that is absent when it is empty.
func nullIfEmpty(b []byte) any {
	if len(b) == 0 {
		return nil
	}
	return b
}
