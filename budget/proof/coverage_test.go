package proof_test

import (
	"go/ast"
	"go/parser"
	"go/token"
	"path/filepath"
	"slices"
	"strconv"
	"testing"

	"lossbook/budget"
)

// TestEverythingIsCheckedOrNamed holds every item of the ledger and every finding
// against the data: a figure is about it, or it is named as one without a check.
func TestEverythingIsCheckedOrNamed(t *testing.T) {
	f := published(t)
	checked, named := map[string]bool{}, map[string]bool{}
	for _, c := range f.Checks {
		for _, g := range c.Figures {
			for _, what := range g.Covers {
				checked[what] = true
			}
		}
	}
	for _, g := range f.Unchecked {
		if named[g.What] {
			t.Errorf("%s is named twice", g.What)
		}
		named[g.What] = true
	}
	everything := append(items(), rules(t)...)
	if len(everything) < 19+1+24 {
		t.Errorf("only %d things: %v", len(everything), everything)
	}
	for _, what := range everything {
		if checked[what] == named[what] {
			t.Errorf("%s: checked %v, named as unchecked %v", what, checked[what], named[what])
		}
		delete(checked, what)
		delete(named, what)
	}
	for what := range checked {
		t.Errorf("a figure covers %s, which there is not", what)
	}
	for what := range named {
		t.Errorf("%s is unchecked, and there is none", what)
	}
}

// items are the rows of every ledger, and what stands for series resistances.
func items() (list []string) {
	for _, r := range budget.Ledger(&budget.Design{}) {
		list = append(list, r.Part+"."+r.Kind)
	}
	return append(list, "layout")
}

// rules reads the names of the findings out of the code that makes them.
func rules(t *testing.T) (list []string) {
	t.Helper()
	files, err := filepath.Glob("../*.go")
	if err != nil || len(files) < 20 {
		t.Fatalf("%d files: %v", len(files), err)
	}
	for _, name := range files {
		if matched, _ := filepath.Match("*_test.go", filepath.Base(name)); matched {
			continue
		}
		tree, err := parser.ParseFile(token.NewFileSet(), name, nil, 0)
		if err != nil {
			t.Fatal(err)
		}
		ast.Inspect(tree, func(n ast.Node) bool {
			pair, is := n.(*ast.KeyValueExpr)
			if !is {
				return true
			}
			key, isName := pair.Key.(*ast.Ident)
			value, isText := pair.Value.(*ast.BasicLit)
			if isName && isText && (key.Name == "rule" || key.Name == "Rule") {
				rule, err := strconv.Unquote(value.Value)
				if err != nil {
					t.Fatal(err)
				}
				list = append(list, "finding."+rule)
			}
			return true
		})
	}
	slices.Sort(list)
	return slices.Compact(list)
}
