package assets

import (
	"encoding/json"
	"io/fs"
	"net/http"
	"net/http/httptest"
	"path"
	"strings"
	"testing"
	"testing/fstest"
)

func get(t *testing.T, address string) *http.Response {
	t.Helper()
	answer := httptest.NewRecorder()
	Handler().ServeHTTP(answer, httptest.NewRequest("GET", address, nil))
	return answer.Result()
}

func TestEveryFileIsServedForGood(t *testing.T) {
	served := 0
	err := fs.WalkDir(files, ".", func(name string, entry fs.DirEntry, err error) error {
		if err != nil || entry.IsDir() || path.Dir(name) == "samples" {
			return err
		}
		served++
		content, err := files.ReadFile(name)
		if err != nil {
			return err
		}
		answer := get(t, URL(name))
		if answer.StatusCode != http.StatusOK || readAll(t, answer.Body) != string(content) {
			t.Errorf("%s: status %d or not its content", name, answer.StatusCode)
		}
		if got := answer.Header.Get("Cache-Control"); got != "public, max-age=31536000, immutable" {
			t.Errorf("%s: Cache-Control %q", name, got)
		}
		if got := answer.Header.Get("Content-Type"); got == "" || got != contentTypes[path.Ext(name)] {
			t.Errorf("%s: Content-Type %q", name, got)
		}
		return nil
	})
	if err != nil || served < 20 {
		t.Errorf("%d files walked, error %v; want at least 20", served, err)
	}
}

func TestNothingElseIsServed(t *testing.T) {
	right := URL("app.css")
	for _, address := range []string{
		strings.Replace(right, root, "/assets/0123456789abcdef/", 1), // another version's
		"/assets/app.css", "/assets/", root, root + "lib", root + "lib/", root + "absent.css",
		root + "../assets.go", root + "samples/radar-hut-buck.json", root + "/app.css",
	} {
		answer := get(t, address)
		if answer.StatusCode != http.StatusNotFound {
			t.Errorf("%s: status %d, want 404", address, answer.StatusCode)
		}
		if got := answer.Header.Get("Cache-Control"); got != "" {
			t.Errorf("%s: a 404 is to be kept: %q", address, got)
		}
	}
}

func TestURLOfNothingPanics(t *testing.T) {
	for _, name := range []string{"absent.css", "samples/radar-hut-buck.json", "lib"} {
		func() {
			defer func() {
				if recover() == nil {
					t.Errorf("URL(%q) did not panic", name)
				}
			}()
			URL(name)
		}()
	}
}

// The address is to change with any file's content or name.
func TestHashCoversEveryFile(t *testing.T) {
	tree := func(name, content string) fstest.MapFS {
		return fstest.MapFS{"app.css": {Data: []byte("a")}, name: {Data: []byte(content)}}
	}
	base := hashOf(tree("fonts/x.woff2", "1"))
	for name, other := range map[string]fstest.MapFS{
		"content": tree("fonts/x.woff2", "2"), "name": tree("fonts/y.woff2", "1"),
	} {
		if hashOf(other) == base {
			t.Errorf("another %s has the same hash", name)
		}
	}
	if len(base) != 16 || base != hashOf(tree("fonts/x.woff2", "1")) {
		t.Errorf("hash %q is not 16 digits, or not the same twice", base)
	}
}

func TestSamples(t *testing.T) {
	var names []string
	for _, sample := range Samples() {
		names = append(names, sample.Name)
		var design struct{ Format string }
		if err := json.Unmarshal(sample.JSON, &design); err != nil || design.Format != "lossbook/1" {
			t.Errorf("%s: format %q, error %v", sample.Name, design.Format, err)
		}
	}
	if got, want := strings.Join(names, " "), "fish-ladder-inverting frost-mast-boost radar-hut-buck"; got != want {
		t.Errorf("samples %q, want %q", got, want)
	}
}
