// Package store keeps designs, their revisions and the links to those in one
// SQLite file.
//
// It never computes and never interprets: drafts, designs and results are
// JSON that callers give and get back byte for byte. Everything that is
// acknowledged is on the disk; what is refused leaves the file as it was.
package store

import (
	"context"
	"database/sql"
	"errors"
	"sync"
	"time"
)

// Store is an open data file. Its methods may be called from any goroutine.
type Store struct {
	read  *sql.DB // several connections that can't write
	write *sql.DB // the one connection that can: writers queue for it
	lock  *lock
	now   func() time.Time

	gate   sync.RWMutex // held for reading by every operation, for writing to close
	closed bool
}

// Announce leaves the address the server answers at where a second start on
// the same data file finds it and can name it.
func (s *Store) Announce(address string) error { return s.lock.announce(address) }

// Close waits for running operations, moves everything into the data file
// itself, so that it can be copied alone, and lets go of it. A second Close
// does nothing.
func (s *Store) Close() error {
	s.gate.Lock()
	defer s.gate.Unlock()
	if s.closed {
		return nil
	}
	s.closed = true
	return errors.Join(s.read.Close(), closeWriter(s.write), s.lock.release())
}

// querier is what a read needs, be it within a change or not.
type querier interface {
	QueryContext(ctx context.Context, query string, args ...any) (*sql.Rows, error)
	QueryRowContext(ctx context.Context, query string, args ...any) *sql.Row
}

// view runs fn on one consistent state of the data.
func (s *Store) view(ctx context.Context, fn func(querier) error) error {
	return s.within(ctx, s.read, &sql.TxOptions{ReadOnly: true}, func(tx *sql.Tx) error { return fn(tx) })
}

// change runs fn as one change: all of it is kept, and on the disk when change
// returns nil, or none of it is.
func (s *Store) change(ctx context.Context, fn func(*sql.Tx) error) error {
	return s.within(ctx, s.write, nil, fn)
}

func (s *Store) within(ctx context.Context, db *sql.DB, options *sql.TxOptions, fn func(*sql.Tx) error) error {
	s.gate.RLock()
	defer s.gate.RUnlock()
	if s.closed {
		return ErrClosed
	}
	tx, err := db.BeginTx(ctx, options)
	if err != nil {
		return fault(err)
	}
	defer tx.Rollback() // after a commit this does nothing
	if err := fn(tx); err != nil {
		return fault(err)
	}
	return fault(tx.Commit())
}

// moment is the current time as the data file can hold it.
func (s *Store) moment() time.Time { return s.now().UTC().Truncate(time.Microsecond) }
