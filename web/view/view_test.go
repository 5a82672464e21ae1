package view

import (
	"bytes"
	"go/parser"
	"go/token"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"testing"

	"github.com/a-h/templ"
)

// Whatever a template draws is escaped: none may write raw HTML, and none may
// hold a script or style of its own, which the pages' policy would block.
func TestTemplatesEscapeEverything(t *testing.T) {
	files, err := filepath.Glob("*.templ")
	if err != nil || len(files) == 0 {
		t.Fatalf("no templates were looked at: %v", err)
	}
	for _, name := range files {
		text, err := os.ReadFile(name)
		if err != nil {
			t.Fatal(err)
		}
		for _, banned := range []string{"templ.Raw", "templ.JSUnsafe", "templ.ComponentScript", "<style", "style=", "hx-on", "js:", "@templ.JSON"} {
			if strings.Contains(string(text), banned) {
				t.Errorf("%s holds %s", name, banned)
			}
		}
		for _, word := range strings.Fields(string(text)) {
			if strings.HasPrefix(word, "on") && strings.Contains(word, "=") {
				t.Errorf("%s holds the attribute %s", name, word)
			}
		}
	}
}

// The package knows no store and no physics: it imports nothing of ours.
func TestImportsNothingOfOurs(t *testing.T) {
	files, err := filepath.Glob("*.go")
	if err != nil || len(files) == 0 {
		t.Fatalf("no files were looked at: %v", err)
	}
	seen := 0
	for _, name := range files {
		f, err := parser.ParseFile(token.NewFileSet(), name, nil, parser.ImportsOnly)
		if err != nil {
			t.Fatal(err)
		}
		for _, spec := range f.Imports {
			path, _ := strconv.Unquote(spec.Path.Value)
			seen++
			if path == "lossbook" || strings.HasPrefix(path, "lossbook/") {
				t.Errorf("%s imports %s: the pages draw models made of strings", name, path)
			}
		}
	}
	if seen == 0 {
		t.Error("no import was looked at")
	}
}

func TestTitleSaysError(t *testing.T) {
	for want, p := range map[string]Page{"Mast · Lossbook": {Title: "Mast"}, "Error: Mast · Lossbook": {Title: "Mast", Failed: true}} {
		if got := p.title(); got != want {
			t.Errorf("%q, want %q", got, want)
		}
	}
}

// Without this policy a browser names no origin when a form is sent without a
// script, and the server refuses it.
func TestPagesNameTheirOrigin(t *testing.T) {
	for name, page := range map[string]templ.Component{"list": Designs(List{}), "sheet": SheetPage(Sheet{}), "revision": RevisionPage(Revision{}),
		"rename": Rename(Nameplate{}), "error": Failure(Fault{})} {
		var b bytes.Buffer
		if err := page.Render(t.Context(), &b); err != nil {
			t.Fatal(err)
		}
		if !strings.Contains(b.String(), `<meta name="referrer" content="same-origin">`) {
			t.Errorf("%s does not", name)
		}
	}
}

// A live answer must be able to take an error back, so the mark is always there.
func TestFieldIsMarked(t *testing.T) {
	for want, f := range map[string]Field{
		`aria-invalid="true" aria-describedby="e-a.b w-a.b"`: {Name: "a.b", Error: "is wrong", Where: "there"},
		`aria-invalid="false" aria-describedby="r-a.b"`:      {Name: "a.b", Read: "= 1 Ω"},
	} {
		var b bytes.Buffer
		if err := field(f).Render(t.Context(), &b); err != nil {
			t.Fatal(err)
		}
		if !strings.Contains(b.String(), want) {
			t.Errorf("%s lacks %s", b.String(), want)
		}
	}
}
