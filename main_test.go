package main

import (
	"bufio"
	"bytes"
	"context"
	"database/sql"
	"encoding/csv"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"net"
	"net/http"
	"os"
	"os/exec"
	"path/filepath"
	"regexp"
	"strings"
	"syscall"
	"testing"
	"time"
)

// asProgram makes the test binary be the program, so that a test sees exit
// codes and signals as a shell would.
const asProgram = "LOSSBOOK_TEST_AS_PROGRAM"

func TestMain(m *testing.M) {
	if os.Getenv(asProgram) != "" {
		main()
		os.Exit(0)
	}
	os.Exit(m.Run())
}

func command(args ...string) *exec.Cmd {
	c := exec.Command(os.Args[0], args...)
	c.Env = append(os.Environ(), asProgram+"=1")
	return c
}

// program is a started server.
type program struct {
	t      *testing.T
	cmd    *exec.Cmd
	url    string
	data   string
	stderr bytes.Buffer
}

var startLine = regexp.MustCompile(`^Lossbook at (http://[^ ]+/) · data in (.+)\n$`)

func start(t *testing.T, data string) *program {
	t.Helper()
	p := &program{t: t, cmd: command("-listen", "127.0.0.1:0", "-data", data)}
	p.cmd.Stderr = &p.stderr
	stdout, err := p.cmd.StdoutPipe()
	if err != nil {
		t.Fatal(err)
	}
	if err := p.cmd.Start(); err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { p.cmd.Process.Kill() })
	line, err := bufio.NewReader(stdout).ReadString('\n')
	found := startLine.FindStringSubmatch(line)
	if found == nil {
		p.cmd.Wait()
		t.Fatalf("the start line is %q (%v): %s", line, err, &p.stderr)
	}
	p.url, p.data = strings.TrimSuffix(found[1], "/"), found[2]
	return p
}

// stop sends a signal and waits; it returns the exit code.
func (p *program) stop(signal os.Signal) int {
	p.t.Helper()
	begun := time.Now()
	if err := p.cmd.Process.Signal(signal); err != nil {
		p.t.Fatal(err)
	}
	err := p.cmd.Wait()
	var exit *exec.ExitError
	if err != nil && !errors.As(err, &exit) {
		p.t.Fatal(err)
	}
	if took := time.Since(begun); took > 5*time.Second {
		p.t.Errorf("stopping took %v", took)
	}
	return p.cmd.ProcessState.ExitCode()
}

func (p *program) send(method, path, body string) (int, http.Header, []byte) {
	p.t.Helper()
	r, err := http.NewRequest(method, p.url+path, strings.NewReader(body))
	if err != nil {
		p.t.Fatal(err)
	}
	r.Header.Set("Content-Type", "application/json")
	answer, err := http.DefaultClient.Do(r)
	if err != nil {
		p.t.Fatal(err)
	}
	defer answer.Body.Close()
	text, err := io.ReadAll(answer.Body)
	if err != nil {
		p.t.Fatal(err)
	}
	return answer.StatusCode, answer.Header, text
}

func (p *program) want(status int, method, path, body string) []byte {
	p.t.Helper()
	got, _, text := p.send(method, path, body)
	if got != status {
		p.t.Fatalf("%s %s: status %d, want %d: %s", method, path, got, status, text)
	}
	return text
}

type designs struct {
	Designs []struct {
		ID        int
		Name      string
		Revisions int
	}
}

func (p *program) list() designs {
	p.t.Helper()
	var l designs
	if err := json.Unmarshal(p.want(200, "GET", "/api/v1/designs", ""), &l); err != nil {
		p.t.Fatal(err)
	}
	return l
}

// TestProgram is the main flow over the API: start with samples, change, save,
// take the table along, stop, start again.
func TestProgram(t *testing.T) {
	path := filepath.Join(t.TempDir(), "new folder", "data.db")
	p := start(t, path)
	if got := p.list().Designs; len(got) != 3 {
		t.Fatalf("a first start has %d designs", len(got))
	}
	var kept struct {
		Design  map[string]any
		Version int
	}
	if err := json.Unmarshal(p.want(200, "GET", "/api/v1/designs/1", ""), &kept); err != nil {
		t.Fatal(err)
	}
	kept.Design["name"] = "changed"
	kept.Design["switch"].(map[string]any)["rds_on"] = 0.02
	body, err := json.Marshal(map[string]any{"design": kept.Design, "version": kept.Version})
	if err != nil {
		t.Fatal(err)
	}
	p.want(200, "POST", "/api/v1/budget", string(body[:len(body)-len(fmt.Sprintf(`,"version":%d}`, kept.Version))])+"}")
	p.want(200, "PUT", "/api/v1/designs/1", string(body))
	p.want(409, "PUT", "/api/v1/designs/1", string(body))
	p.want(201, "POST", "/api/v1/designs/1/revisions", `{"note":"first"}`)
	before := p.want(200, "GET", "/designs/1/revisions/1/efficiency.csv", "")
	rows, err := csv.NewReader(bytes.NewReader(before)).ReadAll()
	if err != nil || len(rows) != 25 {
		t.Fatalf("%d rows: %v", len(rows), err)
	}
	p.want(204, "DELETE", "/api/v1/designs/2", "")

	if code := p.stop(syscall.SIGTERM); code != 0 {
		t.Errorf("exit code %d: %s", code, &p.stderr)
	}
	p = start(t, path)
	if page := string(p.want(200, "GET", "/accuracy", "")); !strings.Contains(page, "All are met within their tolerance.") {
		t.Errorf("what the figures were checked against did not come along: %.3000s", page)
	}
	if got := p.list().Designs; len(got) != 2 || got[0].Name != "changed" || got[0].Revisions != 1 {
		t.Errorf("after a restart: %+v", got)
	}
	if after := p.want(200, "GET", "/designs/1/revisions/1/efficiency.csv", ""); !bytes.Equal(before, after) {
		t.Error("after a restart the table is another")
	}
}

