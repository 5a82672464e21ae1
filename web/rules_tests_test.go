package web_test

import (
	"go/ast"
	"go/build/constraint"
	"go/token"
	"regexp"
	"slices"
	"strings"
)

var testRules = []rule{
	{"tests are run everywhere", unhidden, 25, []sketch{
		{"web/x_test.go": "//go:build slow\n\npackage web"},
		{"web/x_windows_test.go": "package web"},
		{"web/x_test.go": "package web\nfunc f() bool { return testing.Short() }"},
	}},
	{"a test that skips fails in CI", unskipped, 25, []sketch{
		{"web/x_test.go": "package web\nfunc TestX(t *testing.T) { t.Skip() }"},
		{"web/x_test.go": "package web\nfunc TestX(t *testing.T) { t.Log(os.Getenv(\"CI\")); t.Skipf(\"no\") }"},
	}},
	{"every test can fail", failing, 100, []sketch{
		{"web/x_test.go": "package web\nfunc TestX(t *testing.T) { f() }"},
	}},
}

// unhidden allows what holds on the system that CI runs on, where a test needs
// that system's calls.
func unhidden(r *repository) (v verdict) {
	elsewhere := regexp.MustCompile(`_(windows|darwin|freebsd|arm64|amd64|js|wasm)_test\.go$`)
	r.goFiles(func(f file) {
		if !f.test() {
			return
		}
		v.checked++
		if elsewhere.MatchString(f.path) || !builds(f) {
			v.add(f.path, "is left out where CI runs")
		}
		if calls(f.tree, "Short") {
			v.add(f.path, "asks for testing.Short: a test is run or is none")
		}
	})
	return v
}

// builds reports whether the file's build constraint holds on Linux with nothing
// asked for.
func builds(f file) bool {
	head := f.text[:f.tree.Package-f.tree.FileStart]
	for line := range strings.Lines(head) {
		expr, err := constraint.Parse(strings.TrimSpace(line))
		if err == nil && !expr.Eval(func(tag string) bool { return tag == "linux" || tag == "unix" }) {
			return false
		}
	}
	return true
}

// unskipped wants beside every skip a failure that stands where CI is set.
func unskipped(r *repository) (v verdict) {
	r.goFiles(func(f file) {
		if !f.test() {
			return
		}
		v.checked++
		for _, decl := range f.tree.Decls {
			if d, is := decl.(*ast.FuncDecl); is && calls(d, "Skip", "Skipf", "SkipNow") && !(mentions(d, `"CI"`) && calls(d, "Fatal", "Fatalf")) {
				v.add(f.path+":", d.Name.Name, "skips without failing where CI is true")
			}
		}
	})
	return v
}

// failing wants of every test function that it can report, or hands its t to
// something that can.
func failing(r *repository) (v verdict) {
	r.goFiles(func(f file) {
		for _, decl := range f.tree.Decls {
			d, is := decl.(*ast.FuncDecl)
			if !is || !f.test() || d.Recv != nil || !strings.HasPrefix(d.Name.Name, "Test") || d.Name.Name == "TestMain" {
				continue
			}
			v.checked++
			if !calls(d, "Error", "Errorf", "Fatal", "Fatalf", "Fail", "FailNow") && !handsOn(d) {
				v.add(f.path+":", d.Name.Name, "has no way to fail")
			}
		}
	})
	return v
}

// calls reports whether one of the methods is called on anything within n.
func calls(n ast.Node, names ...string) (found bool) {
	ast.Inspect(n, func(n ast.Node) bool {
		if call, is := n.(*ast.CallExpr); is {
			selector, is := call.Fun.(*ast.SelectorExpr)
			found = found || is && slices.Contains(names, selector.Sel.Name)
		}
		return !found
	})
	return found
}

func mentions(n ast.Node, literal string) (found bool) {
	ast.Inspect(n, func(n ast.Node) bool {
		l, is := n.(*ast.BasicLit)
		found = found || is && l.Kind == token.STRING && l.Value == literal
		return !found
	})
	return found
}

// handsOn reports whether a function gives its t to another.
func handsOn(d *ast.FuncDecl) (found bool) {
	ast.Inspect(d, func(n ast.Node) bool {
		if call, is := n.(*ast.CallExpr); is {
			found = found || slices.ContainsFunc(call.Args, func(arg ast.Expr) bool {
				name, is := arg.(*ast.Ident)
				return is && name.Name == "t"
			})
		}
		return !found
	})
	return found
}
