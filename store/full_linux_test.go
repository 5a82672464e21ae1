package store

import (
	"context"
	"errors"
	"fmt"
	"os"
	"os/signal"
	"path/filepath"
	"slices"
	"strings"
	"syscall"
	"testing"
)

func init() {
	children["serve on full disk"] = serveOnFullDisk
	children["serve with a limit"] = serveWithLimit
}

// A limit on the size of files, like a quota, ends a write with another error
// than a full disk does.
func TestFileSizeLimit(t *testing.T) {
	if out, err := child(t, "serve with a limit", dataFile(t)).Output(); err != nil {
		t.Errorf("%v\n%s", err, out)
	}
}

func serveWithLimit(args []string) error {
	ctx := context.Background()
	signal.Ignore(syscall.SIGXFSZ)
	s, err := Open(ctx, args[0])
	if err != nil {
		return err
	}
	var old syscall.Rlimit
	if err := syscall.Getrlimit(syscall.RLIMIT_FSIZE, &old); err != nil {
		return err
	}
	small := syscall.Rlimit{Cur: 200_000, Max: old.Max}
	if err := syscall.Setrlimit(syscall.RLIMIT_FSIZE, &small); err != nil {
		return err
	}
	big := NewDesign{Draft: make([]byte, 300_000)}
	if _, err := s.Create(ctx, big); !errors.Is(err, ErrFull) {
		return fmt.Errorf("with the limit: %v, want ErrFull", err)
	}
	if err := syscall.Setrlimit(syscall.RLIMIT_FSIZE, &old); err != nil {
		return err
	}
	if _, err := s.Create(ctx, big); err != nil {
		return fmt.Errorf("the same without it: %w", err)
	}
	return s.Close()
}

// A real full disk: a file system of 2 MB, mounted where only the test's child
// can see it.
func TestFullDisk(t *testing.T) {
	cmd := child(t, "serve on full disk", t.TempDir())
	cmd.SysProcAttr = &syscall.SysProcAttr{
		Cloneflags:  syscall.CLONE_NEWUSER | syscall.CLONE_NEWNS,
		UidMappings: []syscall.SysProcIDMap{{HostID: os.Getuid(), Size: 1}},
		GidMappings: []syscall.SysProcIDMap{{HostID: os.Getgid(), Size: 1}},
	}
	cmd.Stderr = nil
	out, err := cmd.CombinedOutput()
	if errors.Is(err, syscall.EPERM) || strings.Contains(string(out), errNoMount.Error()) {
		if os.Getenv("CI") == "true" {
			t.Fatalf("this system lets no test mount a file system, and CI needs one: %v %s", err, out)
		}
		t.Skipf("this system lets no test mount a file system: %v %s", err, out)
	}
	if err != nil {
		t.Errorf("%v\n%s", err, out)
	}
	t.Logf("%s", out)
}

var errNoMount = errors.New("can't mount")

func serveOnFullDisk(args []string) error {
	dir := args[0]
	if err := syscall.Mount("tmpfs", dir, "tmpfs", 0, "size=2m"); err != nil {
		return fmt.Errorf("%w: %w", errNoMount, err)
	}
	path := filepath.Join(dir, "lossbook.db")
	if err := fillWhileServing(dir, path); err != nil {
		return fmt.Errorf("while serving: %w", err)
	}
	if err := openWhenFull(dir, path); err != nil {
		return fmt.Errorf("at start: %w", err)
	}
	if err := createWithLittleRoom(dir); err != nil {
		return fmt.Errorf("a new file: %w", err)
	}
	if err := upgradeWithLittleRoom(dir, path); err != nil {
		return fmt.Errorf("a new layout: %w", err)
	}
	return nil
}

func fillWhileServing(dir, path string) error {
	ctx := context.Background()
	s, err := Open(ctx, path)
	if err != nil {
		return err
	}
	d, err := s.Create(ctx, NewDesign{Name: "d"})
	if err != nil {
		return err
	}
	if err := fill(dir, 0); err != nil {
		return err
	}
	big := NewRevision{Points: make([]byte, 300_000)}
	for range 3 {
		if _, err := s.SaveRevision(ctx, d.ID, d.Version, big); !errors.Is(err, ErrFull) {
			return fmt.Errorf("a save on the full disk: %v, want ErrFull", err)
		}
	}
	if got, err := s.Design(ctx, d.ID); err != nil || got.Revisions != 0 {
		return fmt.Errorf("a read on the full disk: %+v, %v", got, err)
	}
	if err := free(dir); err != nil {
		return err
	}
	if _, err := s.SaveRevision(ctx, d.ID, d.Version, big); err != nil {
		return fmt.Errorf("the same save with room again: %w", err)
	}
	return s.Close()
}

