package assets

import (
	"crypto/sha256"
	"encoding/hex"
	"encoding/json"
	"io/fs"
	"os"
	"path"
	"strings"
	"testing"
)

// vendored returns the list's checksum of each file, by its path from here.
func vendored(t *testing.T) map[string]string {
	t.Helper()
	text, err := os.ReadFile("vendor.json")
	if err != nil {
		t.Fatal(err)
	}
	var libraries []struct {
		Name, SHA512 string
		Files        []struct{ To, SHA256 string }
	}
	if err := json.Unmarshal(text, &libraries); err != nil {
		t.Fatal(err)
	}
	sums := map[string]string{}
	for _, library := range libraries {
		licensed := false
		for _, file := range library.Files {
			sums[file.To] = file.SHA256
			licensed = licensed || strings.HasSuffix(file.To, "LICENSE.txt")
		}
		if !licensed || library.SHA512 == "" {
			t.Errorf("%s has no licence beside its files, or no checksum", library.Name)
		}
	}
	return sums
}

func TestVendoredFilesMatchTheList(t *testing.T) {
	sums := vendored(t)
	if len(sums) < 20 {
		t.Fatalf("the list has %d files, want all of lib, fonts and testdata/vendor", len(sums))
	}
	for name, want := range sums {
		content, err := os.ReadFile(name)
		if !strings.HasPrefix(name, "../") {
			content, err = files.ReadFile(name)
		}
		if err != nil {
			t.Error(err)
			continue
		}
		sum := sha256.Sum256(content)
		if got := hex.EncodeToString(sum[:]); got != want {
			t.Errorf("%s is %s, the list says %s", name, got, want)
		}
	}
}

func TestNoVendoredFileIsUnlisted(t *testing.T) {
	sums := vendored(t)
	for _, folder := range []string{"lib", "fonts", "../testdata/vendor"} {
		entries, err := fs.ReadDir(os.DirFS(folder), ".")
		if err != nil || len(entries) == 0 {
			t.Errorf("%s: %d files, error %v", folder, len(entries), err)
		}
		for _, entry := range entries {
			if name := path.Join(folder, entry.Name()); sums[name] == "" {
				t.Errorf("%s is not on the list", name)
			}
		}
	}
}
