package mutants

import (
	"fmt"
	"go/ast"
	"go/constant"
	"go/token"
	"go/types"
	"slices"
	"strings"
)

// mutant is the program with one constant moved or one sign turned.
type mutant struct {
	id            int
	of            *file
	inside        string // the declaration
	before, after string // the expression around it
	nth           int    // among those that read alike there
	alone         bool   // it can't be switched at run time and is built by itself
	change        edit   // of the file, for that
}

// key names a mutant by what it changes, wherever that stands in its file.
func (m *mutant) key() string {
	key := fmt.Sprintf("%s %s: %s  →  %s", m.of.path, m.inside, m.before, m.after)
	if m.nth > 1 {
		key += fmt.Sprintf("  (%d)", m.nth)
	}
	return key
}

// finder walks through a tree and gathers mutants, and the edits that put them all
// into the text at once.
type finder struct {
	*tree
	mutants   []*mutant
	edits     map[*file][]edit
	constants map[string]*named
	seen      map[string]int
	spared    string // the package that is left as it is, whose tests look on
}

// place is a node with what it lies in.
type place struct {
	f     *file
	node  ast.Node
	stack []ast.Node // its parents, outermost first
}

// typeOf returns the type of an expression. Within an expression of constants alone
// it is the whole one's, since the compiler never gives its parts one.
func (p place) typeOf(e ast.Expr) types.Type {
	t := p.f.of.info.Types[e].Type
	for _, parent := range slices.Backward(p.stack) {
		if b, is := t.(*types.Basic); !is || b.Info()&types.IsUntyped == 0 {
			break
		}
		switch whole := parent.(type) {
		case *ast.ParenExpr, *ast.UnaryExpr, *ast.BinaryExpr:
			t = p.f.of.info.Types[whole.(ast.Expr)].Type
		default:
			return t
		}
	}
	return t
}

// find returns all mutants of a tree but those of the package spared, and by file the
// edits that switch them.
func find(t *tree, spared string) *finder {
	f := &finder{tree: t, spared: spared, edits: map[*file][]edit{}, constants: map[string]*named{}, seen: map[string]int{}}
	f.walk(false, f.declared)
	f.walk(true, f.used)
	f.walk(false, f.visit)
	return f
}

// walk calls visit for every node, of tests too if asked.
func (f *finder) walk(tests bool, visit func(p place)) {
	for _, s := range f.packages {
		for _, file := range s.files {
			if !tests && (file.test || s.path == f.spared) {
				continue
			}
			ast.PreorderStack(file.ast, nil, func(n ast.Node, stack []ast.Node) bool {
				visit(place{file, n, stack})
				return true
			})
		}
	}
}

func (f *finder) visit(p place) {
	switch n := p.node.(type) {
	case *ast.ValueSpec:
		for i, name := range n.Names {
			if c := f.constants[nameOf(p.f, p.f.of.info.Defs[name])]; c != nil {
				f.constant(p, c, n.Values[i])
			}
		}
	case *ast.BasicLit:
		f.literal(p, n)
	case *ast.BinaryExpr:
		f.binary(p, n)
	case *ast.UnaryExpr:
		f.negation(p, n)
	case *ast.AssignStmt:
		f.assignment(p, n)
	case *ast.IncDecStmt:
		f.step(p, n)
	case *ast.CallExpr:
		f.extreme(p, n)
	}
}

// fixed reports whether the language wants a constant where a node stands.
func (p place) fixed() bool {
	child := p.node
	for _, parent := range slices.Backward(p.stack) {
		switch n := parent.(type) {
		case *ast.ArrayType:
			if n.Len == child {
				return true
			}
		case *ast.GenDecl:
			return n.Tok == token.CONST
		case *ast.CompositeLit:
			pair, is := child.(*ast.KeyValueExpr)
			if _, isStruct := p.typeOf(n).Underlying().(*types.Struct); is && !isStruct && p.node.End() <= pair.Key.End() {
				_, isMap := p.typeOf(n).Underlying().(*types.Map)
				return !isMap
			}
		case *ast.BlockStmt:
			return false
		}
		child = parent
	}
	return false
}

