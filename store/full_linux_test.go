package store

import (
	"context"
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"strings"
	"syscall"
	"testing"
)

func init() { children["serve on full disk"] = serveOnFullDisk }

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
	if err := fill(dir); err != nil {
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
	if err := fill(dir); err != nil {
		return err
	}
	for _, p := range []string{path, filepath.Join(dir, "new.db"), filepath.Join(dir, "sub", "new.db")} {
		before, _ := os.ReadFile(p)
		s, err := Open(context.Background(), p)
		if err == nil {
			return fmt.Errorf("%s: was opened", p)
		}
		fmt.Println(err)
		if after, _ := os.ReadFile(p); !errors.Is(err, ErrNoRoom) || string(after) != string(before) {
			return fmt.Errorf("%s: %w, want ErrNoRoom and the same bytes", p, err)
		}
		_ = s
	}
	left, err := filepath.Glob(filepath.Join(dir, "*"))
	if err != nil || len(left) > 3 { // the file, the ballast, perhaps the folder
		return fmt.Errorf("left %v, %w", left, err)
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

func ballast(dir string) string { return filepath.Join(dir, "ballast") }

func fill(dir string) error {
	f, err := os.Create(ballast(dir))
	if err != nil {
		return err
	}
	defer f.Close()
	for block := make([]byte, 4096); ; {
		if _, err := f.Write(block); errors.Is(err, syscall.ENOSPC) {
			return nil
		} else if err != nil {
			return err
		}
	}
}

func free(dir string) error { return os.Remove(ballast(dir)) }
