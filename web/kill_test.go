package web

import (
	"bufio"
	"bytes"
	"context"
	"encoding/json"
	"flag"
	"fmt"
	"io"
	"log/slog"
	"math/rand/v2"
	"net"
	"net/http"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"sync"
	"testing"
	"time"

	"lossbook/store"
)

var kills = flag.Int("kills", 12, "how often a server is killed in the middle of saves")

// asServer names the data file that this binary is to serve, in place of running tests.
const asServer = "LOSSBOOK_TEST_SERVER"

// serveUntilKilled serves a data file, and prints its address.
func serveUntilKilled(file string) error {
	kept, err := store.Open(context.Background(), file)
	if err != nil {
		return err
	}
	listener, err := net.Listen("tcp", "127.0.0.1:0")
	if err != nil {
		return err
	}
	handler, err := New(Config{Store: kept, Log: slog.New(slog.NewTextHandler(io.Discard, nil)), Host: listener.Addr().String(), Evidence: os.DirFS("../testdata")})
	if err != nil {
		return err
	}
	fmt.Println(listener.Addr())
	return http.Serve(listener, handler)
}

// promised is what a server acknowledged, by number of the revision.
type promised struct {
	sync.Mutex
	notes map[int]string
}

// saveAndKill starts a server, saves from three sides, and kills the server some time
// after the first save that it acknowledged.
func (p *promised) saveAndKill(t *testing.T, file string, run int) {
	t.Helper()
	server := exec.Command(os.Args[0])
	server.Env = append(os.Environ(), asServer+"="+file)
	server.Stderr = os.Stderr
	out, err := server.StdoutPipe()
	if err != nil {
		t.Fatal(err)
	}
	if err := server.Start(); err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { server.Process.Kill() })
	address, err := bufio.NewReader(out).ReadString('\n')
	if err != nil {
		server.Wait()
		t.Fatalf("kill %d: the server does not start again: %v", run, err)
	}
	var savers sync.WaitGroup
	kill := sync.OnceFunc(func() {
		time.AfterFunc(rand.N(60*time.Millisecond), func() { server.Process.Kill() })
	})
	for side := range 3 {
		savers.Go(func() {
			client := &http.Client{Transport: &http.Transport{}}
			defer client.CloseIdleConnections()
			for n := 0; p.save(client, strings.TrimSpace(address), fmt.Sprintf("run %d, side %d, save %d", run, side, n)); n++ {
				kill()
			}
		})
	}
	savers.Wait()
	server.Process.Kill() // also where no save was acknowledged
	server.Wait()
}

// save reports whether a save was acknowledged, and notes it.
func (p *promised) save(client *http.Client, address, note string) bool {
	body, _ := json.Marshal(revisionRequest{note})
	answer, err := client.Post("http://"+address+"/api/v1/designs/1/revisions", "application/json", bytes.NewReader(body))
	if err != nil {
		return false
	}
	defer answer.Body.Close()
	var saved struct{ Number int }
	if err := json.NewDecoder(answer.Body).Decode(&saved); err != nil || answer.StatusCode != http.StatusCreated {
		return false // the end of the answer may be cut off: nobody has read that it is saved
	}
	p.Lock()
	defer p.Unlock()
	p.notes[saved.Number] = note
	return true
}

// TestSavesSurviveKills kills a server in the middle of saves, again and again. Each
// time the data file must be sound, which opening it checks from end to end, and hold
// whatever was acknowledged; a revision that was not is either whole or not there.
func TestSavesSurviveKills(t *testing.T) {
	file := filepath.Join(t.TempDir(), "data.db")
	kept, err := store.Open(t.Context(), file)
	if err != nil {
		t.Fatal(err)
	}
	d := sample(t, "frost")
	draft, complete, err := draftOf(d).stored()
	if err != nil {
		t.Fatal(err)
	}
	if _, err := kept.Create(t.Context(), store.NewDesign{Name: d.Name, Draft: draft, Complete: complete}); err != nil {
		t.Fatal(err)
	}
	if err := kept.Close(); err != nil {
		t.Fatal(err)
	}
	p := &promised{notes: map[int]string{}}
	logs, first := 0, 1
	for run := range *kills {
		p.saveAndKill(t, file, run+1)
		if info, err := os.Stat(file + "-wal"); err == nil && info.Size() > 0 {
			logs++
		}
		first = p.check(t, file, first)
	}
	p.check(t, file, 1)
	t.Logf("%d kills, %d with a log left, %d revisions acknowledged", *kills, logs, len(p.notes))
	if len(p.notes) < *kills || logs < *kills/2 {
		t.Errorf("%d acknowledged and %d logs left: the kills met no saves", len(p.notes), logs)
	}
}

// check reads the revisions from one on, and returns the number behind the last.
func (p *promised) check(t *testing.T, file string, from int) (next int) {
	t.Helper()
	kept, err := store.Open(t.Context(), file)
	if err != nil {
		t.Fatal(err)
	}
	defer kept.Close()
	heads, err := kept.Revisions(t.Context(), 1)
	if err != nil {
		t.Fatal(err)
	}
	there := map[int]bool{}
	for _, h := range heads {
		if there[h.Number] = true; h.Number < from {
			continue
		}
		saved, err := kept.Revision(t.Context(), 1, h.Number) // its content is held against its hash
		if err != nil {
			t.Fatalf("revision %d: %v", h.Number, err)
		}
		points, _, err := savedResults(saved)
		if note, is := p.notes[h.Number]; err != nil || len(points) != 24 || is && note != saved.Note {
			t.Fatalf("revision %d has %d points and the note %q, want %q: %v", h.Number, len(points), saved.Note, note, err)
		}
		next = max(next, h.Number+1)
	}
	for number, note := range p.notes {
		if !there[number] {
			t.Fatalf("revision %d was acknowledged (%s) and is gone", number, note)
		}
	}
	return max(next, from)
}