// TestStopFinishesWhatItHas signals in the middle of saves: each that was
// acknowledged is there, nothing of the database's is left over.
func TestStopFinishesWhatItHas(t *testing.T) {
	for _, signal := range []os.Signal{syscall.SIGTERM, os.Interrupt} {
		path := filepath.Join(t.TempDir(), "data.db")
		p := start(t, path)
		saved := make(chan int)
		go func() { saved <- p.saveUntilItStops() }()
		time.Sleep(300 * time.Millisecond)
		if code := p.stop(signal); code != 0 {
			t.Errorf("%v: exit code %d: %s", signal, code, &p.stderr)
		}
		acknowledged := <-saved
		if acknowledged == 0 {
			t.Fatalf("%v: nothing was saved before it stopped", signal)
		}
		for _, left := range []string{"-wal", "-shm"} {
			if _, err := os.Stat(path + left); !errors.Is(err, os.ErrNotExist) {
				t.Errorf("%v: %s is left: %v", signal, left, err)
			}
		}
		if got := start(t, path).list().Designs[2].Revisions; got < acknowledged {
			t.Errorf("%v: %d revisions of %d acknowledged", signal, got, acknowledged)
		}
	}
}

func (p *program) saveUntilItStops() (acknowledged int) {
	for {
		answer, err := http.Post(p.url+"/api/v1/designs/1/revisions", "application/json", strings.NewReader(`{"note":"again"}`))
		if err != nil {
			return acknowledged
		}
		if answer.StatusCode == http.StatusCreated {
			acknowledged++
		}
		answer.Body.Close()
	}
}

// TestStopDoesNotWaitForSlowClients holds a request half sent.
func TestStopDoesNotWaitForSlowClients(t *testing.T) {
	p := start(t, filepath.Join(t.TempDir(), "data.db"))
	conn, err := net.Dial("tcp", strings.TrimPrefix(p.url, "http://"))
	if err != nil {
		t.Fatal(err)
	}
	defer conn.Close()
	host := strings.TrimPrefix(p.url, "http://")
	fmt.Fprintf(conn, "POST /api/v1/budget HTTP/1.1\r\nHost: %s\r\nContent-Type: application/json\r\nContent-Length: 1000\r\n\r\n{", host)
	p.list() // the half request has arrived by now
	if code := p.stop(syscall.SIGTERM); code != 0 {
		t.Errorf("exit code %d: %s", code, &p.stderr)
	}
	if _, err := os.Stat(p.data + "-wal"); !errors.Is(err, os.ErrNotExist) {
		t.Errorf("-wal is left: %v", err)
	}
}

func TestHelp(t *testing.T) {
	var out bytes.Buffer
	if err := run(context.Background(), []string{"-h"}, &out); err != nil || !strings.Contains(out.String(), "-listen") || !strings.Contains(out.String(), "-data") {
		t.Errorf("%v: %s", err, &out)
	}
}

// TestDefaultDataFile starts without -data in an empty home.
func TestDefaultDataFile(t *testing.T) {
	home := t.TempDir()
	c := command("-listen", "[::1]:0")
	c.Env = append(c.Env, "XDG_DATA_HOME="+home)
	stdout, err := c.StdoutPipe()
	if err != nil {
		t.Fatal(err)
	}
	if err := c.Start(); err != nil {
		t.Fatal(err)
	}
	line, err := bufio.NewReader(stdout).ReadString('\n')
	c.Process.Signal(syscall.SIGTERM)
	if waited := c.Wait(); err != nil || waited != nil {
		t.Fatal(line, err, waited)
	}
	want := filepath.Join(home, "lossbook", "lossbook.db")
	if found := startLine.FindStringSubmatch(line); found == nil || found[2] != want {
		t.Errorf("the start line is %q, want data in %s", line, want)
	}
	for path, mode := range map[string]os.FileMode{want: 0o600, filepath.Dir(want): 0o700} {
		if info, err := os.Stat(path); err != nil || info.Mode().Perm() != mode {
			t.Errorf("%s: %v %v", path, info, err)
		}
	}
}

// TestSlowClients opens many requests and finishes none: others are answered
// at once, and the slow ones are cut off at the limit.
func TestSlowClients(t *testing.T) {
	t.Parallel()
	p := start(t, filepath.Join(t.TempDir(), "data.db"))
	host := strings.TrimPrefix(p.url, "http://")
	var slow []net.Conn
	for range 200 {
		conn, err := net.Dial("tcp", host)
		if err != nil {
			t.Fatal(err)
		}
		defer conn.Close()
		fmt.Fprintf(conn, "GET / HTTP/1.1\r\nHost: %s\r\nX-Slow: ", host)
		slow = append(slow, conn)
	}
	fastest := time.Hour
	for range 5 {
		begun := time.Now()
		p.list()
		fastest = min(fastest, time.Since(begun))
	}
	if fastest > 200*time.Millisecond {
		t.Errorf("beside slow clients an answer takes %v", fastest)
	}
	for _, conn := range slow {
		conn.SetReadDeadline(time.Now().Add(10 * time.Second))
		if _, err := io.Copy(io.Discard, conn); errors.Is(err, os.ErrDeadlineExceeded) {
			t.Fatal("a slow client is still connected")
		}
	}
}

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
