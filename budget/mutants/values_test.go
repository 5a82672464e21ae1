package mutants

import (
	"fmt"
	"go/ast"
	"go/constant"
	"go/token"
	"go/types"
	"slices"
	"strconv"
	"strings"
	"unicode"
	"unicode/utf8"
)

// moved returns a constant moved by 1 %, or a count moved by one. Where there is no
// hundredth of a value, of 0, it becomes 0.01.
func moved(v constant.Value, float bool) constant.Value {
	switch {
	case !float:
		return constant.BinaryOp(v, token.ADD, constant.MakeInt64(1))
	case constant.Sign(v) == 0:
		return constant.BinaryOp(constant.MakeInt64(1), token.QUO, constant.MakeInt64(100))
	}
	return constant.BinaryOp(v, token.MUL, constant.BinaryOp(constant.MakeInt64(101), token.QUO, constant.MakeInt64(100)))
}

// textOf writes a constant as a literal.
func textOf(v constant.Value, float bool) string {
	if v.Kind() == constant.String || !float {
		return v.ExactString()
	}
	f, _ := constant.Float64Val(v)
	return strconv.FormatFloat(f, 'g', -1, 64)
}

func isNumber(t types.Type) bool {
	b, is := t.Underlying().(*types.Basic)
	return is && b.Info()&types.IsNumeric != 0
}

func isFloat(t types.Type) bool {
	b, is := t.Underlying().(*types.Basic)
	return is && b.Info()&types.IsFloat != 0
}

// name writes a type as its file may.
func (p place) name(t types.Type) string {
	return types.TypeString(t, func(other *types.Package) string {
		if other.Path() == p.f.of.path {
			return ""
		}
		return other.Name()
	})
}

// instance writes the type that a function of the package chosen is used with, where
// its arguments don't tell: those of a type with a name do, and that name may mean
// something else where they stand.
func (p place) instance(t types.Type) string {
	if _, basic := t.(*types.Basic); basic {
		return "[" + p.name(t) + "]"
	}
	return ""
}

// named is a constant that the code declares: its uses are switched, since its
// declaration can't be.
type named struct {
	uses []place
	held bool // some use needs a constant
	text bool // a formula's
}

// nameOf tells constants apart, across packages too.
func nameOf(f *file, o types.Object) string {
	c, is := o.(*types.Const)
	if !is || c.Pkg() == nil {
		return ""
	}
	if c.Parent() == c.Pkg().Scope() {
		return c.Pkg().Path() + "." + c.Name()
	}
	return fmt.Sprint(c.Pkg().Path(), ".", c.Name(), "@", c.Pos())
}

// declared takes note of the constants with a number or a formula in them.
func (f *finder) declared(p place) {
	spec, is := p.node.(*ast.ValueSpec)
	if !is || p.stack[len(p.stack)-1].(*ast.GenDecl).Tok != token.CONST {
		return
	}
	for i, name := range spec.Names {
		if i < len(spec.Values) && !p.mentions(spec.Values[i], "iota") {
			f.constants[nameOf(p.f, p.f.of.info.Defs[name])] = &named{}
		}
	}
}

func (p place) mentions(e ast.Expr, name string) (found bool) {
	ast.Inspect(e, func(n ast.Node) bool {
		ident, is := n.(*ast.Ident)
		found = found || is && ident.Name == name
		return !found
	})
	return found
}

// used takes note of where they are used. A constant of another package stands with
// the package's name before it.
func (f *finder) used(p place) {
	ident, is := p.node.(*ast.Ident)
	if !is {
		return
	}
	c := f.constants[nameOf(p.f, p.f.of.info.Uses[ident])]
	if c == nil {
		return
	}
	if selector, is := p.stack[len(p.stack)-1].(*ast.SelectorExpr); is {
		p = place{p.f, selector, slices.Clone(p.stack[:len(p.stack)-1])}
	} else {
		p.stack = slices.Clone(p.stack)
	}
	c.held = c.held || p.fixed()
	c.text = c.text || p.formula()
	c.uses = append(c.uses, p)
}

// constant makes the mutants of a declared constant's value.
func (f *finder) constant(p place, c *named, value ast.Expr) {
	first := len(f.mutants)
	var values []constant.Value // of the whole constant, mutant by mutant
	float := !slices.ContainsFunc(c.uses, func(use place) bool { return !isFloat(use.typeOf(use.node.(ast.Expr))) })
	ast.PreorderStack(value, append(slices.Clone(p.stack), p.node), func(n ast.Node, stack []ast.Node) bool {
		at := place{p.f, n, stack}
		switch n := n.(type) {
		case *ast.BasicLit:
			values = append(values, f.inConstant(at, c, value, n, float)...)
		case *ast.BinaryExpr:
			if other, known := turned[n.Op]; known && p.typeOf(value).Underlying().(*types.Basic).Info()&types.IsString == 0 {
				f.add(at, n.OpPos, n.OpPos+1, other.String())
				values = append(values, p.evaluate(value, n, constant.MakeUnknown(), other))
			}
		case *ast.UnaryExpr:
			if n.Op == token.SUB {
				f.add(at, n.OpPos, n.OpPos+1, "")
				values = append(values, p.evaluate(value, n, p.f.of.info.Types[n.X].Value, 0))
			}
		}
		return true
	})
	for i, v := range values {
		f.mutants[first+i].alone = c.held || v.Kind() == constant.Unknown
	}
	for _, use := range c.uses {
		f.use(use, f.mutants[first:], values)
	}
}

