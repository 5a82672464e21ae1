package web_test

import (
	"go/ast"
	"go/parser"
	"go/token"
	"io/fs"
	"os"
	"path"
	"path/filepath"
	"slices"
	"strings"
	"testing"
)

// The rules of the repository. Each is a function over its files, with examples
// that break it: a rule that finds nothing wrong with those, or that found too
// little to look at in the repository itself, is broken.
var rules = slices.Concat(placeRules, docRules, textRules, testRules, moduleRules)

// rule is one of them.
type rule struct {
	name   string
	check  func(r *repository) verdict
	least  int      // things it must have looked at
	broken []sketch // what it must find wrong, one by one
}

// sketch is a made-up repository: texts by path.
type sketch map[string]string

// verdict is what a rule says.
type verdict struct {
	checked int
	wrong   []string
}

func (v *verdict) add(words ...string) { v.wrong = append(v.wrong, strings.Join(words, " ")) }

func TestRules(t *testing.T) {
	repo := thisRepository(t)
	for _, rule := range rules {
		t.Run(rule.name, func(t *testing.T) {
			v := rule.check(repo)
			for _, words := range v.wrong {
				t.Error(words)
			}
			if v.checked < rule.least {
				t.Errorf("it looked at %d things only, want %d or more", v.checked, rule.least)
			}
			t.Logf("%d things looked at", v.checked)
		})
	}
}

func TestRulesFindWhatIsWrong(t *testing.T) {
	for _, rule := range rules {
		if len(rule.broken) == 0 || rule.least < 1 {
			t.Errorf("%s: no example that breaks it, or nothing it must have looked at", rule.name)
		}
		for i, example := range rule.broken {
			if v := rule.check(example.repository(t)); len(v.wrong) == 0 {
				t.Errorf("%s: it finds nothing wrong with example %d: %v", rule.name, i, example)
			}
		}
	}
}

// repository is the files that belong to the project.
type repository struct {
	files []file
	fset  *token.FileSet
}

// file is one of them; Go files are parsed.
type file struct {
	path string // from the root, with slashes
	text string
	tree *ast.File
}

func (f file) room() string    { return path.Dir(f.path) }
func (f file) test() bool      { return strings.HasSuffix(f.path, "_test.go") }
func (f file) generated() bool { return f.tree != nil && ast.IsGenerated(f.tree) }

// foreign reports whether others wrote the file: libraries and fonts.
func (f file) foreign() bool {
	for _, folder := range []string{"assets/lib/", "assets/fonts/", "testdata/vendor/"} {
		if strings.HasPrefix(f.path, folder) {
			return true
		}
	}
	return f.path == "go.sum"
}

// find returns the text of the file at a path, "" if there is none.
func (r *repository) find(path string) string {
	for _, f := range r.files {
		if f.path == path {
			return f.text
		}
	}
	return ""
}

// goFiles calls look for each Go file that a person wrote.
func (r *repository) goFiles(look func(f file)) {
	for _, f := range r.files {
		if f.tree != nil && !f.generated() {
			look(f)
		}
	}
}

func (r *repository) add(t *testing.T, path, text string) {
	f := file{path: path, text: text}
	if strings.HasSuffix(path, ".go") {
		tree, err := parser.ParseFile(r.fset, path, text, parser.ParseComments|parser.SkipObjectResolution)
		if err != nil {
			t.Fatal(err)
		}
		f.tree = tree
	}
	r.files = append(r.files, f)
}

func (s sketch) repository(t *testing.T) *repository {
	r := &repository{fset: token.NewFileSet()}
	for path, text := range s {
		r.add(t, path, text)
	}
	return r
}

// thisRepository reads everything below the folder of go.mod that git would
// keep.
func thisRepository(t *testing.T) *repository {
	t.Helper()
	root := moduleRoot(t)
	ignored := ignoredNames(t, root)
	r := &repository{fset: token.NewFileSet()}
	err := filepath.WalkDir(root, func(name string, entry fs.DirEntry, err error) error {
		if err != nil {
			return err
		}
		path, err := filepath.Rel(root, name)
		if err != nil {
			return err
		}
		path = filepath.ToSlash(path)
		switch {
		case path == ".git" || ignored(path) && entry.IsDir():
			return skip(entry)
		case entry.IsDir() || ignored(path):
			return nil
		}
		text, err := os.ReadFile(name)
		if err != nil {
			return err
		}
		r.add(t, path, string(text))
		return nil
	})
	if err != nil {
		t.Fatal(err)
	}
	return r
}

// skip leaves .git out, which is a file in a linked work tree.
func skip(entry fs.DirEntry) error {
	if entry.IsDir() {
		return fs.SkipDir
	}
	return nil
}

// moduleRoot is the folder of go.mod, above the one that tests run in.
func moduleRoot(t *testing.T) string {
	t.Helper()
	folder, err := filepath.Abs(".")
	if err != nil {
		t.Fatal(err)
	}
	for {
		if _, err := os.Stat(filepath.Join(folder, "go.mod")); err == nil {
			return folder
		}
		above := filepath.Dir(folder)
		if above == folder {
			t.Fatal("there is no go.mod above this folder")
		}
		folder = above
	}
}

// ignoredNames reads .gitignore, whose patterns here are plain: a name anywhere,
// or with a slash before it, at the root.
func ignoredNames(t *testing.T, root string) func(name string) bool {
	t.Helper()
	text, err := os.ReadFile(filepath.Join(root, ".gitignore"))
	if err != nil {
		t.Fatal(err)
	}
	patterns := strings.Fields(string(text))
	return func(name string) bool {
		return slices.ContainsFunc(patterns, func(pattern string) bool {
			subject := path.Base(name)
			if strings.HasPrefix(pattern, "/") {
				subject = "/" + name
			}
			matches, err := path.Match(pattern, subject)
			return err == nil && matches
		})
	}
}
