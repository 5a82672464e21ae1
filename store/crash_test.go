package store

import (
	"bufio"
	"context"
	"fmt"
	"math/rand/v2"
	"os"
	"os/exec"
	"slices"
	"testing"
	"time"
)

// saveUntilKilled saves revisions without end, and says of each that it is
// saved only after the store has.
func saveUntilKilled(args []string) error {
	s, err := Open(context.Background(), args[0])
	if err != nil {
		return err
	}
	list, err := s.Designs(context.Background())
	if err != nil {
		return err
	}
	d := list[0]
	for {
		c := Change{Name: d.Name, Draft: fmt.Appendf(nil, `{"n":"%d"}`, d.Version)}
		if d, err = s.Update(context.Background(), d.ID, d.Version, c); err != nil {
			return err
		}
		r, err := s.SaveRevision(context.Background(), d.ID, d.Version, someRevision(fmt.Sprint(d.Version)))
		if err != nil {
			return err
		}
		fmt.Println(r.Number, r.Hash)
	}
}

// What was acknowledged is there after kill -9, whenever that comes.
func TestAcknowledgedSavesSurviveKills(t *testing.T) {
	const kills = 20
	path := dataFile(t)
	s := openAt(t, path)
	d := create1(t, s, "d")
	closeNow(t, s)
	acknowledged := map[int]string{}
	logs := 0
	for range kills {
		saveAndKill(t, path, acknowledged)
		if len(logsBeside(path)) > 0 {
			logs++
		}
		s := openAt(t, path)
		for number, hash := range acknowledged {
			if r, err := s.Revision(t.Context(), d.ID, number); err != nil || r.Hash != hash {
				t.Fatalf("revision %d: %v", number, err)
			}
		}
		if err := verify(t.Context(), s.read); err != nil {
			t.Fatal(err)
		}
		closeNow(t, s)
	}
	t.Logf("%d kills, %d with a log left, %d revisions acknowledged", kills, logs, len(acknowledged))
	if len(acknowledged) < kills || logs < kills/2 {
		t.Errorf("%d acknowledged and %d logs left: the kills met no saves", len(acknowledged), logs)
	}
}

// saveAndKill adds what one run acknowledged.
func saveAndKill(t *testing.T, path string, acknowledged map[int]string) {
	t.Helper()
	cmd := child(t, "save until killed", path)
	out, err := cmd.StdoutPipe()
	if err != nil {
		t.Fatal(err)
	}
	if err := cmd.Start(); err != nil {
		t.Fatal(err)
	}
	lines := bufio.NewScanner(out)
	for first := true; lines.Scan(); first = false {
		var number int
		var hash string
		if n, _ := fmt.Sscan(lines.Text(), &number, &hash); n != 2 || len(hash) != 64 {
			break // the line the kill cut off
		}
		acknowledged[number] = hash
		if first {
			time.AfterFunc(rand.N(20*time.Millisecond), func() { cmd.Process.Kill() })
		}
	}
	cmd.Wait()
}

func child(t *testing.T, name string, args ...string) *exec.Cmd {
	t.Helper()
	cmd := exec.Command(os.Args[0], args...)
	cmd.Env = append(slices.Clone(os.Environ()), childEnv+"="+name)
	cmd.Stderr = os.Stderr
	return cmd
}
