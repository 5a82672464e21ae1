package store

import (
	"errors"
	"io"
	"os"
	"strings"
	"unicode"
)

// lock keeps a second process from serving the same data file. It is a file
// beside it, locked by the operating system and so freed however the process
// ends, and it holds the address the first one answers at.
//
// The data file itself can't carry the lock: closing any descriptor of it
// would drop the locks SQLite holds there.
type lock struct{ file *os.File }

// errLocked is what tryLock reports when another process has the lock.
var errLocked = errors.New("locked by another process")

func lockPath(path string) string { return path + ".lock" }

// acquire locks the data file at path, or fails at once with ErrInUse.
func acquire(path string) (*lock, error) {
	for {
		f, err := os.OpenFile(lockPath(path), os.O_RDWR|os.O_CREATE, 0o600)
		if err != nil {
			return nil, err
		}
		if err := tryLock(f); err != nil {
			defer f.Close()
			if errors.Is(err, errLocked) {
				return nil, inUse(path, f)
			}
			return nil, err
		}
		// The former owner removes the file before it lets go: a lock on a
		// removed file keeps nobody out, so take the one that is there now.
		if isAt(f, lockPath(path)) {
			return own(f)
		}
		f.Close()
	}
}

func own(f *os.File) (*lock, error) {
	l := &lock{f}
	if err := errors.Join(f.Chmod(0o600), f.Truncate(0)); err != nil {
		return nil, errors.Join(err, l.release())
	}
	return l, nil
}

func isAt(f *os.File, path string) bool {
	held, err := f.Stat()
	if err != nil {
		return false
	}
	there, err := os.Stat(path)
	return err == nil && os.SameFile(held, there)
}

func inUse(path string, f *os.File) error {
	e := &OpenError{Kind: ErrInUse, Path: path, Address: announced(f)}
	e.Words = "is being served by another Lossbook; stop that one first, or name another file"
	if e.Address != "" {
		e.Words = "is already being served at " + e.Address + "; open that, or stop it first"
	}
	return e
}

// announced reads the address; what isn't plain text of sensible length is
// none of ours.
func announced(f *os.File) string {
	b, err := io.ReadAll(io.LimitReader(f, 256))
	s := strings.TrimSpace(string(b))
	notPlain := func(r rune) bool { return r == unicode.ReplacementChar || !unicode.IsPrint(r) }
	if err != nil || strings.ContainsFunc(s, notPlain) {
		return ""
	}
	return s
}

func (l *lock) announce(address string) error {
	if err := l.file.Truncate(0); err != nil {
		return fault(err)
	}
	_, err := l.file.WriteAt([]byte(address+"\n"), 0)
	return fault(err)
}

// release removes the file while it is still locked, so that nobody can hold
// it then. Where an open file can't be removed it stays, and does no harm.
func (l *lock) release() error {
	_ = os.Remove(l.file.Name())
	return l.file.Close()
}
