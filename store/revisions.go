package store

import (
	"context"
	"crypto/sha256"
	"database/sql"
	"encoding/binary"
	"encoding/hex"
	"fmt"
	"time"
)

// RevisionHead names a revision in a list.
type RevisionHead struct {
	Design    int64
	Number    int // 1, 2, … in its design, never given twice
	Note      string
	CreatedAt time.Time
	Model     string // version of the model that computed the results
	Hash      string // SHA-256 of the content, in hexadecimal
}

// Revision is a saved state of a design with its results. It never changes.
type Revision struct {
	Design     int64
	Number     int // 1, 2, … in its design, never given twice
	Note       string
	CreatedAt  time.Time
	Model      string // version of the model that computed the results
	DesignJSON []byte
	Draft      []byte // JSON: the entries as typed, to reopen it as a draft
	Points     []byte // JSON: the results, as they were when it was saved
	Findings   []byte
	Hash       string // SHA-256 of the content, in hexadecimal
}

// NewRevision is what a revision keeps.
type NewRevision struct {
	Note       string
	Model      string
	DesignJSON []byte
	Draft      []byte
	Points     []byte
	Findings   []byte
}

const headColumns = `design, number, note, created_at, model, hash`

// SaveRevision keeps a revision of the design as it is at the given version;
// if that isn't the current one it returns a StaleError.
func (s *Store) SaveRevision(ctx context.Context, id, version int64, n NewRevision) (r Revision, err error) {
	err = s.change(ctx, func(tx *sql.Tx) error {
		r, err = saveRevision(ctx, tx, id, version, n, s.moment())
		return err
	})
	return r, err
}

// Revisions lists the revisions of a design, the latest first.
func (s *Store) Revisions(ctx context.Context, id int64) (list []RevisionHead, err error) {
	err = s.view(ctx, func(q querier) error {
		list, err = revisions(ctx, q, id)
		return err
	})
	return list, err
}

// Revision gives one revision. If its content isn't what was saved it returns
// ErrCorrupt.
func (s *Store) Revision(ctx context.Context, id int64, number int) (r Revision, err error) {
	err = s.view(ctx, func(q querier) error {
		r, err = revision(ctx, q, id, number)
		return err
	})
	return r, err
}

func saveRevision(ctx context.Context, tx *sql.Tx, id, version int64, n NewRevision, at time.Time) (Revision, error) {
	d, err := currentDesign(ctx, tx, id, version)
	if err != nil {
		return Revision{}, err
	}
	r := Revision{
		Design: id, Number: d.LatestRevision + 1, Note: n.Note, CreatedAt: at, Model: n.Model,
		DesignJSON: nonNil(n.DesignJSON), Draft: nonNil(n.Draft), Points: nonNil(n.Points), Findings: nonNil(n.Findings),
	}
	r.Hash = r.contentHash()
	_, err = tx.ExecContext(ctx,
		`INSERT INTO revisions (`+headColumns+`, complete, draft, points, findings) VALUES (?, ?, ?, ?, ?, ?, ?, ?, ?, ?)`,
		r.Design, r.Number, r.Note, at.UnixMicro(), r.Model, r.Hash, r.DesignJSON, r.Draft, r.Points, r.Findings)
	if err != nil {
		return Revision{}, err
	}
	return r, endRuns(ctx, tx, id)
}

func revisions(ctx context.Context, q querier, id int64) ([]RevisionHead, error) {
	if _, err := design(ctx, q, id); err != nil {
		return nil, err
	}
	rows, err := q.QueryContext(ctx, `SELECT `+headColumns+` FROM revisions WHERE design = ? ORDER BY number DESC`, id)
	if err != nil {
		return nil, err
	}
	defer rows.Close()
	var list []RevisionHead
	for rows.Next() {
		var h RevisionHead
		var created int64
		if err := rows.Scan(&h.Design, &h.Number, &h.Note, &created, &h.Model, &h.Hash); err != nil {
			return nil, err
		}
		h.CreatedAt = fromMicro(created)
		list = append(list, h)
	}
	return list, rows.Err()
}

func revision(ctx context.Context, q querier, id int64, number int) (Revision, error) {
	const query = `SELECT ` + headColumns + `, complete, draft, points, findings FROM revisions
		WHERE design = ? AND number = ? AND EXISTS (SELECT 1 FROM designs WHERE id = design AND deleted_at IS NULL)`
	var r Revision
	var created int64
	err := q.QueryRowContext(ctx, query, id, number).Scan(&r.Design, &r.Number, &r.Note, &created, &r.Model, &r.Hash,
		&r.DesignJSON, &r.Draft, &r.Points, &r.Findings)
	if err != nil {
		return Revision{}, notFound(err)
	}
	for _, part := range []*[]byte{&r.DesignJSON, &r.Draft, &r.Points, &r.Findings} {
		*part = nonNil(*part)
	}
	r.CreatedAt = fromMicro(created)
	if r.contentHash() != r.Hash {
		return Revision{}, fmt.Errorf("%w: revision %d of design %d is not what was saved; take it from a backup", ErrCorrupt, number, id)
	}
	return r, nil
}

// contentHash covers all that a revision says, each part behind its length so
// that none can pass for its neighbour. The design's id is left out: it is
// where the revision lies, not what it says.
func (r Revision) contentHash() string {
	h := sha256.New()
	h.Write([]byte("lossbook revision 1\n"))
	put := func(v int64) { h.Write(binary.BigEndian.AppendUint64(nil, uint64(v))) }
	put(int64(r.Number))
	put(r.CreatedAt.UnixMicro())
	for _, part := range [][]byte{[]byte(r.Note), []byte(r.Model), r.DesignJSON, r.Draft, r.Points, r.Findings} {
		put(int64(len(part)))
		h.Write(part)
	}
	return hex.EncodeToString(h.Sum(nil))
}
