package store

import (
	"errors"
	"os"
	"path/filepath"
	"strings"
	"sync"
	"sync/atomic"
	"testing"
	"time"
)

func TestSecondStartSaysWhereTheFirstIs(t *testing.T) {
	path := dataFile(t)
	s := openAt(t, path)
	create1(t, s, "d")
	wantInUse(t, path, "", "another Lossbook")
	if err := s.Announce("http://127.0.0.1:8470/"); err != nil {
		t.Fatal(err)
	}
	wantInUse(t, path, "http://127.0.0.1:8470/", "at http://127.0.0.1:8470/;")
	if err := s.Announce("http://[::1]:1/"); err != nil {
		t.Fatal(err)
	}
	wantInUse(t, path, "http://[::1]:1/", "at http://[::1]:1/;")

	link := filepath.Join(t.TempDir(), "link.db")
	if err := os.Symlink(path, link); err != nil {
		t.Fatal(err)
	}
	wantInUse(t, link, "http://[::1]:1/", "at http://[::1]:1/;")

	create1(t, s, "the first one still saves")
	closeNow(t, s)
	wantNames(t, openAt(t, link), "the first one still saves", "d")
}

func wantInUse(t *testing.T, path, address, words string) {
	t.Helper()
	s, err := Open(t.Context(), path)
	if err == nil {
		s.Close()
		t.Fatal("opened twice")
	}
	var refused *OpenError
	if !errors.As(err, &refused) || !errors.Is(err, ErrInUse) || refused.Address != address || !strings.Contains(err.Error(), words) {
		t.Errorf("%v; want ErrInUse at %q with %q", err, address, words)
	}
}

func TestAddressThatIsNoneIsNotRepeated(t *testing.T) {
	for _, content := range []string{"\x1b[2Jhttp://x", "a\nb", "\xff\xfe", "\x00"} {
		path := dataFile(t)
		openAt(t, path)
		write(t, lockPath(path), []byte(content))
		wantInUse(t, path, "", "another Lossbook")
	}
}

func TestLockOfAKilledProcessIsTaken(t *testing.T) {
	path := dataFile(t)
	closeNow(t, openAt(t, path))
	write(t, lockPath(path), []byte("http://127.0.0.1:1/\n"))
	openAt(t, path)
	wantInUse(t, path, "", "another Lossbook")
}

// Owners come and go, and remove the lock's file each time: there is never
// more than one.
func TestOneOwnerAtATime(t *testing.T) {
	const contenders, wins = 8, 40
	path := filepath.Join(t.TempDir(), "x.db")
	var owners, taken atomic.Int64
	var all sync.WaitGroup
	for range contenders {
		all.Go(func() {
			for won := 0; won < wins; {
				l, err := acquire(path)
				if errors.Is(err, ErrInUse) {
					continue
				}
				if err != nil {
					t.Error(err)
					return
				}
				if n := owners.Add(1); n != 1 {
					t.Errorf("%d owners", n)
				}
				time.Sleep(100 * time.Microsecond) // for others to meet it
				owners.Add(-1)
				won++
				taken.Add(1)
				l.release()
			}
		})
	}
	all.Wait()
	if taken.Load() != contenders*wins {
		t.Errorf("taken %d times, want %d", taken.Load(), contenders*wins)
	}
}
