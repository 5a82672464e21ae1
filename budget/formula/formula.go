// Package formula holds expressions as they stand in a book: read from one line of
// text, evaluated with the values of their names, and handed out as a tree from
// which they can be set as mathematics. It knows no physics.
package formula

import (
	"fmt"
	"math"
)

// Kind says what a node of an expression is.
type Kind uint8

// The kinds of nodes.
const (
	Number     Kind = iota
	Name            // of a quantity: letter, and subscript after "_"
	Sum             // a + b
	Difference      // a − b
	Product         // a·b
	Quotient        // a/b
	Power           // a^b
	Negation        // −a
	Root            // √a
	Absolute        // |a|
	Call            // max(a, b), exp(a), …
)

// Node is an expression: a number, a name, or an operation on its arguments.
type Node struct {
	Kind   Kind
	Text   string  // of a number, a name or a function, as written
	Number float64 // the value of a Number, in the units of its place
	Args   []*Node
}

// Expression is a line of text with the tree that was read from it.
type Expression struct {
	Text string
	Root *Node
}

// Names returns the names of an expression, each once, in their order.
func (e *Expression) Names() []string {
	var names []string
	seen := map[string]bool{}
	e.Root.Walk(func(n *Node) {
		if n.Kind == Name && !seen[n.Text] {
			seen[n.Text] = true
			names = append(names, n.Text)
		}
	})
	return names
}

// Walk calls visit for a node and all below it, in the order they are written.
func (n *Node) Walk(visit func(*Node)) {
	visit(n)
	for _, a := range n.Args {
		a.Walk(visit)
	}
}

// Value evaluates an expression, in the units of the values that the names have. A
// name without a value is an error.
func (e *Expression) Value(values map[string]float64) (float64, error) {
	return e.Root.value(values)
}

func (n *Node) value(values map[string]float64) (float64, error) {
	switch n.Kind {
	case Number:
		return n.Number, nil
	case Name:
		v, known := values[n.Text]
		if !known {
			return 0, fmt.Errorf("%s has no value", n.Text)
		}
		return v, nil
	}
	args := make([]float64, len(n.Args))
	for i, a := range n.Args {
		var err error
		if args[i], err = a.value(values); err != nil {
			return 0, err
		}
	}
	if n.Kind == Call {
		return functions[n.Text].of(args), nil
	}
	return operate(n.Kind, args), nil
}

func operate(kind Kind, a []float64) float64 {
	switch kind {
	case Sum:
		return a[0] + a[1]
	case Difference:
		return a[0] - a[1]
	case Product:
		return a[0] * a[1]
	case Quotient:
		return a[0] / a[1]
	case Power:
		return math.Pow(a[0], a[1])
	case Negation:
		return -a[0]
	case Root:
		return math.Sqrt(a[0])
	}
	return math.Abs(a[0])
}

// function is one that can be called by name with so many arguments.
type function struct {
	arguments int
	of        func(a []float64) float64
}

var functions = map[string]function{
	"max": {2, func(a []float64) float64 { return math.Max(a[0], a[1]) }},
	"min": {2, func(a []float64) float64 { return math.Min(a[0], a[1]) }},
	"exp": {1, func(a []float64) float64 { return math.Exp(a[0]) }},
	"ln":  {1, func(a []float64) float64 { return math.Log(a[0]) }},
	"Γ":   {1, func(a []float64) float64 { return math.Gamma(a[0]) }},
}

// constants are names with a value of their own.
var constants = map[string]float64{"π": math.Pi, "½": 0.5, "⅔": 2.0 / 3.0}
