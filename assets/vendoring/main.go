// Command vendoring fetches the libraries and fonts listed in vendor.json from
// the npm registry and lays the listed files where the list says. It is run by
// hand, as go generate ./assets, and needs npm and the network. Whatever does
// not match its checksum stops it before a byte of that package is written.
package main

import (
	"archive/tar"
	"bytes"
	"compress/gzip"
	"crypto/sha256"
	"crypto/sha512"
	"encoding/base64"
	"encoding/hex"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"os"
	"os/exec"
	"path/filepath"
)

// A library is one npm package at one version. SHA512 is the registry's own
// integrity string of its tarball.
type library struct {
	Name, Version, SHA512 string
	Files                 []file
}

// A file is taken from a path inside the package to a path beside the list.
type file struct{ From, To, SHA256 string }

func main() {
	if err := run("vendor.json"); err != nil {
		fmt.Fprintln(os.Stderr, "vendoring:", err)
		os.Exit(1)
	}
}

// run fetches every library of the list; files land relative to the list.
func run(list string) error {
	libraries, err := readList(list)
	if err != nil {
		return err
	}
	for _, l := range libraries {
		tarball, err := pack(l)
		if err != nil {
			return fmt.Errorf("%s@%s: %w", l.Name, l.Version, err)
		}
		if err := l.unpack(tarball, filepath.Dir(list)); err != nil {
			return fmt.Errorf("%s@%s: %w", l.Name, l.Version, err)
		}
	}
	return nil
}

func readList(name string) ([]library, error) {
	text, err := os.ReadFile(name)
	if err != nil {
		return nil, err
	}
	var libraries []library
	if err := json.Unmarshal(text, &libraries); err != nil {
		return nil, fmt.Errorf("%s: %w", name, err)
	}
	return libraries, nil
}

// pack downloads the tarball of l with npm's own client. Nothing of the package
// is executed: npm pack of a registry name runs no scripts.
func pack(l library) ([]byte, error) {
	dir, err := os.MkdirTemp("", "vendoring")
	if err != nil {
		return nil, err
	}
	defer os.RemoveAll(dir)
	cmd := exec.Command("npm", "pack", "--silent", "--ignore-scripts", "--pack-destination", dir, l.Name+"@"+l.Version)
	cmd.Stderr = os.Stderr
	if err := cmd.Run(); err != nil {
		return nil, fmt.Errorf("npm pack: %w", err)
	}
	tarballs, err := filepath.Glob(filepath.Join(dir, "*.tgz"))
	if err != nil || len(tarballs) != 1 {
		return nil, errors.Join(fmt.Errorf("npm pack left %d tarballs, want 1", len(tarballs)), err)
	}
	return os.ReadFile(tarballs[0])
}

// unpack checks the tarball and each wanted file, and only then writes them.
func (l library) unpack(tarball []byte, root string) error {
	sum := sha512.Sum512(tarball)
	if got := "sha512-" + base64.StdEncoding.EncodeToString(sum[:]); got != l.SHA512 {
		return fmt.Errorf("tarball is %s, the list says %s", got, l.SHA512)
	}
	contents, err := readTarball(tarball)
	if err != nil {
		return err
	}
	for _, f := range l.Files {
		sum := sha256.Sum256(contents[f.From])
		if got := hex.EncodeToString(sum[:]); got != f.SHA256 {
			return fmt.Errorf("%s is %s, the list says %s", f.From, got, f.SHA256)
		}
	}
	for _, f := range l.Files {
		if err := write(filepath.Join(root, f.To), contents[f.From]); err != nil {
			return err
		}
	}
	return nil
}

// readTarball returns the regular files of an npm tarball by their path inside
// its one top folder, "package".
func readTarball(tarball []byte) (map[string][]byte, error) {
	unzipped, err := gzip.NewReader(bytes.NewReader(tarball))
	if err != nil {
		return nil, err
	}
	contents := map[string][]byte{}
	for archive := tar.NewReader(unzipped); ; {
		header, err := archive.Next()
		if errors.Is(err, io.EOF) {
			return contents, nil
		}
		if err != nil {
			return nil, err
		}
		name, err := filepath.Rel("package", header.Name)
		if err != nil || header.Typeflag != tar.TypeReg {
			continue
		}
		if contents[name], err = io.ReadAll(archive); err != nil {
			return nil, err
		}
	}
}

func write(name string, content []byte) error {
	if err := os.MkdirAll(filepath.Dir(name), 0o755); err != nil {
		return err
	}
	return os.WriteFile(name, content, 0o644)
}