// inConstant moves one literal of a constant, and returns the constants that come of
// it.
func (f *finder) inConstant(p place, c *named, whole ast.Expr, n *ast.BasicLit, float bool) (values []constant.Value) {
	switch {
	case n.Kind == token.INT || n.Kind == token.FLOAT:
		v := moved(constant.MakeFromLiteral(n.Value, n.Kind, 0), float)
		f.add(p, n.Pos(), n.End(), textOf(v, float))
		return append(values, p.evaluate(whole, n, v, 0))
	case n.Kind == token.STRING && c.text && whole == n:
		for _, other := range formulaMutants(n.Value) {
			f.add(p, n.Pos(), n.End(), other)
			values = append(values, constant.MakeFromLiteral(other, token.STRING, 0))
		}
	}
	return values
}

// use switches a constant where it is used.
func (f *finder) use(p place, mutants []*mutant, values []constant.Value) {
	e := p.node.(ast.Expr)
	t := p.typeOf(e)
	before, after := "", ""
	for i, m := range mutants {
		if !m.alone {
			before = fmt.Sprintf("chosen.Of%s(%d, %s", p.instance(t), m.id, before)
			after += ", " + textOf(values[i], isFloat(t)) + ")"
		}
	}
	if before != "" {
		f.wrapTo(p, e, before, after)
	}
}

// evaluate works out a constant expression with a value in one node's stead, or with
// another sign there.
func (p place) evaluate(e ast.Expr, at ast.Node, instead constant.Value, sign token.Token) constant.Value {
	if e == at && sign == 0 {
		return instead
	}
	switch n := e.(type) {
	case *ast.ParenExpr:
		return p.evaluate(n.X, at, instead, sign)
	case *ast.UnaryExpr:
		return constant.UnaryOp(n.Op, p.evaluate(n.X, at, instead, sign), 0)
	case *ast.BinaryExpr:
		op := n.Op
		if n == at {
			op = sign
		}
		x, y := p.evaluate(n.X, at, instead, sign), p.evaluate(n.Y, at, instead, sign)
		if op == token.QUO && x.Kind() == constant.Int && y.Kind() == constant.Int {
			return constant.MakeUnknown() // whole numbers or not: leave it to the compiler
		}
		return constant.BinaryOp(x, op, y)
	case *ast.BasicLit:
		return constant.MakeFromLiteral(n.Value, n.Kind, 0)
	}
	if e.Pos() <= at.Pos() && at.End() <= e.End() {
		return constant.MakeUnknown()
	}
	return p.f.of.info.Types[e].Value
}

// formula reports whether a text is the formula of a method.
func (p place) formula() bool {
	child := p.node
	for _, parent := range slices.Backward(p.stack) {
		switch n := parent.(type) {
		case *ast.BinaryExpr:
		case *ast.CallExpr:
			name, is := n.Fun.(*ast.Ident)
			return is && (name.Name == "how" && child == n.Args[0] || name.Name == "atVoltage" && slices.Contains(n.Args[1:], ast.Expr(child.(ast.Expr))))
		default:
			return false
		}
		child = parent
	}
	return false
}

// formulaMutants moves each number and turns each sign of a formula's text, a Go
// literal.
func formulaMutants(text string) (all []string) {
	put := func(at, size int, other string) { all = append(all, text[:at]+other+text[at+size:]) }
	last := '"'
	for at := 0; at < len(text); {
		c, size := utf8.DecodeRuneInString(text[at:])
		switch {
		case unicode.IsLetter(c):
			size = nameLength(text[at:])
			if swap := map[string]string{"min": "max", "max": "min"}[text[at:at+size]]; swap != "" {
				put(at, size, swap)
			}
		case c >= '0' && c <= '9':
			size = len(text[at:]) - len(strings.TrimLeft(text[at:], "0123456789."))
			put(at, size, textOf(moved(constant.MakeFromLiteral(text[at:at+size], token.FLOAT, 0), true), true))
		case c == '½' || c == '⅔':
			put(at, size, map[rune]string{'½': "0.505", '⅔': "0.6733333333333333"}[c])
		case c == '−' && strings.ContainsRune("\"(+−·/^|,√", last):
			put(at, size, "")
		case c == '+', c == '−', c == '·', c == '/':
			put(at, size, map[rune]string{'+': "−", '−': "+", '·': "/", '/': "·"}[c])
		}
		if c != ' ' {
			last = c
		}
		at += size
	}
	return all
}

// nameLength is that of a quantity or function with its subscript.
func nameLength(text string) int {
	end := strings.IndexFunc(text, func(c rune) bool { return !unicode.IsLetter(c) && !unicode.IsDigit(c) && c != '_' && c != ',' })
	if end < 0 {
		end = len(text)
	}
	return len(strings.TrimRight(text[:end], ","))
}
