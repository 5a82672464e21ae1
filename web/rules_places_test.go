package web_test

import (
	"go/ast"
	"regexp"
	"slices"
	"strconv"
	"strings"
)

var placeRules = []rule{
	{"the top level is fixed", topLevel, 8, []sketch{{"helpers/x.go": "package helpers"}, {"notes.md": ""}}},
	{"a room imports what lies below it", imports, 30, []sketch{
		{"budget/x.go": "package budget\nimport _ \"lossbook/store\""},
		{"store/x.go": "package store\nimport _ \"lossbook/web\""},
		{"web/view/x.go": "package view\nimport _ \"lossbook/budget\""},
		{"budget/device/x.go": "package device\nimport _ \"lossbook/budget/wave\""},
		{"budget/x_test.go": "package budget\nimport _ \"lossbook/web/quantity\""},
		{"web/new/x.go": "package new"},
		{"web/x.go": "package web\nimport _ \"modernc.org/sqlite\""},
		{"budget/stage/x.go": "package stage\nimport _ \"gonum.org/v1/gonum/mat\""},
		{"store/x.go": "package store\nimport _ \"github.com/google/go-cmp/cmp\""},
	}},
	{"the budget depends on nothing but its input", pure, 20, []sketch{
		{"budget/x.go": "package budget\nimport _ \"os\""},
		{"budget/wave/x.go": "package wave\nimport _ \"time\""},
		{"budget/x.go": "package budget\nimport _ \"net/http\""},
		{"budget/x.go": "package budget\nimport _ \"math/rand/v2\""},
		{"budget/x.go": "package budget\nfunc f() { go f() }"},
	}},
	{"the view draws strings", onlyStrings, 4, []sketch{
		{"web/view/x.go": "package view\nimport _ \"strconv\""},
		{"web/view/x.go": "package view\ntype X struct { Loss float64 }"},
		{"web/view/x.templ": "package view\nimport \"math\""},
	}},
	{"SQL is written in the store", queries, 10, []sketch{
		{"web/x.go": "package web\nconst q = `SELECT id FROM designs`"},
		{"main.go": "package main\nconst q = \"pragma foreign_keys\""},
	}},
}

// topLevel keeps everything where a newcomer looks for it.
func topLevel(r *repository) (v verdict) {
	allowed := strings.Fields("web budget store assets migrations testdata main.go main_test.go go.mod go.sum README.md DEVELOPERS.md")
	seen := map[string]bool{}
	for _, f := range r.files {
		name, _, _ := strings.Cut(f.path, "/")
		if seen[name] {
			continue
		}
		seen[name] = true
		v.checked++
		if !strings.HasPrefix(name, ".") && !slices.Contains(allowed, name) {
			v.add(name, "is new at the top level: put it in one of the rooms")
		}
	}
	return v
}

// room is what the Go files of a folder may import of ours and of others, the
// standard library aside. Tests may besides import testModules.
type room struct{ ours, others string }

var rooms = map[string]room{
	".":                {"web store", "github.com/adrg/xdg"},
	"web":              {"web/view web/quantity store budget budget/formula budget/proof assets", "github.com/go-chi/chi/v5 github.com/a-h/templ github.com/go-json-experiment/json github.com/xuri/excelize/v2"},
	"web/view":         {"", "github.com/a-h/templ"},
	"web/quantity":     {},
	"store":            {"budget migrations", "github.com/golang-migrate/migrate/v4 modernc.org/sqlite golang.org/x/sys"},
	"migrations":       {},
	"assets":           {},
	"assets/vendoring": {},
	"budget":           {"budget/stage budget/wave budget/device budget/magnetic budget/formula", "gonum.org/v1/gonum"},
	"budget/proof":     {"budget budget/stage budget/wave budget/device budget/magnetic", "gonum.org/v1/gonum"}, // asks the whole model, and its parts where the whole has no such entry
	"budget/stage":     {"budget/wave", ""},                                                                     // a solved balance is a current, and wave is what a current is
	"budget/wave":      {},
	"budget/formula":   {},
	"budget/device":    {},
	"budget/magnetic":  {},
	"budget/mutants":   {},
}

var testModules = strings.Fields("github.com/google/go-cmp pgregory.net/rapid github.com/chromedp/chromedp github.com/chromedp/cdproto gonum.org/v1/gonum golang.org/x/net modernc.org/libc")

