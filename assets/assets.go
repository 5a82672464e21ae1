// Package assets holds what the pages need besides their text: stylesheets,
// scripts, fonts and the vendored libraries, all in the binary, and the sample
// designs of a first start.
//
// Every file is served under a hash of all of them together. One hash is enough,
// and it lets a stylesheet name its fonts by relative address: whatever changes,
// every address changes, so a browser may keep each file for good.
package assets

import (
	"bytes"
	"crypto/sha256"
	"embed"
	"fmt"
	"io/fs"
	"net/http"
	"path"
	"time"
)

//go:generate go run ./vendoring

//go:embed *.css *.js *.svg fonts lib samples
var files embed.FS

// HTMXConfig is the content of <meta name="htmx-config"> on every page. A server
// error swaps nothing, so that the last good answer stays; a 422 does swap, since
// it carries the form with its errors. What a person types, chooses or opens is
// theirs: an answer that follows from it never resets it. The indicator's
// stylesheet is left out: nothing here spins.
const HTMXConfig = `{"includeIndicatorCSS":false,"noSwap":[204,304,"5xx"],"morphIgnore":["data-htmx-powered","value","selected","open"]}`

// ChartStyle is the source that a page's style-src needs beside 'self': the hash
// of the fixed stylesheet that the vendored Plot writes into each drawing. (Its
// legends would need two more; the charts here name their lines directly.)
const ChartStyle = "'sha256-jSYQUrW7J0b3jPqhZP9C2Xh1PyJKHKXd4s0fpGGKrww='"

// contentTypes says which files are served, and as what. It is a table of our
// own because the system's may lack fonts or call scripts something else.
var contentTypes = map[string]string{
	".css":   "text/css; charset=utf-8",
	".js":    "text/javascript; charset=utf-8",
	".svg":   "image/svg+xml",
	".txt":   "text/plain; charset=utf-8",
	".woff2": "font/woff2",
}

var root = "/assets/" + hashOf(files) + "/"

// hashOf returns 16 hex digits of a SHA-256 over names, sizes and contents.
func hashOf(tree fs.FS) string {
	sum := sha256.New()
	err := fs.WalkDir(tree, ".", func(name string, entry fs.DirEntry, err error) error {
		if err != nil || entry.IsDir() {
			return err
		}
		content, err := fs.ReadFile(tree, name)
		fmt.Fprintf(sum, "%s %d\n", name, len(content))
		sum.Write(content)
		return err
	})
	if err != nil {
		panic("assets: an embedded file cannot be read: " + err.Error())
	}
	return fmt.Sprintf("%x", sum.Sum(nil)[:8])
}

// URL returns the address of the file name ("app.css", "lib/htmx.min.js"). It
// panics if there is none: a page that asks for it is a mistake in the program.
func URL(name string) string {
	if _, err := fs.Stat(files, name); err != nil || contentTypes[path.Ext(name)] == "" {
		panic("assets: no file " + name)
	}
	return root + name
}

// Handler serves the addresses that URL returns, to be kept for good, and 404
// for everything else, an address with another version's hash included.
func Handler() http.Handler {
	return http.StripPrefix(root, http.HandlerFunc(serve))
}

func serve(w http.ResponseWriter, r *http.Request) {
	kind := contentTypes[path.Ext(r.URL.Path)]
	content, err := files.ReadFile(r.URL.Path)
	if err != nil || kind == "" {
		http.NotFound(w, r)
		return
	}
	w.Header().Set("Content-Type", kind)
	w.Header().Set("Cache-Control", "public, max-age=31536000, immutable")
	http.ServeContent(w, r, "", time.Time{}, bytes.NewReader(content))
}

// A Sample is a design that a first start puts on the list.
type Sample struct {
	Name string // of the file, without folder and ending
	JSON []byte // a design file in the format lossbook/1
}

// Samples returns the sample designs, always in the same order: by name.
func Samples() []Sample {
	entries, err := files.ReadDir("samples")
	if err != nil {
		panic("assets: the samples are not embedded: " + err.Error())
	}
	samples := make([]Sample, len(entries))
	for i, entry := range entries {
		content, err := files.ReadFile(path.Join("samples", entry.Name()))
		if err != nil {
			panic("assets: a sample cannot be read: " + err.Error())
		}
		name := entry.Name()
		samples[i] = Sample{Name: name[:len(name)-len(path.Ext(name))], JSON: content}
	}
	return samples
}
