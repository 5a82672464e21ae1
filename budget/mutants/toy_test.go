package mutants

import (
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
)

// toy is a module with something of each kind to change, each once where its tests
// look and once where they don't.
var toy = map[string]string{
	"go.mod": "module toy\n\ngo 1.26\n",
	"toy.go": `package toy

import "math"

const (
	slope = -2.5
	size  = 3
	words = "a + 2·b"
)

var room [size]float64

func how(text string) string { return text }

type side int

const right side = 1

func hidden(x side) bool {
	side := x
	return side == right
}

func seen(x, y float64, n int) (float64, int, string) {
	z := 2*x + y/4
	z -= slope
	if x < y && n <= 7 {
		z = math.Max(z, -y)
		n++
	}
	return min(z, 100), n + len(room), how(words)
}

func unseen(x, y float64, n int) (float64, int, string) {
	z := 3*x - y
	z *= slope
	if x > y || n == 8 {
		z = max(0, z)
		n--
	}
	return z, n, how("−ln(½) − max(0, x_1,2/1.5)")
}
`,
	"toy_test.go": `package toy

import "testing"

func TestSeen(t *testing.T) {
	if !hidden(1) || hidden(2) {
		t.Error("hidden")
	}
	for _, c := range []struct{ x, y float64; n int; z float64; m int }{
		{2, 8, 7, 8.5, 11}, {2, 8, 8, 8.5, 11}, {8, 2, 7, 19, 10}, {8, 8, 7, 20.5, 10}, {-9, 1, 1, -1, 5}, {90, 4, 1, 100, 4},
	} {
		if z, m, text := seen(c.x, c.y, c.n); z != c.z || m != c.m || text != words {
			t.Error(c, z, m, text)
		}
	}
}
`,
}

// The changes there are to make in the toy: those that its tests notice, and those they
// don't, of which the test itself holds its words against the changed ones.
const (
	toyNoticed = `
slope: slope = -2.5  →  slope = 2.5
slope: slope = -2.5  →  slope = -2.525
size: size = 3  →  size = 4
right: right side = 1  →  right side = 2
hidden: return side == right  →  return side != right
seen: z := 2*x + y/4  →  z := 2*x - y/4
seen: z := 2*x + y/4  →  z := 2/x + y/4
seen: z := 2*x + y/4  →  z := 2.02*x + y/4
seen: z := 2*x + y/4  →  z := 2*x + y*4
seen: z := 2*x + y/4  →  z := 2*x + y/4.04
seen: z -= slope  →  z += slope
seen: x < y && n <= 7  →  x > y && n <= 7
seen: x < y && n <= 7  →  x <= y && n <= 7
seen: x < y && n <= 7  →  x < y && n >= 7
seen: x < y && n <= 7  →  x < y && n < 7
seen: x < y && n <= 7  →  x < y && n <= 8
seen: z = math.Max(z, -y)  →  z = math.Min(z, -y)
seen: z = math.Max(z, -y)  →  z = math.Max(z, y)
seen: n++  →  n--
seen: min(z, 100)  →  max(z, 100)
seen: min(z, 100)  →  min(z, 101)
seen: n + len(room)  →  n - len(room)
`
	toyUnnoticed = `
words: words = "a + 2·b"  →  words = "a − 2·b"
words: words = "a + 2·b"  →  words = "a + 2.02·b"
words: words = "a + 2·b"  →  words = "a + 2/b"
unseen: z := 3*x - y  →  z := 3*x + y
unseen: z := 3*x - y  →  z := 3/x - y
unseen: z := 3*x - y  →  z := 3.03*x - y
unseen: z *= slope  →  z /= slope
unseen: x > y || n == 8  →  x < y || n == 8
unseen: x > y || n == 8  →  x >= y || n == 8
unseen: x > y || n == 8  →  x > y || n != 8
unseen: x > y || n == 8  →  x > y || n == 9
unseen: z = max(0, z)  →  z = min(0, z)
unseen: z = max(0, z)  →  z = max(0.01, z)
unseen: n--  →  n++
unseen: how("−ln(½) − max(0, x_1,2/1.5)")  →  how("ln(½) − max(0, x_1,2/1.5)")
unseen: how("−ln(½) − max(0, x_1,2/1.5)")  →  how("−ln(0.505) − max(0, x_1,2/1.5)")
unseen: how("−ln(½) − max(0, x_1,2/1.5)")  →  how("−ln(½) + max(0, x_1,2/1.5)")
unseen: how("−ln(½) − max(0, x_1,2/1.5)")  →  how("−ln(½) − min(0, x_1,2/1.5)")
unseen: how("−ln(½) − max(0, x_1,2/1.5)")  →  how("−ln(½) − max(0.01, x_1,2/1.5)")
unseen: how("−ln(½) − max(0, x_1,2/1.5)")  →  how("−ln(½) − max(0, x_1,2·1.5)")
unseen: how("−ln(½) − max(0, x_1,2/1.5)")  →  how("−ln(½) − max(0, x_1,2/1.515)")
`
)

func TestToy(t *testing.T) {
	root := t.TempDir()
	for name, text := range toy {
		if err := os.WriteFile(filepath.Join(root, name), []byte(text), 0o600); err != nil {
			t.Fatal(err)
		}
	}
	tree, err := load(root, ".")
	if err != nil {
		t.Fatal(err)
	}
	f := find(tree, "")
	c, err := open(f, t.TempDir(), f.mutants)
	if err != nil {
		t.Fatal(err)
	}
	noticed, unnoticed := "\n", "\n"
	for _, m := range f.mutants {
		key := strings.TrimPrefix(m.key(), "toy.go ") + "\n"
		by, err := c.try(m)
		switch {
		case err != nil:
			t.Fatal(err)
		case by == "":
			unnoticed += key
		default:
			noticed += key
		}
	}
	if diff := cmp.Diff(toyNoticed, noticed); diff != "" {
		t.Error("noticed:", diff)
	}
	if diff := cmp.Diff(toyUnnoticed, unnoticed); diff != "" {
		t.Error("not noticed:", diff)
	}
}

// TestVerdict asks that a mutant is complained of if no test notices it and nothing
// excuses it, and if one does and something does.
func TestVerdict(t *testing.T) {
	for _, c := range []struct{ noticed, excuse, what, complaint string }{
		{"", "", "not noticed", "no test notices"},
		{"", "a short cut", "excused", ""},
		{"TestX", "", "noticed", ""},
		{"TestX", "a short cut", "noticed", "TestX notices what is excused as: a short cut"},
	} {
		if what, complaint := verdict(c.noticed, c.excuse); what != c.what || complaint != c.complaint {
			t.Errorf("%+v: %q, %q", c, what, complaint)
		}
	}
}

// TestExcuses reads lists, good and bad.
func TestExcuses(t *testing.T) {
	got, err := excused("# one\n# reason\nf a: x  →  y\nf b: x  →  y\n\n# another\nf c: x  →  y\n")
	if diff := cmp.Diff(map[string]string{"f a: x  →  y": "one reason", "f b: x  →  y": "one reason", "f c: x  →  y": "another"}, got); err != nil || diff != "" {
		t.Error(err, diff)
	}
	for _, bad := range []string{"f a: x  →  y", "#\nf a: x  →  y", "# one\nf a: x  →  y\n# two\nf b: x  →  y", "# one\nf a: x  →  y\nf a: x  →  y", "# one\n\nf a: x  →  y"} {
		if list, err := excused(bad); err == nil {
			t.Errorf("%q is read as %v", bad, list)
		}
	}
}
