package main

import (
	"archive/tar"
	"bytes"
	"compress/gzip"
	"crypto/sha256"
	"crypto/sha512"
	"encoding/base64"
	"encoding/hex"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// tarball packs one file as npm would.
func tarball(t *testing.T, name, content string) []byte {
	t.Helper()
	var packed bytes.Buffer
	zipped := gzip.NewWriter(&packed)
	archive := tar.NewWriter(zipped)
	header := &tar.Header{Name: "package/" + name, Typeflag: tar.TypeReg, Mode: 0o644, Size: int64(len(content))}
	if err := archive.WriteHeader(header); err != nil {
		t.Fatal(err)
	}
	archive.Write([]byte(content))
	archive.Close()
	zipped.Close()
	return packed.Bytes()
}

func listed(packed []byte, content string) library {
	whole, one := sha512.Sum512(packed), sha256.Sum256([]byte(content))
	return library{
		SHA512: "sha512-" + base64.StdEncoding.EncodeToString(whole[:]),
		Files:  []file{{From: "dist/a.js", To: "lib/a.js", SHA256: hex.EncodeToString(one[:])}},
	}
}

func TestUnpackWritesWhatMatches(t *testing.T) {
	packed, root := tarball(t, "dist/a.js", "let a"), t.TempDir()
	if err := listed(packed, "let a").unpack(packed, root); err != nil {
		t.Fatal(err)
	}
	got, err := os.ReadFile(filepath.Join(root, "lib/a.js"))
	if err != nil || string(got) != "let a" {
		t.Errorf("lib/a.js = %q, %v; want the packed file", got, err)
	}
}

func TestUnpackStopsAtMismatch(t *testing.T) {
	packed := tarball(t, "dist/a.js", "let a")
	otherTarball, otherFile := listed(packed, "let a"), listed(packed, "let b")
	otherTarball.SHA512 = "sha512-AAAA"
	missing := listed(packed, "let a")
	missing.Files[0].From = "dist/absent.js"
	for name, l := range map[string]library{"tarball": otherTarball, "let b": otherFile, "absent": missing} {
		root := t.TempDir()
		err := l.unpack(packed, root)
		if err == nil || !strings.Contains(err.Error(), "the list says") {
			t.Errorf("%s: error %v, want a mismatch", name, err)
		}
		if left, _ := os.ReadDir(root); len(left) != 0 {
			t.Errorf("%s: wrote %v despite the mismatch", name, left)
		}
	}
}
