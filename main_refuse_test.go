package main

import (
	"bytes"
	"database/sql"
	"net"
	"os"
	"path/filepath"
	"strings"
	"syscall"
	"testing"
)

// badStarts is what a start refuses; prepare returns the arguments.
var badStarts = []struct {
	name    string
	code    int
	says    string
	prepare func(t *testing.T, data string) []string
}{
	{"unknown flag", 2, "-nonsense", flags("-nonsense")},
	{"stray argument", 2, "stray", flags("stray")},
	{"no port", 2, "127.0.0.1", flags("-listen", "127.0.0.1")},
	{"all addresses", 3, "0.0.0.0:0", flags("-listen", "0.0.0.0:0")},
	{"all IPv6 addresses", 3, "[::]:0", flags("-listen", "[::]:0")},
	{"no host", 3, "other machines", flags("-listen", ":0")},
	{"a private address", 3, "other machines", flags("-listen", "192.168.1.1:0")},
	{"a name", 3, "other machines", flags("-listen", "lossbook.example:0")},
	{"a name like localhost", 3, "other machines", flags("-listen", "localhost.evil.test:0")},
	{"no such port", 3, "cannot listen", flags("-listen", "127.0.0.1:99999")},
	{"port in use", 3, "in use", func(t *testing.T, data string) []string {
		listener, err := net.Listen("tcp", "127.0.0.1:0")
		if err != nil {
			t.Fatal(err)
		}
		t.Cleanup(func() { listener.Close() })
		return []string{"-listen", listener.Addr().String(), "-data", data}
	}},
	{"data file in use", 3, "already being served at http://127.0.0.1:", func(t *testing.T, data string) []string {
		start(t, data)
		return flags()(t, data)
	}},
	{"a text", 3, "", holding("these are no data\n")},
	{"an empty file", 3, "empty", holding("")},
	{"half a database", 3, "", holding("SQLite format 3\x00 and then nothing of the kind")},
	{"another program's database", 3, "name another file", func(t *testing.T, data string) []string {
		inDatabase(t, data, "CREATE TABLE recipes (name TEXT)")
		return flags()(t, data)
	}},
	{"a newer database", 3, "newer", func(t *testing.T, data string) []string {
		start(t, data).stop(syscall.SIGTERM)
		inDatabase(t, data, "UPDATE schema_migrations SET version = 9999")
		return flags()(t, data)
	}},
	{"a folder", 3, "folder", func(t *testing.T, data string) []string {
		if err := os.Mkdir(data, 0o700); err != nil {
			t.Fatal(err)
		}
		return flags()(t, data)
	}},
	{"a file for a folder", 3, "", func(t *testing.T, data string) []string {
		holding("text")(t, data)
		return flags()(t, filepath.Join(data, "below.db"))
	}},
}

func flags(args ...string) func(*testing.T, string) []string {
	return func(_ *testing.T, data string) []string {
		return append([]string{"-listen", "127.0.0.1:0", "-data", data}, args...)
	}
}

func holding(text string) func(*testing.T, string) []string {
	return func(t *testing.T, data string) []string {
		if err := os.WriteFile(data, []byte(text), 0o600); err != nil {
			t.Fatal(err)
		}
		return flags()(t, data)
	}
}

func inDatabase(t *testing.T, path, statement string) {
	t.Helper()
	db, err := sql.Open("sqlite", path)
	if err != nil {
		t.Fatal(err)
	}
	defer db.Close()
	if _, err := db.Exec(statement); err != nil {
		t.Fatal(err)
	}
}

// TestBadStarts says in one line what is wrong, with the exit code for it, and
// leaves the data file as it was.
func TestBadStarts(t *testing.T) {
	for _, c := range badStarts {
		t.Run(c.name, func(t *testing.T) {
			data := filepath.Join(t.TempDir(), "data.db")
			args := c.prepare(t, data)
			before, _ := os.ReadFile(data)
			var stdout, stderr bytes.Buffer
			bad := command(args...)
			bad.Stdout, bad.Stderr = &stdout, &stderr
			bad.Run() // its exit code says how it went
			if code := bad.ProcessState.ExitCode(); code != c.code {
				t.Errorf("exit code %d, want %d: %s", code, c.code, &stderr)
			}
			line := stderr.String()
			if strings.Count(line, "\n") != 1 || !strings.HasPrefix(line, "lossbook: ") || !strings.Contains(line, c.says) || stdout.Len() > 0 {
				t.Errorf("it says %q and prints %q", line, &stdout)
			}
			if after, _ := os.ReadFile(data); !bytes.Equal(before, after) {
				t.Error("the data file is another")
			}
		})
	}
}
