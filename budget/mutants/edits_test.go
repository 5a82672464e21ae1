package mutants

import (
	"cmp"
	"go/ast"
	"go/token"
	"slices"
	"strings"
)

// edit writes text in place of a file's bytes from at to end.
type edit struct {
	at, end int
	text    string
	closes  bool // it belongs to what ends here, and goes before what begins
	depth   int  // of the node; what lies within goes inside
}

func (f *finder) edit(p place, at, end token.Pos, text string) {
	f.edits[p.f] = append(f.edits[p.f], edit{f.offset(at), f.offset(end), text, false, 2 * len(p.stack)})
}

func (f *finder) insert(p place, at token.Pos, text string) {
	f.edits[p.f] = append(f.edits[p.f], edit{f.offset(at), f.offset(at), text, true, 2 * len(p.stack)})
}

// wrap makes an expression the arguments of a call.
func (f *finder) wrap(p place, n ast.Expr, call string) { f.wrapTo(p, n, call, ")") }

func (f *finder) wrapTo(p place, n ast.Expr, before, after string) {
	depth := 2*len(p.stack) - 1 // outside of what replaces the node itself
	f.edits[p.f] = append(f.edits[p.f],
		edit{f.offset(n.Pos()), f.offset(n.Pos()), before, false, depth},
		edit{f.offset(n.End()), f.offset(n.End()), after, true, depth})
}

// apply writes a text with edits that lie apart or within each other.
func apply(text string, edits []edit) string {
	slices.SortStableFunc(edits, func(a, b edit) int {
		switch {
		case a.at != b.at:
			return cmp.Compare(a.at, b.at)
		case a.closes != b.closes && a.closes:
			return -1
		case a.closes != b.closes:
			return 1
		case a.closes:
			return cmp.Compare(b.depth, a.depth)
		}
		return cmp.Compare(a.depth, b.depth)
	})
	var out strings.Builder
	done := 0
	for _, e := range edits {
		out.WriteString(text[done:max(done, e.at)])
		out.WriteString(e.text)
		done = max(done, e.end)
	}
	out.WriteString(text[done:])
	return out.String()
}
