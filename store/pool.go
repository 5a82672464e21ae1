package store

import (
	"context"
	"database/sql"
	"database/sql/driver"
	"errors"
	"fmt"
	"net/url"
	"path/filepath"
	"strings"

	"modernc.org/sqlite"
)

// readers is how many connections read at the same time.
const readers = 7

// engineFloor is the oldest SQLite that is trusted with the data: the first
// without the WAL-reset bug (sqlite.org/wal.html#walresetbug), which could
// damage a file that is written and checkpointed at the same moment.
var engineFloor = [3]int{3, 51, 3}

// pragma is a setting of a connection, with the value that reads back.
type pragma struct{ name, set, want string }

// pragmas hold on every connection. A misspelt one is ignored by SQLite, so
// each is read back before the connection is used.
var pragmas = []pragma{
	{"busy_timeout", "5000", "5000"},
	{"journal_mode", "WAL", "wal"},
	{"synchronous", "FULL", "2"}, // a save is acknowledged when it is on the disk
	{"foreign_keys", "1", "1"},
	{"recursive_triggers", "1", "1"}, // or REPLACE deletes past the triggers
	{"trusted_schema", "0", "0"},
}

// readOnly is what readers add; a read-only transaction alone stops no write.
var readOnly = pragma{"query_only", "1", "1"}

// openWriter opens the only connection that may write to the file at path,
// which must exist.
func openWriter(path string) (*sql.DB, error) {
	return openPool(path, 1, pragmas, "immediate")
}

// openReaders opens the connections that may not.
func openReaders(path string) (*sql.DB, error) {
	return openPool(path, readers, append(pragmas[:len(pragmas):len(pragmas)], readOnly), "deferred")
}

func openPool(path string, size int, settings []pragma, lock string) (*sql.DB, error) {
	q := url.Values{"mode": {"rw"}, "_txlock": {lock}, "_dqs": {"0"}, "_defensive": {"1"}}
	for _, p := range settings {
		q.Add("_pragma", p.name+"("+p.set+")")
	}
	base, err := sqlite.NewConnector(address(path, q))
	if err != nil {
		return nil, err
	}
	db := sql.OpenDB(connector{base, settings})
	db.SetMaxOpenConns(size)
	db.SetMaxIdleConns(size)
	return db, nil
}

// address is the URI of the file at path, whatever characters that has.
func address(path string, q url.Values) string {
	path = filepath.ToSlash(path)
	if !strings.HasPrefix(path, "/") {
		path = "/" + path
	}
	return (&url.URL{Scheme: "file", OmitHost: true, Path: path, RawQuery: q.Encode()}).String()
}

// connector hands out only connections whose settings read back as asked for:
// also those that the pool opens later, in place of one it dropped.
type connector struct {
	driver.Connector
	settings []pragma
}

// Connect opens a connection and reads its settings back.
func (c connector) Connect(ctx context.Context) (driver.Conn, error) {
	conn, err := c.Connector.Connect(ctx)
	if err != nil {
		return nil, err
	}
	for _, p := range c.settings {
		if err := p.verify(ctx, conn); err != nil {
			return nil, errors.Join(err, conn.Close())
		}
	}
	return conn, nil
}

func (p pragma) verify(ctx context.Context, conn driver.Conn) error {
	rows, err := conn.(driver.QueryerContext).QueryContext(ctx, "PRAGMA "+p.name, nil)
	if err != nil {
		return err
	}
	defer rows.Close()
	got := make([]driver.Value, len(rows.Columns()))
	if len(got) != 1 {
		return fmt.Errorf("the database knows no setting %s", p.name)
	}
	if err := rows.Next(got); err != nil {
		return fmt.Errorf("setting %s: %w", p.name, err)
	}
	if fmt.Sprint(got[0]) != p.want {
		return fmt.Errorf("setting %s is %v, not %s", p.name, got[0], p.want)
	}
	return nil
}

// checkEngine refuses a SQLite below the floor.
func checkEngine(ctx context.Context, db *sql.DB) error {
	var text string
	if err := db.QueryRowContext(ctx, "SELECT sqlite_version()").Scan(&text); err != nil {
		return err
	}
	return engineServes(text)
}

func engineServes(text string) error {
	var v [3]int
	if _, err := fmt.Sscanf(text, "%d.%d.%d", &v[0], &v[1], &v[2]); err != nil {
		return fmt.Errorf("SQLite says its version is %q: %w", text, err)
	}
	for i, floor := range engineFloor {
		if v[i] != floor {
			if v[i] > floor {
				return nil
			}
			return fmt.Errorf("SQLite %s is too old: build with %d.%d.%d or later", text, engineFloor[0], engineFloor[1], engineFloor[2])
		}
	}
	return nil
}

// closeWriter empties the write-ahead log into the file, then closes it. The
// last connection to close does that too, but keeps quiet when it can't.
func closeWriter(db *sql.DB) error {
	_, err := db.Exec("PRAGMA wal_checkpoint(TRUNCATE)")
	return errors.Join(fault(err), db.Close())
}
