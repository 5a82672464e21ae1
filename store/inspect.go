package store

import (
	"context"
	"database/sql"
	"encoding/binary"
	"errors"
	"fmt"
	"io"
	"net/url"
	"os"
	"path/filepath"
	"strings"

	"modernc.org/sqlite"
)

// The fixed places of a SQLite file's header (sqlite.org/fileformat2.html,
// section 1.3) that say whose file it is.
const (
	headerSize    = 100
	headerMagic   = "SQLite format 3\x00"
	pageSizeAt    = 16 // 1 stands for 65536
	applicationAt = 68
	applicationID = 0x4c6f7373 // "Loss"; the first migration sets it
)

// inspect finds out, without changing a byte or leaving a file, whether the
// existing file at path is a sound data file, and which layout it has.
func inspect(ctx context.Context, path string, latest uint) (version uint, err error) {
	if err := checkHeader(path); err != nil {
		return 0, err
	}
	subject, unchanging, remove, err := snapshot(path)
	if err != nil {
		return 0, err
	}
	defer remove()
	db, err := openToInspect(subject, unchanging)
	if err != nil {
		return 0, err
	}
	defer db.Close()
	return inspectContent(ctx, db, path, latest)
}

// checkHeader judges by the first bytes. It opens the file for writing, too,
// to find out whether that will be possible.
func checkHeader(path string) error {
	f, err := os.OpenFile(path, os.O_RDWR, 0)
	if err != nil {
		return err
	}
	defer f.Close()
	var h [headerSize]byte
	n, err := io.ReadFull(f, h[:])
	switch {
	case errors.Is(err, io.EOF):
		return &OpenError{Kind: ErrBroken, Path: path, Words: "is empty; put a backup in its place, or remove it to start with a new one"}
	case err != nil && !errors.Is(err, io.ErrUnexpectedEOF):
		return err
	case string(h[:min(n, len(headerMagic))]) != headerMagic[:min(n, len(headerMagic))]:
		return foreign(path, "is not a Lossbook data file")
	case n < headerSize:
		return damaged(path, errors.New("the file ends within its header"))
	case binary.BigEndian.Uint32(h[applicationAt:]) != applicationID:
		return foreign(path, "is a database of another program")
	}
	return checkSize(f, path, h)
}

// checkSize wants whole pages in a file that no log can complete: SQLite
// itself takes what is missing of the last one for zeros.
func checkSize(f *os.File, path string, h [headerSize]byte) error {
	info, err := f.Stat()
	if err != nil {
		return err
	}
	page := int64(binary.BigEndian.Uint16(h[pageSizeAt:]))
	if page == 1 {
		page = 65536
	}
	if page == 0 || info.Size()%page != 0 && len(logsBeside(path)) == 0 {
		return damaged(path, errors.New("the file ends within a page"))
	}
	return nil
}

func foreign(path, words string) error {
	return &OpenError{Kind: ErrForeign, Path: path, Words: words + " and was left alone; name another file"}
}

func damaged(path string, cause error) error {
	how := strings.TrimPrefix(oneLine(cause), ErrCorrupt.Error()+": ")
	return &OpenError{Kind: ErrBroken, Path: path, Cause: cause,
		Words: "is damaged (" + how + ") and was left alone; put a backup in its place, or name another file"}
}

// snapshot names a file that can be read in place of path. After a clean end
// that is path itself, which nothing will write to meanwhile. After a crash a
// log lies beside it, and reading both would work that log in: a copy of them
// is read instead.
func snapshot(path string) (subject string, unchanging bool, remove func(), err error) {
	logs := logsBeside(path)
	if len(logs) == 0 {
		return path, true, func() {}, nil
	}
	dir, err := os.MkdirTemp("", "lossbook-")
	if err != nil {
		return "", false, nil, err
	}
	remove = func() { os.RemoveAll(dir) }
	subject = filepath.Join(dir, "copy")
	for _, suffix := range append(logs, "") {
		if err := copyFile(path+suffix, subject+suffix); err != nil {
			remove()
			return "", false, nil, err
		}
	}
	return subject, false, remove, nil
}

// logsBeside lists the suffixes of the write-ahead log and the rollback
// journal of the file at path, as far as they are there and not empty.
func logsBeside(path string) []string {
	var logs []string
	for _, suffix := range []string{"-wal", "-journal"} {
		if info, err := os.Stat(path + suffix); err == nil && info.Size() > 0 {
			logs = append(logs, suffix)
		}
	}
	return logs
}

func copyFile(from, to string) (err error) {
	in, err := os.Open(from)
	if err != nil {
		return err
	}
	defer in.Close()
	out, err := os.OpenFile(to, os.O_WRONLY|os.O_CREATE|os.O_EXCL, 0o600)
	if err != nil {
		return err
	}
	defer func() { err = errors.Join(err, out.Close()) }()
	_, err = io.Copy(out, in)
	return err
}

// openToInspect opens a file with none of our settings, which would write. One
// that is unchanging is read without locks, and without the side files that
// come with them.
func openToInspect(path string, unchanging bool) (*sql.DB, error) {
	q := url.Values{"mode": {"rw"}, "_defensive": {"1"}, "_pragma": {"trusted_schema(0)"}}
	if unchanging {
		q.Set("mode", "ro")
		q.Set("immutable", "1")
	}
	c, err := sqlite.NewConnector(address(path, q))
	if err != nil {
		return nil, err
	}
	db := sql.OpenDB(c)
	db.SetMaxOpenConns(1)
	return db, nil
}

func inspectContent(ctx context.Context, db *sql.DB, path string, latest uint) (uint, error) {
	if err := verify(ctx, db); err != nil {
		if isCorrupt(err) {
			return 0, damaged(path, err)
		}
		return 0, err
	}
	version, dirty, err := layoutOf(ctx, db)
	switch {
	case err != nil:
		return 0, err
	case version == 0:
		return 0, damaged(path, errors.New("tables are missing"))
	case dirty:
		return 0, damaged(path, errors.New("a change of its layout was cut short"))
	case version > latest:
		return 0, &OpenError{Kind: ErrNewer, Path: path, Words: fmt.Sprintf(
			"was written by a newer Lossbook (layout %d, this one knows up to %d) and was left alone; start the newer program, or name another file", version, latest)}
	}
	return version, nil
}

// layoutOf is 0 where tables are missing that every layout has.
func layoutOf(ctx context.Context, db *sql.DB) (version uint, dirty bool, err error) {
	const tables = `SELECT count(*) FROM sqlite_schema WHERE type = 'table'
		AND name IN ('schema_migrations', 'meta', 'designs', 'revisions')`
	var n int
	if err := db.QueryRowContext(ctx, tables).Scan(&n); err != nil || n < 4 {
		return 0, false, err
	}
	return versionOf(ctx, db)
}