// literal moves a number that stands in an expression, or what a formula's text says.
func (f *finder) literal(p place, n *ast.BasicLit) {
	if p.fixed() {
		return
	}
	switch n.Kind {
	case token.INT, token.FLOAT:
		float := isFloat(p.typeOf(n))
		value := textOf(moved(constant.MakeFromLiteral(n.Value, n.Kind, 0), float), float)
		m := f.add(p, n.Pos(), n.End(), value)
		f.edit(p, n.Pos(), n.End(), fmt.Sprintf("chosen.Of[%s](%d, %s, %s)", p.name(p.typeOf(n)), m.id, n.Value, value))
	case token.STRING:
		if !p.formula() {
			return
		}
		text := n.Value
		for _, other := range formulaMutants(n.Value) {
			m := f.add(p, n.Pos(), n.End(), other)
			text = fmt.Sprintf("chosen.Of(%d, %s, %s)", m.id, text, other)
		}
		f.edit(p, n.Pos(), n.End(), text)
	}
}

var turned = map[token.Token]token.Token{
	token.ADD: token.SUB, token.SUB: token.ADD, token.MUL: token.QUO, token.QUO: token.MUL,
	token.ADD_ASSIGN: token.SUB_ASSIGN, token.SUB_ASSIGN: token.ADD_ASSIGN, token.MUL_ASSIGN: token.QUO_ASSIGN, token.QUO_ASSIGN: token.MUL_ASSIGN,
	token.LSS: token.GTR, token.GTR: token.LSS, token.LEQ: token.GEQ, token.GEQ: token.LEQ, token.EQL: token.NEQ, token.NEQ: token.EQL,
	token.INC: token.DEC, token.DEC: token.INC,
}

// edge is the comparison that differs at equality alone.
var edge = map[token.Token]token.Token{token.LSS: token.LEQ, token.GTR: token.GEQ, token.LEQ: token.LSS, token.GEQ: token.GTR}

// functions are those of the package chosen that take an operator's place.
var functions = map[token.Token]string{
	token.ADD: "Sum", token.SUB: "Difference", token.MUL: "Product", token.QUO: "Quotient",
	token.ADD_ASSIGN: "Sum", token.SUB_ASSIGN: "Difference", token.MUL_ASSIGN: "Product", token.QUO_ASSIGN: "Quotient",
	token.INC: "Sum", token.DEC: "Difference",
	token.LSS: "Less", token.GTR: "Greater", token.LEQ: "NotGreater", token.GEQ: "NotLess",
}

func (f *finder) binary(p place, n *ast.BinaryExpr) {
	other, known := turned[n.Op]
	if !known || p.fixed() {
		return
	}
	operand := p.typeOf(n)
	if _, compares := edge[n.Op]; compares {
		operand = p.f.of.info.Types[n.X].Type
		if b, is := operand.(*types.Basic); is && b.Info()&types.IsUntyped != 0 {
			operand = p.f.of.info.Types[n.Y].Type
		}
	}
	if n.Op == token.EQL || n.Op == token.NEQ {
		m := f.add(p, n.OpPos, n.OpPos+2, other.String())
		f.wrap(p, n, fmt.Sprintf("chosen.Not(%d, ", m.id))
		return
	}
	if _, compares := edge[n.Op]; !compares && !isNumber(operand) {
		return
	}
	end := n.OpPos + token.Pos(len(n.Op.String()))
	m := f.add(p, n.OpPos, end, other.String())
	if other, is := edge[n.Op]; is {
		f.add(p, n.OpPos, end, other.String())
	}
	f.edit(p, n.OpPos, end, ",")
	f.wrap(p, n, fmt.Sprintf("chosen.%s%s(%d, ", functions[n.Op], p.instance(operand), m.id))
}

func (f *finder) negation(p place, n *ast.UnaryExpr) {
	if n.Op != token.SUB || p.fixed() {
		return
	}
	m := f.add(p, n.OpPos, n.OpPos+1, "")
	f.edit(p, n.OpPos, n.OpPos+1, "")
	f.wrap(p, n, fmt.Sprintf("chosen.Negation%s(%d, ", p.instance(p.typeOf(n)), m.id))
}

// assignment turns x += y and its like.
func (f *finder) assignment(p place, n *ast.AssignStmt) {
	if other, known := turned[n.Tok]; known && isNumber(p.typeOf(n.Lhs[0])) {
		f.reassign(p, n.Lhs[0], n.TokPos, n.Tok, other, ", ")
		f.insert(p, n.End(), ")")
	}
}

