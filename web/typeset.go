package web

import (
	"strings"

	"lossbook/budget"
	"lossbook/budget/formula"
	"lossbook/web/quantity"
	"lossbook/web/view"
)

// setter sets an expression as mathematics: with values it puts them in for the names.
type setter struct {
	values map[string]budget.Term
}

// How tightly the parts of an expression hold together.
const (
	loose = iota // a sum
	firm         // a product, a fraction, a quantity with its unit
	tight        // a single sign, or anything in brackets
)

// set draws a node, in brackets where the place it stands in asks for something that
// holds together more tightly.
func (s setter) set(n *formula.Node, place int) view.Math {
	drawn, holds := s.node(n)
	if holds < place {
		return bracketed(drawn)
	}
	return drawn
}

func (s setter) node(n *formula.Node) (view.Math, int) {
	switch n.Kind {
	case formula.Number:
		return constantMath(n.Text), tight
	case formula.Name:
		return s.name(n.Text)
	case formula.Sum:
		return row(s.set(n.Args[0], loose), sign("+"), s.set(n.Args[1], loose)), loose
	case formula.Difference:
		return row(s.set(n.Args[0], loose), sign(minus), s.set(n.Args[1], firm)), loose
	case formula.Product:
		return row(s.set(n.Args[0], firm), sign("·"), s.set(n.Args[1], firm)), firm
	case formula.Negation:
		return row(sign(minus), s.set(n.Args[0], firm)), loose
	}
	return s.shape(n)
}

// shape draws what has a form of its own on paper, and so needs no brackets inside.
func (s setter) shape(n *formula.Node) (view.Math, int) {
	first := s.set(n.Args[0], loose)
	switch n.Kind {
	case formula.Quotient:
		return of(view.MathFraction, first, s.set(n.Args[1], loose)), firm
	case formula.Power:
		return of(view.MathSuper, s.set(n.Args[0], tight), s.set(n.Args[1], loose)), firm
	case formula.Root:
		return of(view.MathRoot, first), tight
	case formula.Absolute:
		return row(sign("|"), first, sign("|")), tight
	}
	inside := []view.Math{leaf(view.MathName, n.Text), sign("("), first}
	for _, a := range n.Args[1:] {
		inside = append(inside, sign(","), s.set(a, loose))
	}
	return row(append(inside, sign(")"))...), tight
}

// name draws a symbol, or its value. A value below zero holds no tighter than a sum,
// one with a unit no tighter than a product.
func (s setter) name(name string) (view.Math, int) {
	term, known := s.values[name]
	if !known {
		return symbolMath(name), tight
	}
	drawn := valueMath(term.Value, term.Unit)
	switch {
	case term.Value < 0:
		return drawn, loose
	case drawn.Element == view.MathRow:
		return drawn, firm
	}
	return drawn, tight
}

// shownDigits is how finely a working shows its values.
const shownDigits = 4

// valueMath draws a value with its unit. Where prefixes run out, it takes a power of
// ten.
func valueMath(v float64, unit string) view.Math {
	number, shown := quantity.Split(round(v, shownDigits), quantity.Unit(unit))
	mantissa, exponent, scientific := strings.Cut(number, "e")
	parts := []view.Math{leaf(view.MathNumber, minused(mantissa))}
	if scientific {
		parts = append(parts, sign("·"), of(view.MathSuper, leaf(view.MathNumber, "10"), leaf(view.MathNumber, minused(strings.TrimPrefix(exponent, "+")))))
	}
	if shown != "" {
		parts = append(parts, leaf(view.MathText, "\u00a0"+shown))
	}
	if len(parts) == 1 {
		return parts[0]
	}
	return row(parts...)
}

func minused(number string) string { return strings.Replace(number, "-", minus, 1) }

// symbolMath draws a name: its letter, and its subscript.
func symbolMath(name string) view.Math {
	letter, sub, has := strings.Cut(name, "_")
	if !has {
		return leaf(view.MathName, letter)
	}
	return of(view.MathSub, leaf(view.MathName, letter), leaf(view.MathText, sub))
}

func constantMath(text string) view.Math {
	if text == "π" {
		return leaf(view.MathName, text)
	}
	return leaf(view.MathNumber, text)
}

func leaf(e view.MathElement, text string) view.Math     { return view.Math{Element: e, Text: text} }
func of(e view.MathElement, args ...view.Math) view.Math { return view.Math{Element: e, Args: args} }
func row(args ...view.Math) view.Math                    { return of(view.MathRow, args...) }
func sign(text string) view.Math                         { return leaf(view.MathSign, text) }
func bracketed(inside view.Math) view.Math               { return row(sign("("), inside, sign(")")) }
