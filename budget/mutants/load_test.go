package mutants

import (
	"encoding/json"
	"fmt"
	"go/ast"
	"go/importer"
	"go/parser"
	"go/token"
	"go/types"
	"io"
	"os"
	"os/exec"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
)

// tree is a module's packages, read and type-checked one by one.
type tree struct {
	root, module string
	fset         *token.FileSet
	packages     []*source // a package before those that import it
}

// source is one of the packages with all that is known of its code and tests.
type source struct {
	path, dir string // import path, and folder
	files     []*file
	info      *types.Info
}

// file is one of a package's.
type file struct {
	of   *source
	path string // from the root, with slashes
	full string // the same in the file system
	text string
	ast  *ast.File
	test bool
}

// listed is what the go command says of a package.
type listed struct {
	ImportPath, Dir, Export, ForTest          string
	GoFiles, TestGoFiles, XTestGoFiles, Match []string
	Module                                    *struct{ Path string }
}

// load reads the packages that the patterns name in the module at root.
func load(root string, patterns ...string) (*tree, error) {
	root, err := filepath.Abs(root)
	if err != nil {
		return nil, err
	}
	list, err := ask(root, patterns)
	if err != nil {
		return nil, err
	}
	t := &tree{root: root, fset: token.NewFileSet()}
	exports := map[string]string{}
	for _, l := range list {
		if l.ForTest == "" {
			exports[l.ImportPath] = l.Export
		}
	}
	imports := importer.ForCompiler(t.fset, "gc", func(path string) (io.ReadCloser, error) { return os.Open(exports[path]) })
	for _, l := range list {
		if l.ForTest != "" || len(l.Match) == 0 || len(l.GoFiles) == 0 || strings.HasSuffix(l.ImportPath, ".test") {
			continue
		}
		t.module = l.Module.Path
		p, err := t.read(l, imports)
		if err != nil {
			return nil, err
		}
		t.packages = append(t.packages, p)
	}
	return t, nil
}

func ask(root string, patterns []string) (list []listed, err error) {
	args := []string{"list", "-export", "-deps", "-test", "-json=ImportPath,Dir,Export,ForTest,GoFiles,TestGoFiles,XTestGoFiles,Match,Module", "--"}
	cmd := exec.Command("go", append(args, patterns...)...)
	cmd.Dir = root
	var wrong strings.Builder
	cmd.Stderr = &wrong
	out, err := cmd.Output()
	if err != nil {
		return nil, fmt.Errorf("go list: %w\n%s", err, &wrong)
	}
	for d := json.NewDecoder(strings.NewReader(string(out))); d.More(); {
		var l listed
		if err := d.Decode(&l); err != nil {
			return nil, err
		}
		list = append(list, l)
	}
	return list, nil
}

// read parses and checks a package with its tests. What it imports comes from the
// compiler, so that each package can be looked at by itself.
func (t *tree) read(l listed, imports types.Importer) (*source, error) {
	p := &source{path: l.ImportPath, dir: l.Dir, info: &types.Info{
		Types: map[ast.Expr]types.TypeAndValue{}, Uses: map[*ast.Ident]types.Object{}, Defs: map[*ast.Ident]types.Object{}}}
	var inside, outside []*ast.File
	for i, names := range [][]string{l.GoFiles, l.TestGoFiles, l.XTestGoFiles} {
		for _, name := range names {
			f, err := t.parse(p, name, i > 0)
			if err != nil {
				return nil, err
			}
			p.files = append(p.files, f)
			if i < 2 {
				inside = append(inside, f.ast)
			} else {
				outside = append(outside, f.ast)
			}
		}
	}
	config := types.Config{Importer: imports}
	checked, err := config.Check(p.path, t.fset, inside, p.info)
	if err != nil {
		return nil, err
	}
	// Tests from outside see what tests from inside add.
	config = types.Config{Importer: besides{imports, checked}, Error: func(error) {}}
	config.Check(p.path+"_test", t.fset, outside, p.info)
	return p, nil
}

func (t *tree) parse(p *source, name string, test bool) (*file, error) {
	full := filepath.Join(p.dir, name)
	text, err := os.ReadFile(full)
	if err != nil {
		return nil, err
	}
	rel, err := filepath.Rel(t.root, full)
	if err != nil {
		return nil, err
	}
	parsed, err := parser.ParseFile(t.fset, full, text, parser.ParseComments|parser.SkipObjectResolution)
	return &file{of: p, path: filepath.ToSlash(rel), full: full, text: string(text), ast: parsed, test: test}, err
}

// imports reports whether a package or its tests import another.
func (s *source) imports(path string) bool {
	return slices.ContainsFunc(s.files, func(f *file) bool {
		return slices.ContainsFunc(f.ast.Imports, func(i *ast.ImportSpec) bool { return i.Path.Value == strconv.Quote(path) })
	})
}

// rely returns a package and those that rely on it, nearest first.
func (t *tree) rely(on *source) []*source {
	all := []*source{on}
	for _, s := range t.packages {
		if s != on && slices.ContainsFunc(all, func(a *source) bool { return s.imports(a.path) }) {
			all = append(all, s)
		}
	}
	return all
}

// besides is an importer that knows one package better.
type besides struct {
	types.Importer
	known *types.Package
}

func (b besides) Import(path string) (*types.Package, error) {
	if path == b.known.Path() {
		return b.known, nil
	}
	return b.Importer.Import(path)
}
