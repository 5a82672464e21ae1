package web_test

import (
	"go/ast"
	"regexp"
	"strings"
)

var docRules = []rule{
	{"every exported name has a comment", documented, 200, []sketch{
		{"web/x.go": "package web\nfunc Do() {}"},
		{"web/x.go": "package web\n// T is.\ntype T int\nfunc (T) Do() {}"},
		{"web/x.go": "package web\nconst (\n\tA = 1\n)"},
	}},
	{"every quantity of the physics has a unit", united, 80, []sketch{
		{"budget/wave/x.go": "package wave\n// Mean returns the mean.\nfunc Mean(i float64) float64 { return i }"},
		{"budget/device/x.go": "package device\n// Gate is a gate.\ntype Gate struct {\n\tCharge float64 // stated\n}"},
		{"budget/stage/x.go": "package stage\n// L is one.\ntype L interface {\n\tAt(i float64) float64 // of it\n}"},
	}},
	{"the guides name files that are there", guided, 20, []sketch{
		{"DEVELOPERS.md": "see `budget/nowhere.go`"},
		{"README.md": "![sheet](testdata/nowhere.png)"},
	}},
}

func documented(r *repository) (v verdict) {
	r.goFiles(func(f file) {
		if f.test() {
			return
		}
		for _, decl := range f.tree.Decls {
			for name, comment := range exported(decl) {
				v.checked++
				if strings.TrimSpace(comment) == "" {
					v.add(f.path+":", name, "has no comment")
				}
			}
		}
	})
	return v
}

// exported returns the exported names that a declaration makes, with what is
// said of them; a group's comment counts for each of its names.
func exported(decl ast.Decl) map[string]string {
	names := map[string]string{}
	switch d := decl.(type) {
	case *ast.FuncDecl:
		if d.Name.IsExported() && (d.Recv == nil || ast.IsExported(receiver(d))) {
			names[d.Name.Name] = d.Doc.Text()
		}
	case *ast.GenDecl:
		for _, spec := range d.Specs {
			switch s := spec.(type) {
			case *ast.TypeSpec:
				if s.Name.IsExported() {
					names[s.Name.Name] = d.Doc.Text() + s.Doc.Text() + s.Comment.Text()
				}
			case *ast.ValueSpec:
				for _, name := range s.Names {
					if name.IsExported() {
						names[name.Name] = d.Doc.Text() + s.Doc.Text() + s.Comment.Text()
					}
				}
			}
		}
	}
	return names
}

// receiver is the name of the type that a method is of.
func receiver(d *ast.FuncDecl) string {
	t := d.Recv.List[0].Type
	if star, is := t.(*ast.StarExpr); is {
		t = star.X
	}
	if generic, is := t.(*ast.IndexExpr); is {
		t = generic.X
	}
	if name, is := t.(*ast.Ident); is {
		return name.Name
	}
	return ""
}

// A comment names a unit after a word or sign that leads to one, "in W" or
// "(A, > 0)"; that of a member may begin with it. A plain number says what it
// is.
var (
	unit     = `(?:1/K|°C|kelvin|[kmnµ]?(?:V|A|Ω|F|H|C|s|Hz|W|m|J|T|K)[²³]?(?:[/·](?:V|A|s|K|W|m[²³]?|√V|V\^1\.5))?)`
	after    = `(?:[\s,;:.)]|$)`
	unitSaid = regexp.MustCompile(`(?:\bin |[(,;] ?)` + unit + after + `|\b(?:ratio|share|factor|exponent|multiplier|shares|exponents)\b|in the units of`)
	unitHead = regexp.MustCompile(`^` + unit + after)
)

// united looks at functions with numbers and at members that are numbers. A
// member may leave it to the comment of its type.
func united(r *repository) (v verdict) {
	r.goFiles(func(f file) {
		if !within("budget", f.room()) || f.room() == "budget" || f.test() {
			return
		}
		for _, decl := range f.tree.Decls {
			switch d := decl.(type) {
			case *ast.FuncDecl:
				if d.Name.IsExported() && (d.Recv == nil || ast.IsExported(receiver(d))) && hasFloat(d.Type) {
					v.unit(f, d.Name.Name, d.Doc.Text(), "")
				}
			case *ast.GenDecl:
				for _, spec := range d.Specs {
					if t, is := spec.(*ast.TypeSpec); is && t.Name.IsExported() {
						v.members(f, t, d.Doc.Text()+t.Doc.Text())
					}
				}
			}
		}
	})
	return v
}

func (v *verdict) members(f file, t *ast.TypeSpec, doc string) {
	var fields *ast.FieldList
	switch kind := t.Type.(type) {
	case *ast.StructType:
		fields = kind.Fields
	case *ast.InterfaceType:
		fields = kind.Methods
	default:
		return
	}
	for _, field := range fields.List {
		for _, name := range field.Names {
			if name.IsExported() && hasFloat(field.Type) {
				v.unit(f, t.Name.Name+"."+name.Name, doc, field.Doc.Text()+field.Comment.Text())
			}
		}
	}
}

func (v *verdict) unit(f file, name, doc, comment string) {
	v.checked++
	doc, comment = oneLine(doc), oneLine(comment)
	if !unitSaid.MatchString(doc) && !unitSaid.MatchString(comment) && !unitHead.MatchString(comment) {
		v.add(f.path+":", name, "has no unit in its comment, and is not called a ratio, share, factor or exponent")
	}
}

func oneLine(text string) string { return strings.Join(strings.Fields(text), " ") }

func hasFloat(n ast.Node) (found bool) {
	ast.Inspect(n, func(n ast.Node) bool {
		name, is := n.(*ast.Ident)
		found = found || is && name.Name == "float64"
		return !found
	})
	return found
}

// named matches what a guide writes of a path: in backquotes, or as the aim of a
// link.
var named = regexp.MustCompile("`([A-Za-z.][\\w./-]*)`|\\]\\(([^)#:]+)\\)")

func guided(r *repository) (v verdict) {
	for _, guide := range []string{"README.md", "DEVELOPERS.md"} {
		for _, match := range named.FindAllStringSubmatch(r.find(guide), -1) {
			name := match[1] + match[2]
			first, _, deep := strings.Cut(strings.TrimPrefix(name, "./"), "/")
			_, isRoom := rooms[first]
			if match[2] == "" && !(deep && (isRoom || first == "testdata" || first == ".ci")) {
				continue
			}
			v.checked++
			if !r.has(strings.TrimSuffix(name, "/")) {
				v.add(guide, "names", name, "- there is no such file or folder")
			}
		}
	}
	return v
}

func (r *repository) has(name string) bool {
	for _, f := range r.files {
		if within(name, f.path) {
			return true
		}
	}
	return false
}
