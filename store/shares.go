package store

import (
	"context"
	"crypto/rand"
	"crypto/sha256"
	"database/sql"
	"time"
)

// Share is a link to one revision. Its token is not part of it: only the link's
// holder has that.
type Share struct {
	ID        int64
	Design    int64
	Number    int // of the revision in its design
	Note      string
	CreatedAt time.Time
	RevokedAt time.Time // zero while it opens the revision
}

// CreateShare makes a link to a revision and gives its token, which nothing can
// give again: the store keeps a hash.
func (s *Store) CreateShare(ctx context.Context, id int64, number int, note string) (made Share, token string, err error) {
	token = rand.Text() // 130 random bits
	err = s.change(ctx, func(tx *sql.Tx) error {
		made, err = createShare(ctx, tx, Share{Design: id, Number: number, Note: note, CreatedAt: s.moment()}, token)
		return err
	})
	return made, token, err
}

// Shares lists the links to a revision, revoked ones too, the latest first.
func (s *Store) Shares(ctx context.Context, id int64, number int) (list []Share, err error) {
	err = s.view(ctx, func(q querier) error {
		list, err = shares(ctx, q, id, number)
		return err
	})
	return list, err
}

// RevokeShare revokes one link of a revision. To revoke it again changes nothing.
func (s *Store) RevokeShare(ctx context.Context, id int64, number int, share int64) error {
	return s.change(ctx, func(tx *sql.Tx) error {
		revision, err := revisionID(ctx, tx, id, number)
		if err != nil {
			return err
		}
		var found int64
		err = tx.QueryRowContext(ctx, `SELECT id FROM shares WHERE revision = ? AND id = ?`, revision, share).Scan(&found)
		if err != nil {
			return notFound(err)
		}
		return revoke(ctx, tx, `id = ?`, found, s.moment())
	})
}

// RevokeShares revokes every link of a revision.
func (s *Store) RevokeShares(ctx context.Context, id int64, number int) error {
	return s.change(ctx, func(tx *sql.Tx) error {
		revision, err := revisionID(ctx, tx, id, number)
		if err != nil {
			return err
		}
		return revoke(ctx, tx, `revision = ?`, revision, s.moment())
	})
}

// ShareByToken gives the revision that a link opens. A token that was revoked, a
// design that is in the bin and a token that never was are all ErrNotFound.
//
// What is compared, in the index, are hashes: how long that takes tells nothing
// of a token, since nobody can choose the hash of a guess.
func (s *Store) ShareByToken(ctx context.Context, token string) (r Revision, err error) {
	err = s.view(ctx, func(q querier) error {
		r, err = shareByToken(ctx, q, token)
		return err
	})
	return r, err
}

func hashToken(token string) []byte {
	sum := sha256.Sum256([]byte(token))
	return sum[:]
}

func createShare(ctx context.Context, tx *sql.Tx, made Share, token string) (Share, error) {
	revision, err := revisionID(ctx, tx, made.Design, made.Number)
	if err != nil {
		return Share{}, err
	}
	r, err := tx.ExecContext(ctx, `INSERT INTO shares (revision, token_hash, note, created_at) VALUES (?, ?, ?, ?)`,
		revision, hashToken(token), made.Note, made.CreatedAt.UnixMicro())
	if err != nil {
		return Share{}, err
	}
	made.ID, err = r.LastInsertId()
	return made, err
}

// revisionID is the key of a revision whose design is not in the bin.
func revisionID(ctx context.Context, q querier, id int64, number int) (key int64, err error) {
	const query = `SELECT revisions.id FROM revisions JOIN designs ON designs.id = revisions.design
		WHERE design = ? AND number = ? AND deleted_at IS NULL`
	return key, notFound(q.QueryRowContext(ctx, query, id, number).Scan(&key))
}

func shares(ctx context.Context, q querier, id int64, number int) ([]Share, error) {
	revision, err := revisionID(ctx, q, id, number)
	if err != nil {
		return nil, err
	}
	rows, err := q.QueryContext(ctx, `SELECT id, note, created_at, revoked_at FROM shares WHERE revision = ? ORDER BY id DESC`, revision)
	if err != nil {
		return nil, err
	}
	defer rows.Close()
	var list []Share
	for rows.Next() {
		h := Share{Design: id, Number: number}
		var created int64
		var revoked sql.NullInt64
		if err := rows.Scan(&h.ID, &h.Note, &created, &revoked); err != nil {
			return nil, err
		}
		h.CreatedAt = fromMicro(created)
		if revoked.Valid {
			h.RevokedAt = fromMicro(revoked.Int64)
		}
		list = append(list, h)
	}
	return list, rows.Err()
}

// revoke leaves the time of those that are revoked already.
func revoke(ctx context.Context, tx *sql.Tx, which string, key int64, at time.Time) error {
	_, err := tx.ExecContext(ctx, `UPDATE shares SET revoked_at = ? WHERE revoked_at IS NULL AND `+which, at.UnixMicro(), key)
	return err
}

func shareByToken(ctx context.Context, q querier, token string) (Revision, error) {
	const query = `SELECT design, number FROM shares JOIN revisions ON revisions.id = shares.revision
		WHERE token_hash = ? AND revoked_at IS NULL`
	var id int64
	var number int
	if err := q.QueryRowContext(ctx, query, hashToken(token)).Scan(&id, &number); err != nil {
		return Revision{}, notFound(err)
	}
	return revision(ctx, q, id, number)
}