func openWhenFull(dir, path string) error {
	if err := fill(dir, 0); err != nil {
		return err
	}
	for _, p := range []string{path, filepath.Join(dir, "new.db"), filepath.Join(dir, "sub", "new.db")} {
		before, _ := os.ReadFile(p)
		_, err := Open(context.Background(), p)
		if after, _ := os.ReadFile(p); !errors.Is(err, ErrNoRoom) || string(after) != string(before) {
			return fmt.Errorf("%s: %v, want ErrNoRoom and the same bytes", p, err)
		}
		fmt.Println(err)
	}
	if err := os.Remove(filepath.Join(dir, "sub")); err != nil {
		return err
	}
	if err := wantOnly(dir, ballast(dir), path); err != nil {
		return err
	}
	if err := free(dir); err != nil {
		return err
	}
	s, err := Open(context.Background(), path)
	if err != nil {
		return fmt.Errorf("with room again: %w", err)
	}
	_, err = s.Revision(context.Background(), 1, 1)
	return errors.Join(err, s.Close())
}

// littleRoom tries something with ever more room until it works, and tells how
// often it didn't.
func littleRoom(dir string, try func() error) (failed int, err error) {
	for room := int64(0); room < 2<<20; room += 8192 {
		if err := fill(dir, room); err != nil {
			return failed, err
		}
		err := try()
		if err := free(dir); err != nil {
			return failed, err
		}
		if err == nil {
			return failed, nil
		}
		if !errors.Is(err, ErrNoRoom) {
			return failed, fmt.Errorf("with %d bytes: %w, want ErrNoRoom", room, err)
		}
		failed++
	}
	return failed, errors.New("never had room enough")
}

func createWithLittleRoom(dir string) error {
	path := filepath.Join(dir, "new.db")
	others, _ := filepath.Glob(filepath.Join(dir, "*"))
	failed, err := littleRoom(dir, func() error {
		s, err := Open(context.Background(), path)
		if err == nil {
			return s.Close()
		}
		// A file that was finished when the room ended is good, and stays.
		if _, gone := os.Stat(path); gone == nil {
			return err
		}
		return errors.Join(err, wantOnly(dir, append(others, ballast(dir))...))
	})
	fmt.Println("refused for want of room:", failed, "times")
	if failed < 3 {
		return fmt.Errorf("only %d failures: not every step met the full disk", failed)
	}
	return errors.Join(err, os.Remove(path))
}

func upgradeWithLittleRoom(dir, path string) error {
	next, err := newSchema(nextLayout(addColumn))
	if err != nil {
		return err
	}
	before, err := os.ReadFile(path)
	if err != nil {
		return err
	}
	if err := upgradeWithoutRoom(dir, path, next); err != nil {
		return err
	}
	others, _ := filepath.Glob(filepath.Join(dir, "*"))
	failed, err := littleRoom(dir, func() error {
		err := upgrade(context.Background(), path, 1, next, fixedClock()())
		if err == nil {
			return nil
		}
		if after, _ := os.ReadFile(path); string(after) != string(before) {
			return fmt.Errorf("the file was changed: %v", err)
		}
		return errors.Join(refusal(path, err), wantOnly(dir, append(others, ballast(dir))...))
	})
	fmt.Println("not upgraded for want of room:", failed, "times")
	if failed < 10 {
		return fmt.Errorf("only %d failures: not every step met the full disk", failed)
	}
	return err
}

// upgradeWithoutRoom asks the file system itself, which has less than it takes.
func upgradeWithoutRoom(dir, path string, next schema) error {
	if err := fill(dir, 4096); err != nil {
		return err
	}
	defer free(dir)
	_, err := open(context.Background(), path, next, fixedClock())
	fmt.Println(err)
	if !errors.Is(err, ErrNoRoom) || !strings.Contains(err.Error(), "bringing it up to date needs about") {
		return fmt.Errorf("asked before: %w", err)
	}
	return nil
}

func wantOnly(dir string, want ...string) error {
	left, err := filepath.Glob(filepath.Join(dir, "*"))
	slices.Sort(want)
	if err == nil && !slices.Equal(left, want) {
		err = fmt.Errorf("left %v, want %v", left, want)
	}
	return err
}

func ballast(dir string) string { return filepath.Join(dir, "ballast") }

// fill fills the disk but for some room.
func fill(dir string, room int64) error {
	f, err := os.Create(ballast(dir))
	if err != nil {
		return err
	}
	defer f.Close()
	for block := make([]byte, 4096); ; {
		if _, err := f.Write(block); errors.Is(err, syscall.ENOSPC) {
			break
		} else if err != nil {
			return err
		}
	}
	info, err := f.Stat()
	if err != nil {
		return err
	}
	return f.Truncate(max(info.Size()-room, 0))
}

func free(dir string) error { return os.Remove(ballast(dir)) }