// step turns x++, but where it only moves a loop on.
func (f *finder) step(p place, n *ast.IncDecStmt) {
	if loop, is := p.stack[len(p.stack)-1].(*ast.ForStmt); is && loop.Post == n {
		return
	}
	f.reassign(p, n.X, n.TokPos, n.Tok, turned[n.Tok], ", 1)")
}

func (f *finder) reassign(p place, x ast.Expr, at token.Pos, sign, other token.Token, rest string) {
	m := f.add(p, at, at+2, other.String())
	f.edit(p, at, at+2, fmt.Sprintf("= chosen.%s%s(%d, %s%s", functions[sign], p.instance(p.typeOf(x)), m.id, p.f.source(x.Pos(), x.End(), f.fset), rest))
}

// extreme takes the larger for the smaller.
func (f *finder) extreme(p place, n *ast.CallExpr) {
	name := f.fset.Position(n.Fun.Pos()).Offset
	text := p.f.text[name : name+int(n.Fun.End()-n.Fun.Pos())]
	swap := map[string]string{"max": "min", "min": "max", "math.Max": "math.Min", "math.Min": "math.Max"}
	if swap[text] == "" {
		return
	}
	m := f.add(p, n.Fun.Pos(), n.Fun.End(), swap[text])
	t := p.name(p.typeOf(n))
	f.edit(p, n.Fun.Pos(), n.Fun.End(), fmt.Sprintf("chosen.Of(%d, %s, %s)", m.id, wrapped(text, t), wrapped(swap[text], t)))
}

// wrapped makes a value of a function, which the built-in ones are not.
func wrapped(name, kind string) string {
	if strings.HasPrefix(name, "math.") {
		return name
	}
	return fmt.Sprintf("func(a, b %s) %s { return %s(a, b) }", kind, kind, name)
}

// add takes a mutant that writes text in place of what stands from at to end.
func (f *finder) add(p place, at, end token.Pos, text string) *mutant {
	from, to := p.around(f.fset)
	m := &mutant{id: len(f.mutants) + 1, of: p.f, inside: p.inside(),
		before: oneLine(p.f.source(from, to, f.fset)),
		after:  oneLine(p.f.source(from, at, f.fset) + text + p.f.source(end, to, f.fset)),
		change: edit{at: f.offset(at), end: f.offset(end), text: text}}
	m.nth = 1
	f.seen[m.key()]++
	m.nth = f.seen[m.key()]
	f.mutants = append(f.mutants, m)
	return m
}

func (f *finder) offset(p token.Pos) int { return f.fset.Position(p).Offset }

func (f *file) source(from, to token.Pos, fset *token.FileSet) string {
	return f.text[fset.Position(from).Offset:fset.Position(to).Offset]
}

func oneLine(text string) string { return strings.Join(strings.Fields(text), " ") }

// longestText is how much of what lies around a mutant its name holds.
const longestText = 70

// around returns the ends of the largest expression or simple statement about a node
// that is short enough to be a name.
func (p place) around(fset *token.FileSet) (from, to token.Pos) {
	from, to = p.node.Pos(), p.node.End()
	for _, parent := range slices.Backward(p.stack) {
		start, end := parent.Pos(), parent.End()
		switch n := parent.(type) {
		case *ast.RangeStmt:
			end = n.X.End()
		case *ast.ReturnStmt:
			if len(n.Results) > 1 {
				return from, to
			}
		case ast.Expr, *ast.AssignStmt, *ast.ValueSpec, *ast.IncDecStmt:
		default:
			return from, to
		}
		if _, is := parent.(*ast.FuncLit); is || end-start > longestText {
			return from, to
		}
		from, to = min(from, start), max(to, end)
	}
	return from, to
}

// inside is the name of the declaration a node lies in.
func (p place) inside() string {
	name := "?"
	for _, parent := range append(slices.Clone(p.stack), p.node) {
		switch n := parent.(type) {
		case *ast.FuncDecl:
			if n.Recv != nil {
				return strings.TrimPrefix(types.ExprString(n.Recv.List[0].Type), "*") + "." + n.Name.Name
			}
			return n.Name.Name
		case *ast.ValueSpec:
			return n.Names[0].Name
		}
	}
	return name
}