// imports keeps the physics free of the web, the web of SQL, the pages of both.
func imports(r *repository) (v verdict) {
	for _, f := range r.files {
		if f.tree == nil {
			continue
		}
		room, known := rooms[f.room()]
		if !known {
			v.add(f.path, "lies in a room without a row in the table of rooms")
		}
		ours, others := strings.Fields(room.ours), strings.Fields(room.others)
		if f.test() {
			ours, others = append(ours, f.room()), append(others, testModules...)
		}
		if f.test() && within("budget", f.room()) { // one part is tried with the others
			ours = append(ours, strings.Fields(rooms["budget"].ours)...)
		}
		for _, name := range importsOf(f) {
			own, isOwn := strings.CutPrefix(name, "lossbook/")
			switch {
			case isOwn && !slices.Contains(ours, own):
				v.add(f.path, "imports", name, "- its room may import:", room.ours)
			case !isOwn && fromModule(name) && !slices.ContainsFunc(others, func(m string) bool { return within(m, name) }):
				v.add(f.path, "imports", name, "- its room may import:", room.others)
			}
			v.checked++
		}
	}
	return v
}

func importsOf(f file) (names []string) {
	for _, spec := range f.tree.Imports {
		name, err := strconv.Unquote(spec.Path.Value)
		if err != nil {
			name = spec.Path.Value
		}
		names = append(names, name)
	}
	return names
}

// fromModule tells a module's package from the standard library's.
func fromModule(name string) bool {
	host, _, _ := strings.Cut(name, "/")
	return strings.Contains(host, ".")
}

// within reports whether a package is the given one or lies below it.
func within(above, name string) bool { return name == above || strings.HasPrefix(name, above+"/") }

// worldly are packages of the standard library that let an answer depend on more
// than the question.
var worldly = strings.Fields("os net io/fs io/ioutil path/filepath time log context syscall runtime database math/rand crypto/rand embed unsafe plugin")

// pure keeps files, network, clock, chance and timing out of the physics.
func pure(r *repository) (v verdict) {
	r.goFiles(func(f file) {
		if !within("budget", f.room()) || f.test() {
			return
		}
		v.checked++
		for _, name := range importsOf(f) {
			if slices.ContainsFunc(worldly, func(w string) bool { return within(w, name) }) {
				v.add(f.path, "imports", name, "- its answers must depend on design and point alone")
			}
		}
		ast.Inspect(f.tree, func(n ast.Node) bool {
			if _, starts := n.(*ast.GoStmt); starts {
				v.add(f.path, "starts a goroutine, whose timing could be seen")
			}
			return true
		})
	})
	return v
}

var figure = regexp.MustCompile(`\bfloat(32|64)\b|"math"|"strconv"|"fmt"`)

// onlyStrings keeps formatting where it is tested: what a page says is decided
// before it is drawn.
func onlyStrings(r *repository) (v verdict) {
	for _, f := range r.files {
		if f.room() != "web/view" || f.test() || f.generated() {
			continue
		}
		v.checked++
		if found := figure.FindString(f.text); found != "" {
			v.add(f.path, "has", found, "- give it strings that are ready to be read")
		}
	}
	return v
}

var statement = regexp.MustCompile(`(?is)^\s*(select\s.+\sfrom\s|insert\s+(or\s+\w+\s+)?into\s|update\s+\w+\s+set\s|delete\s+from\s|create\s+(table|index|trigger|view)\s|drop\s+(table|index|trigger|view)\s|alter\s+table\s|pragma\s|vacuum\b)`)

// queries looks at all string literals but those of tests, some of which play
// another program that writes into a data file.
func queries(r *repository) (v verdict) {
	r.goFiles(func(f file) {
		if f.test() {
			return
		}
		ast.Inspect(f.tree, func(n ast.Node) bool {
			literal, is := n.(*ast.BasicLit)
			if !is {
				return true
			}
			text, err := strconv.Unquote(literal.Value)
			if err != nil || !statement.MatchString(text) {
				return true
			}
			v.checked++
			if f.room() != "store" {
				v.add(f.path, "has the statement", strconv.Quote(text), "- SQL is written in the store")
			}
			return true
		})
	})
	return v
}
