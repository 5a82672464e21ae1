package store

import (
	"context"
	"database/sql"
	"errors"
	"fmt"
	"io/fs"
	"strings"

	"github.com/golang-migrate/migrate/v4"
	"github.com/golang-migrate/migrate/v4/database"
	"github.com/golang-migrate/migrate/v4/database/sqlite"
	"github.com/golang-migrate/migrate/v4/source"
	"github.com/golang-migrate/migrate/v4/source/iofs"
)

// schema is the layout this program works with: numbered steps, and the number
// of the last one.
type schema struct {
	files  fs.FS
	latest uint
	room   func(folder string) (free uint64, known bool)
}

func newSchema(files fs.FS) (schema, error) {
	steps, err := iofs.New(files, ".")
	if err != nil {
		return schema{}, err
	}
	last, err := steps.First()
	for err == nil {
		var next uint
		if next, err = steps.Next(last); err == nil {
			last = next
		}
	}
	if !errors.Is(err, fs.ErrNotExist) || last == 0 {
		return schema{}, fmt.Errorf("reading the steps of the layout: %w", err)
	}
	return schema{files, last, freeRoom}, nil
}

// migrate brings the file at path to the latest layout, each step in a
// transaction. A step that fails leaves the file marked as half done, so this
// is only ever given a file that can be thrown away.
func (s schema) migrate(path string) error {
	steps, err := iofs.New(s.files, ".")
	if err != nil {
		return err
	}
	db, err := openWriter(path)
	if err != nil {
		return err
	}
	if err := s.run(steps, db); err != nil {
		// The library can leave a transaction open on the only connection, and
		// a last checkpoint would wait for it without end.
		return errors.Join(err, db.Close())
	}
	return closeWriter(db)
}

// run leaves db open: the library's own Close would keep quiet about what its
// last checkpoint met.
func (s schema) run(steps source.Driver, db *sql.DB) error {
	target, err := sqlite.WithInstance(db, &sqlite.Config{})
	if err != nil {
		return err
	}
	m, err := migrate.NewWithInstance("iofs", steps, "sqlite", target)
	if err != nil {
		return err
	}
	return unquoted(m.Migrate(s.latest))
}

// unquoted takes the database's own error out of the library's, which repeats
// the whole step and hides what it wraps.
func unquoted(err error) error {
	var quoted *database.Error
	if errors.As(err, &quoted) && quoted.OrigErr != nil {
		return quoted.OrigErr
	}
	return err
}

// versionOf reads the number of the last step that a file has run. The
// migration library can't be asked: it takes any failure to read for "none".
func versionOf(ctx context.Context, db *sql.DB) (version uint, dirty bool, err error) {
	err = db.QueryRowContext(ctx, `SELECT version, dirty FROM schema_migrations`).Scan(&version, &dirty)
	if errors.Is(err, sql.ErrNoRows) {
		return 0, false, nil
	}
	return version, dirty, err
}

// verify reports the first damage it finds: in the pages, or a row that refers
// to one that isn't there, which SQLite reports as rows and never as an error.
func verify(ctx context.Context, db *sql.DB) error {
	var verdict string
	if err := db.QueryRowContext(ctx, `PRAGMA integrity_check(1)`).Scan(&verdict); err != nil {
		return err
	}
	if verdict != "ok" {
		return fmt.Errorf("%w: %s", ErrCorrupt, strings.TrimPrefix(verdict, "*** in database main ***\n"))
	}
	var orphans int
	if err := db.QueryRowContext(ctx, `SELECT count(*) FROM pragma_foreign_key_check`).Scan(&orphans); err != nil {
		return err
	}
	if orphans > 0 {
		return fmt.Errorf("%w: %d rows refer to others that are missing", ErrCorrupt, orphans)
	}
	return nil
}
