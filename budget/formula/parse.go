package formula

import (
	"fmt"
	"strconv"
	"strings"
	"unicode"
	"unicode/utf8"
)

// Must reads an expression that is written in the program; one that can't be read
// is a mistake there. The notation, loosest first:
//
//	a + b   a − b      sums
//	a·b     a/b        products, from left to right: a/b·c is (a/b)·c
//	−a                 negation
//	a^b                powers; a longer exponent stands in brackets
//	√a  |a|  (a)  max(a, b)  exp(a)  ln(a)  Γ(a)
//	V_b  t_d,on  0.00393  ½  ⅔  π
func Must(text string) *Expression {
	e, err := Parse(text)
	if err != nil {
		panic("formula: " + err.Error())
	}
	return e
}

// Parse reads an expression in the notation of Must.
func Parse(text string) (e *Expression, err error) {
	r := &reader{rest: text}
	defer func() {
		if wrong, is := recover().(unreadable); is {
			e, err = nil, fmt.Errorf("%q: %s before %q", text, string(wrong), r.rest)
		}
	}()
	root := r.sum()
	if r.blank(); r.rest != "" {
		r.fail("the end is missing")
	}
	return &Expression{text, root}, nil
}

// reader reads an expression by recursive descent.
type reader struct{ rest string }

// unreadable is what a reader gives up with.
type unreadable string

func (r *reader) fail(words string) { panic(unreadable(words)) }

func (r *reader) blank() { r.rest = strings.TrimLeft(r.rest, " ") }

// take consumes a sign if it comes next.
func (r *reader) take(sign string) bool {
	r.blank()
	rest, found := strings.CutPrefix(r.rest, sign)
	if found {
		r.rest = rest
	}
	return found
}

func (r *reader) want(sign string) {
	if !r.take(sign) {
		r.fail("want " + sign)
	}
}

func (r *reader) sum() *Node {
	n := r.product()
	for {
		switch {
		case r.take("+"):
			n = &Node{Kind: Sum, Args: []*Node{n, r.product()}}
		case r.take("−"):
			n = &Node{Kind: Difference, Args: []*Node{n, r.product()}}
		default:
			return n
		}
	}
}

func (r *reader) product() *Node {
	n := r.signed()
	for {
		switch {
		case r.take("·"):
			n = &Node{Kind: Product, Args: []*Node{n, r.signed()}}
		case r.take("/"):
			n = &Node{Kind: Quotient, Args: []*Node{n, r.signed()}}
		default:
			return n
		}
	}
}

func (r *reader) signed() *Node {
	if r.take("−") {
		return &Node{Kind: Negation, Args: []*Node{r.signed()}}
	}
	n := r.atom()
	if r.take("^") {
		return &Node{Kind: Power, Args: []*Node{n, r.atom()}}
	}
	return n
}

func (r *reader) atom() *Node {
	switch {
	case r.take("("):
		n := r.sum()
		r.want(")")
		return n
	case r.take("|"):
		n := r.sum()
		r.want("|")
		return &Node{Kind: Absolute, Args: []*Node{n}}
	case r.take("√"):
		return &Node{Kind: Root, Args: []*Node{r.atom()}}
	}
	r.blank()
	first, size := utf8.DecodeRuneInString(r.rest)
	switch {
	case first >= '0' && first <= '9':
		return r.number()
	case first == '½' || first == '⅔':
		text := r.rest[:size]
		r.rest = r.rest[size:]
		return &Node{Kind: Number, Text: text, Number: constants[text]}
	case unicode.IsLetter(first):
		return r.word()
	}
	r.fail("want a number or a name")
	return nil
}

func (r *reader) number() *Node {
	text := r.while(func(c rune) bool { return c >= '0' && c <= '9' || c == '.' })
	v, err := strconv.ParseFloat(text, 64)
	if err != nil {
		r.fail(text + " is no number")
	}
	return &Node{Kind: Number, Text: text, Number: v}
}

// word reads a name, a constant, or a call of a function.
func (r *reader) word() *Node {
	text := r.while(func(c rune) bool { return unicode.IsLetter(c) || c >= '0' && c <= '9' })
	if v, is := constants[text]; is {
		return &Node{Kind: Number, Text: text, Number: v}
	}
	if f, is := functions[text]; is {
		return r.call(text, f)
	}
	if rest, sub := strings.CutPrefix(r.rest, "_"); sub {
		r.rest = rest
		text += "_" + r.subscript()
	}
	return &Node{Kind: Name, Text: text}
}

// subscript is letters and digits, and a comma between two of them.
func (r *reader) subscript() string {
	alphanumeric := func(c rune) bool { return unicode.IsLetter(c) || c >= '0' && c <= '9' }
	text := r.while(alphanumeric)
	if text == "" {
		r.fail("want a subscript")
	}
	for {
		rest, comma := strings.CutPrefix(r.rest, ",")
		if next, _ := utf8.DecodeRuneInString(rest); !comma || !alphanumeric(next) {
			return text
		}
		r.rest = rest
		text += "," + r.while(alphanumeric)
	}
}

func (r *reader) call(name string, f function) *Node {
	n := &Node{Kind: Call, Text: name}
	r.want("(")
	for {
		n.Args = append(n.Args, r.sum())
		if !r.take(",") {
			break
		}
	}
	r.want(")")
	if len(n.Args) != f.arguments {
		r.fail(fmt.Sprintf("%s takes %d arguments, not %d", name, f.arguments, len(n.Args)))
	}
	return n
}

func (r *reader) while(holds func(rune) bool) string {
	end := strings.IndexFunc(r.rest, func(c rune) bool { return !holds(c) })
	if end < 0 {
		end = len(r.rest)
	}
	text := r.rest[:end]
	r.rest = r.rest[end:]
	return text
}
