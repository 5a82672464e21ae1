package store

import (
	"context"
	"database/sql"
	"fmt"
	"net/url"
	"path/filepath"
	"strings"
	"testing"
)

// All connections are open at once, so each that the store will ever use is
// asked, and asked by itself.
func TestEveryConnectionHasItsSettings(t *testing.T) {
	s := openNew(t)
	want := map[string]string{"foreign_keys": "1", "recursive_triggers": "1", "trusted_schema": "0",
		"busy_timeout": "5000", "journal_mode": "wal", "synchronous": "2"}
	asked := 0
	for _, pool := range []struct {
		db        *sql.DB
		size      int
		queryOnly string
	}{{s.write, 1, "0"}, {s.read, readers, "1"}} {
		want["query_only"] = pool.queryOnly
		for _, conn := range wholePool(t, pool.db, pool.size) {
			for name, value := range want {
				var got string
				if err := conn.QueryRowContext(t.Context(), "PRAGMA "+name).Scan(&got); err != nil || got != value {
					t.Errorf("%s is %s (%v), want %s", name, got, err, value)
				}
				asked++
			}
		}
	}
	if asked != (1+readers)*len(want) {
		t.Errorf("asked %d times, want %d", asked, (1+readers)*len(want))
	}
}

func wholePool(t *testing.T, db *sql.DB, size int) []*sql.Conn {
	t.Helper()
	if limit := db.Stats().MaxOpenConnections; limit != size {
		t.Fatalf("the pool takes %d connections, want %d", limit, size)
	}
	conns := make([]*sql.Conn, size)
	for i := range conns {
		c, err := db.Conn(t.Context())
		if err != nil {
			t.Fatal(err)
		}
		t.Cleanup(func() { c.Close() })
		conns[i] = c
	}
	return conns
}

func TestSettingThatDoesNotHoldIsNoticed(t *testing.T) {
	path := dataFile(t)
	openAt(t, path)
	for _, bad := range []pragma{
		{"foreign_keyz", "1", "1"},
		{"synchronous", "FUL", "2"},
		{"busy_timeout", "5000", "6000"},
	} {
		db, err := openPool(path, 1, []pragma{bad}, "immediate")
		if err != nil {
			t.Fatal(err)
		}
		defer db.Close()
		if err := db.Ping(); err == nil || !strings.Contains(err.Error(), bad.name) {
			t.Errorf("%v: %v, want an error that names it", bad, err)
		}
	}
}

func TestReadersCanNotWrite(t *testing.T) {
	s := openNew(t)
	if _, err := s.read.Exec(`INSERT INTO meta VALUES ('a', 'b')`); err == nil {
		t.Error("a reader wrote")
	}
}

func TestEngineFloor(t *testing.T) {
	for version, serves := range map[string]bool{
		"3.51.3": true, "3.51.4": true, "3.52.0": true, "3.54.1": true, "3.100.0": true, "4.0.0": true,
		"3.51.2": false, "3.50.9": false, "3.9.9": false, "2.99.99": false, "": false, "x.y.z": false,
	} {
		if err := engineServes(version); (err == nil) != serves {
			t.Errorf("%q: %v, want it to serve: %v", version, err, serves)
		}
	}
	s := openNew(t)
	if err := checkEngine(t.Context(), s.read); err != nil {
		t.Error(err)
	}
}

func TestAwkwardPaths(t *testing.T) {
	for _, name := range []string{"a b", "a?b", "a#b", "a%20b", "a%b", "ä µ", "a&b=c", "a;b", "'\"", ":memory:", "file:x", "-wal"} {
		dir := t.TempDir()
		path := filepath.Join(dir, name, name+".db")
		s, err := Open(t.Context(), path)
		if err != nil {
			t.Errorf("%q: %v", name, err)
			continue
		}
		create1(t, s, "d")
		closeNow(t, s)
		if got, want := filesBelow(t, dir), fmt.Sprint([]string{filepath.Join(name, name+".db")}); fmt.Sprint(got) != want {
			t.Errorf("%q: left %v, want %v", name, got, want)
		}
		wantNames(t, openAt(t, path), "d")
	}
}

func TestAddressOnWindows(t *testing.T) {
	if got := address("C:/data/x.db", url.Values{}); got != "file:/C:/data/x.db" {
		t.Error(got)
	}
}

func TestOperationsAfterCloseAreRefused(t *testing.T) {
	s := openNew(t)
	closeNow(t, s)
	closeNow(t, s)
	if _, err := s.Designs(context.Background()); err != ErrClosed {
		t.Errorf("read: %v, want ErrClosed", err)
	}
	if _, err := s.Create(context.Background(), NewDesign{}); err != ErrClosed {
		t.Errorf("write: %v, want ErrClosed", err)
	}
}
