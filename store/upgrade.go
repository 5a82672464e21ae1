package store

import (
	"context"
	"errors"
	"fmt"
	"os"
	"strings"
	"time"
)

// upgrade brings a data file of an older layout to the latest. The steps run
// on a copy that takes the file's place when it is whole and checked; another
// copy keeps the old state under a dated name. Until the very end the file
// itself is the old one, and good: a failure at any step leaves it so.
func upgrade(ctx context.Context, path string, from uint, known schema, now time.Time) error {
	kept := fmt.Sprintf("%s.layout-%d.%s", path, from, now.UTC().Format("20060102T150405Z"))
	draft, err := makeDraft(path)
	if err != nil {
		return err
	}
	if err := copyTo(ctx, path, kept, draft); err != nil {
		return errors.Join(err, discard(kept), discard(draft))
	}
	if err := known.apply(ctx, draft); err != nil {
		return errors.Join(err, discard(kept), discard(draft))
	}
	return place(draft, path)
}

// copyTo writes the database at path, its log worked in, to a new file kept
// and to the empty file draft, and checks both copies.
func copyTo(ctx context.Context, path, kept, draft string) (err error) {
	if err := makeEmpty(kept); err != nil {
		return err
	}
	if err := vacuumInto(ctx, path, kept, draft); err != nil {
		return err
	}
	// A log that is still there has a reader elsewhere: the new file must not
	// come to lie beside it.
	if len(logsBeside(path)) > 0 {
		return fmt.Errorf("another program is reading it")
	}
	for _, copied := range []string{kept, draft} {
		if err := syncFile(copied); err != nil {
			return err
		}
		if err := check(ctx, copied); err != nil {
			return unsound("a copy of it is", err)
		}
	}
	return nil
}

// unsound tells damage in a copy from damage in the file itself, which is as good as it
// was.
func unsound(what string, err error) error {
	if isCorrupt(err) {
		return fmt.Errorf("its layout can't be brought up to date: %s not sound (%s)", what, strings.TrimPrefix(oneLine(err), ErrCorrupt.Error()+": "))
	}
	return err
}

func vacuumInto(ctx context.Context, path string, copies ...string) (err error) {
	db, err := openWriter(path)
	if err != nil {
		return err
	}
	defer func() { err = errors.Join(err, closeWriter(db)) }()
	for _, to := range copies {
		if _, err := db.ExecContext(ctx, `VACUUM INTO ?`, to); err != nil {
			return err
		}
	}
	return nil
}

// check reads a database at rest from end to end.
func check(ctx context.Context, path string) error {
	db, err := openToInspect(path, true)
	if err != nil {
		return err
	}
	defer db.Close()
	return verify(ctx, db)
}

// apply migrates the draft and checks what came of it.
func (s schema) apply(ctx context.Context, draft string) error {
	if err := s.migrate(draft); err != nil {
		return fmt.Errorf("its layout can't be brought up to date: %w", err)
	}
	if err := check(ctx, draft); err != nil {
		return unsound("what came of it is", err)
	}
	return nil
}

func syncFile(path string) error {
	f, err := os.OpenFile(path, os.O_RDWR, 0)
	if err != nil {
		return err
	}
	return errors.Join(f.Sync(), f.Close())
}
