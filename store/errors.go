package store

import (
	"context"
	"errors"
	"fmt"
	"io/fs"
	"strings"
	"syscall"

	"modernc.org/sqlite"
	sqlite3 "modernc.org/sqlite/lib"
)

// Errors of a store in use; tell them apart with errors.Is.
var (
	ErrNotFound = errors.New("there is no such design or revision")
	ErrFull     = errors.New("the disk has no room for this change")
	ErrCorrupt  = errors.New("stored data is damaged")
	ErrClosed   = errors.New("the data file is closed")
)

// Kinds of an OpenError: why Open refused a data file.
var (
	ErrNewer      = errors.New("written by a newer version")
	ErrForeign    = errors.New("not a Lossbook data file")
	ErrBroken     = errors.New("damaged")
	ErrUnreadable = errors.New("not accessible")
	ErrNoRoom     = errors.New("no room on the disk")
	ErrInUse      = errors.New("in use")
)

// OpenError says in one line why a data file was refused and what to do. The
// file was not changed.
type OpenError struct {
	Kind    error  // one of the kinds above
	Path    string // the data file
	Words   string // what is wrong and what to do about it
	Address string // with ErrInUse: where the other server answers, if it said so
	Cause   error  // what the system or the database said, if anything
}

// Error is the one line.
func (e *OpenError) Error() string { return fmt.Sprintf("data file %s %s", e.Path, e.Words) }

// Unwrap gives the kind and the cause to errors.Is and errors.As.
func (e *OpenError) Unwrap() []error {
	if e.Cause == nil {
		return []error{e.Kind}
	}
	return []error{e.Kind, e.Cause}
}

// StaleError reports a change made from a version that is no longer current.
type StaleError struct {
	Current Design // as it stands in the store
}

// Error says which version is current.
func (e *StaleError) Error() string {
	return fmt.Sprintf("design %d was changed elsewhere and is now at version %d", e.Current.ID, e.Current.Version)
}

// fault gives an error of the database its meaning for callers.
func fault(err error) error {
	switch {
	case err == nil:
		return nil
	case isFull(err):
		return fmt.Errorf("%w: %w", ErrFull, err)
	case isCorrupt(err):
		return fmt.Errorf("%w: %w", ErrCorrupt, err)
	}
	return err
}

// refusal turns an error met while opening into an OpenError. Errors that
// already are one, and cancellations, pass unchanged.
func refusal(path string, err error) error {
	var known *OpenError
	switch {
	case errors.As(err, &known):
		return known
	case err == nil, errors.Is(err, context.Canceled), errors.Is(err, context.DeadlineExceeded):
		return err
	}
	e := &OpenError{Path: path, Cause: err}
	switch {
	case isFull(err):
		e.Kind, e.Words = ErrNoRoom, "can't be opened: the disk has no room; free some and start again"
	case isCorrupt(err):
		e.Kind, e.Words = ErrBroken, "is damaged; put a backup in its place, or name another file"
	case isDenied(err):
		e.Kind, e.Words = ErrUnreadable, "can't be opened: permission denied; allow reading and writing it and its folder, or name another file"
	default:
		e.Kind, e.Words = ErrUnreadable, "can't be opened: "+oneLine(err)+"; mend that, or name another file"
	}
	return e
}

// oneLine is the text of an error that may be several joined ones.
func oneLine(err error) string { return strings.ReplaceAll(err.Error(), "\n", "; ") }

// isFull covers a full disk (FULL), a quota or size limit met in the middle of
// a write (IOERR_WRITE), and no room to grow the shared index (IOERR_SHMSIZE).
func isFull(err error) bool {
	switch code(err) {
	case sqlite3.SQLITE_FULL, sqlite3.SQLITE_IOERR_WRITE, sqlite3.SQLITE_IOERR_SHMSIZE:
		return true
	}
	return errors.Is(err, ErrFull) || errors.Is(err, syscall.ENOSPC)
}

func isCorrupt(err error) bool {
	switch code(err) & 0xff {
	case sqlite3.SQLITE_CORRUPT, sqlite3.SQLITE_NOTADB:
		return true
	}
	return errors.Is(err, ErrCorrupt)
}

func isDenied(err error) bool {
	switch code(err) & 0xff {
	case sqlite3.SQLITE_PERM, sqlite3.SQLITE_READONLY, sqlite3.SQLITE_CANTOPEN:
		return true
	}
	return errors.Is(err, fs.ErrPermission) || errors.Is(err, syscall.EROFS)
}

// code is the database's extended result code, 0 for any other error.
func code(err error) int {
	var e *sqlite.Error
	if errors.As(err, &e) {
		return e.Code()
	}
	return 0
}
