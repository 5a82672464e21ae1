package store

import (
	"context"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"time"

	"lossbook/migrations"
)

// Open opens the data file at path, and makes it and its folder if they aren't
// there, readable by nobody else. A file of an older layout is brought up to
// date, with a dated copy left beside it. A file that can't be served is
// refused with an OpenError and stays as it is.
func Open(ctx context.Context, path string) (*Store, error) {
	known, err := newSchema(migrations.Files)
	if err != nil {
		return nil, err
	}
	return open(ctx, path, known, time.Now)
}

func open(ctx context.Context, path string, known schema, now func() time.Time) (*Store, error) {
	path, err := locate(path)
	if err != nil {
		return nil, refusal(path, err)
	}
	if err := makeFolder(filepath.Dir(path)); err != nil {
		return nil, refusal(path, err)
	}
	held, err := acquire(path)
	if err != nil {
		return nil, refusal(path, err)
	}
	s := &Store{lock: held, now: now}
	if err := s.start(ctx, path, known); err != nil {
		held.release() // what it could report matters less than the refusal
		return nil, refusal(path, err)
	}
	return s, nil
}

// start readies the file, under the lock, and connects to it.
func (s *Store) start(ctx context.Context, path string, known schema) error {
	if err := s.ready(ctx, path, known); err != nil {
		return err
	}
	beside := besides(path)
	if err := s.connect(ctx, path); err != nil {
		removeNew(path, beside)
		return err
	}
	if _, err := s.Purge(ctx, s.now()); err != nil {
		return errors.Join(err, s.disconnect())
	}
	return nil
}

func (s *Store) ready(ctx context.Context, path string, known schema) error {
	if _, err := os.Lstat(path); errors.Is(err, fs.ErrNotExist) {
		return create(path, known)
	}
	version, err := inspect(ctx, path, known.latest)
	if err != nil {
		return err
	}
	if version < known.latest {
		if err := known.fits(path); err != nil {
			return err
		}
		if err := upgrade(ctx, path, version, known, s.now()); err != nil {
			return err
		}
	}
	return os.Chmod(path, 0o600)
}

// besides lists the side files there are.
func besides(path string) map[string]bool {
	there := map[string]bool{}
	for _, suffix := range []string{"-wal", "-shm"} {
		_, err := os.Lstat(path + suffix)
		there[suffix] = err == nil
	}
	return there
}

// removeNew removes the side files that SQLite leaves when it meets a full
// disk while it connects. Those that were there before may be in use; a log
// with something in it is never removed.
func removeNew(path string, before map[string]bool) {
	if len(logsBeside(path)) > 0 {
		return
	}
	for suffix, was := range before {
		if !was {
			_ = os.Remove(path + suffix)
		}
	}
}

// connect opens the writer first: it is the one that may work in a log that a
// crash left.
func (s *Store) connect(ctx context.Context, path string) (err error) {
	if s.write, err = openWriter(path); err != nil {
		return err
	}
	if s.read, err = openReaders(path); err != nil {
		return errors.Join(err, s.write.Close())
	}
	if err := errors.Join(checkEngine(ctx, s.write), s.read.PingContext(ctx)); err != nil {
		return errors.Join(err, s.disconnect())
	}
	return nil
}

// disconnect closes the readers first: the last connection to close takes the
// log with it.
func (s *Store) disconnect() error {
	return errors.Join(s.read.Close(), closeWriter(s.write))
}

// locate follows links to the file itself, so that all its names share one
// lock, and refuses what can't be a data file.
func locate(path string) (string, error) {
	path, err := filepath.Abs(path)
	if err != nil {
		return path, err
	}
	if _, err := os.Lstat(path); errors.Is(err, fs.ErrNotExist) {
		return path, nil
	}
	info, err := os.Stat(path)
	switch {
	case errors.Is(err, fs.ErrNotExist):
		return path, &OpenError{Kind: ErrUnreadable, Path: path, Words: "is a link to a file that isn't there; put that back, or remove the link"}
	case err != nil:
		return path, err
	case info.IsDir():
		return path, &OpenError{Kind: ErrUnreadable, Path: path, Words: "is a folder; name a file in it"}
	case !info.Mode().IsRegular():
		return path, &OpenError{Kind: ErrUnreadable, Path: path, Words: "is not a regular file; name another one"}
	}
	return filepath.EvalSymlinks(path)
}

// makeFolder makes the folders that are missing, for the owner only, whatever
// the umask. Folders that are there belong to somebody and stay as they are.
func makeFolder(dir string) error {
	if _, err := os.Stat(dir); !errors.Is(err, fs.ErrNotExist) {
		return err
	}
	if err := makeFolder(filepath.Dir(dir)); err != nil {
		return err
	}
	if err := os.Mkdir(dir, 0o700); err != nil && !errors.Is(err, fs.ErrExist) {
		return err
	}
	return os.Chmod(dir, 0o700)
}

// create builds a data file under another name and moves it into place when it
// is whole, so that a file at path is never half made.
func create(path string, known schema) error {
	if logs := logsBeside(path); len(logs) > 0 {
		return &OpenError{Kind: ErrBroken, Path: path, Words: fmt.Sprintf(
			"is missing, but its log %s is there and may hold saved work; put the file back beside it, or move the log away", path+logs[0])}
	}
	draft, err := makeDraft(path)
	if err != nil {
		return err
	}
	if err := known.migrate(draft); err != nil {
		return errors.Join(err, discard(draft))
	}
	return place(draft, path)
}

// makeDraft makes the empty file that a data file is built in, in place of one
// that a crash may have left.
func makeDraft(path string) (string, error) {
	draft := path + ".building"
	if err := discard(draft); err != nil {
		return "", err
	}
	return draft, makeEmpty(draft)
}

func makeEmpty(path string) error {
	f, err := os.OpenFile(path, os.O_WRONLY|os.O_CREATE|os.O_EXCL, 0o600)
	if err != nil {
		return err
	}
	return errors.Join(f.Chmod(0o600), f.Close())
}

// discard removes a database with its side files.
func discard(path string) error {
	var errs []error
	for _, suffix := range []string{"", "-wal", "-shm", "-journal"} {
		if err := os.Remove(path + suffix); !errors.Is(err, fs.ErrNotExist) {
			errs = append(errs, err)
		}
	}
	return errors.Join(errs...)
}

// place moves a finished draft to path, on the disk too before it returns.
func place(draft, path string) error {
	if err := syncFile(draft); err != nil {
		return errors.Join(err, discard(draft))
	}
	if err := os.Rename(draft, path); err != nil {
		return errors.Join(err, discard(draft))
	}
	return syncFolder(filepath.Dir(path))
}
