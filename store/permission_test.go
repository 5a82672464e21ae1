//go:build unix

package store

import (
	"io/fs"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"syscall"
	"testing"

	"github.com/google/go-cmp/cmp"
)

func init() {
	refused = append(refused, refusedCase{"pipe", func(t *testing.T, p string) {
		if err := syscall.Mkfifo(p, 0o600); err != nil {
			t.Fatal(err)
		}
	}, ErrUnreadable, "not a regular file"})
}

// The modes of files don't hold root back: there the test runs as nobody.
func TestNoPermission(t *testing.T) {
	dir := sharedDir(t)
	path := filepath.Join(dir, "lossbook.db")
	soundFile(t, path)
	for _, c := range []struct {
		what       string
		file, fold fs.FileMode
	}{
		{"file not readable", 0, 0o777},
		{"file not writable", 0o444, 0o777},
		{"folder not writable", 0o666, 0o555},
		{"folder closed", 0o666, 0},
	} {
		before := stateOf(t, dir)
		chmod(t, path, c.file)
		chmod(t, dir, c.fold)
		out, err := openAsNobody(t, path)
		chmod(t, dir, 0o777)
		if err == nil || !strings.Contains(out, "permission denied") || strings.Count(out, "\n") != 1 {
			t.Errorf("%s: %v, %q", c.what, err, out)
		}
		chmod(t, path, 0o600)
		if diff := cmp.Diff(before, stateOf(t, dir)); diff != "" {
			t.Errorf("%s: files changed:\n%s", c.what, diff)
		}
	}
}

func chmod(t *testing.T, path string, mode fs.FileMode) {
	t.Helper()
	if err := os.Chmod(path, mode); err != nil {
		t.Fatal(err)
	}
}

// sharedDir is a folder that other users can reach.
func sharedDir(t *testing.T) string {
	t.Helper()
	dir, err := os.MkdirTemp("", "lossbook-test-")
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { os.RemoveAll(dir) })
	chmod(t, dir, 0o777)
	return dir
}

// openAsNobody opens the file in another process, which has given up the
// rights of root if it had them, and returns what that says.
func openAsNobody(t *testing.T, path string) (string, error) {
	t.Helper()
	self, err := os.Executable()
	if err != nil {
		t.Fatal(err)
	}
	binary := filepath.Join(sharedDir(t), "store.test")
	if err := copyFile(self, binary); err != nil {
		t.Fatal(err)
	}
	chmod(t, binary, 0o755)
	cmd := exec.Command(binary, path)
	cmd.Dir = filepath.Dir(binary)
	cmd.Env = []string{childEnv + "=open", "TMPDIR=" + os.TempDir()}
	if os.Getuid() == 0 {
		cmd.SysProcAttr = &syscall.SysProcAttr{Credential: &syscall.Credential{Uid: 65534, Gid: 65534}}
	}
	out, err := cmd.CombinedOutput()
	return string(out), err
}

func TestPermissionsWhateverTheUmask(t *testing.T) {
	for _, umask := range []int{0, 0o022, 0o777} {
		old := syscall.Umask(umask)
		path := filepath.Join(t.TempDir(), "a", "b", "lossbook.db")
		os.Chmod(filepath.Dir(filepath.Dir(filepath.Dir(path))), 0o755)
		s, err := Open(t.Context(), path)
		if err != nil {
			syscall.Umask(old)
			t.Fatal(err)
		}
		create1(t, s, "d")
		syscall.Umask(old)
		want := map[string]fs.FileMode{"": 0o600, "-wal": 0o600, "-shm": 0o600, ".lock": 0o600}
		for suffix, mode := range want {
			wantMode(t, path+suffix, mode)
		}
		wantMode(t, filepath.Dir(path), 0o700)
		wantMode(t, filepath.Dir(filepath.Dir(path)), 0o700)
		closeNow(t, s)
		chmod(t, path, 0o644)
		openAt(t, path)
		wantMode(t, path, 0o600)
	}
}

func TestFolderThatIsThereKeepsItsMode(t *testing.T) {
	dir := sharedDir(t)
	openAt(t, filepath.Join(dir, "lossbook.db"))
	wantMode(t, dir, 0o777)
}
