package mutants

import (
	"encoding/json"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
)

// chosen is the package that a changed tree asks which of its mutants to be. The
// environment says it, since tests start before they read their flags.
const chosen = `package chosen

import (
	"cmp"
	"os"
	"strconv"
)

var mutant, _ = strconv.Atoi(os.Getenv("MUTANT"))

type number interface {
	~int | ~int8 | ~int16 | ~int32 | ~int64 | ~uint | ~uint8 | ~uint16 | ~uint32 | ~uint64 | ~float32 | ~float64
}

func Of[T any](id int, v, other T) T {
	if mutant == id {
		return other
	}
	return v
}

func Not(id int, v bool) bool { return v != (mutant == id) }

func Negation[T number](id int, a T) T {
	if mutant == id {
		return a
	}
	return -a
}

func Sum[T number](id int, a, b T) T {
	if mutant == id {
		return a - b
	}
	return a + b
}

func Difference[T number](id int, a, b T) T {
	if mutant == id {
		return a + b
	}
	return a - b
}

func Product[T number](id int, a, b T) T {
	if mutant == id {
		return a / b
	}
	return a * b
}

func Quotient[T number](id int, a, b T) T {
	if mutant == id {
		return a * b
	}
	return a / b
}

func Less[T cmp.Ordered](id int, a, b T) bool {
	switch mutant {
	case id:
		return a > b
	case id + 1:
		return a <= b
	}
	return a < b
}

func Greater[T cmp.Ordered](id int, a, b T) bool {
	switch mutant {
	case id:
		return a < b
	case id + 1:
		return a >= b
	}
	return a > b
}

func NotGreater[T cmp.Ordered](id int, a, b T) bool {
	switch mutant {
	case id:
		return a >= b
	case id + 1:
		return a < b
	}
	return a <= b
}

func NotLess[T cmp.Ordered](id int, a, b T) bool {
	switch mutant {
	case id:
		return a <= b
	case id + 1:
		return a > b
	}
	return a >= b
}
`

// overlay lays other texts over files of the tree, for the go command to build.
type overlay struct {
	dir   string
	paths map[string]string
}

func newOverlay(dir string) *overlay { return &overlay{dir, map[string]string{}} }

func (o *overlay) put(path, text string) error {
	beside := filepath.Join(o.dir, fmt.Sprintf("%d.go", len(o.paths)))
	o.paths[path] = beside
	return os.WriteFile(beside, []byte(text), 0o600)
}

// test builds a package's tests over the tree.
func (o *overlay) test(s *source, root, binary string) error {
	raw, err := json.Marshal(map[string]any{"Replace": o.paths})
	if err != nil {
		return err
	}
	list := filepath.Join(o.dir, "overlay.json")
	if err := os.WriteFile(list, raw, 0o600); err != nil {
		return err
	}
	cmd := exec.Command("go", "test", "-c", "-vet=off", "-overlay", list, "-o", binary, s.path)
	cmd.Dir = root
	if out, err := cmd.CombinedOutput(); err != nil {
		return fmt.Errorf("%s with its mutants does not build: %w\n%s", s.path, err, out)
	}
	return nil
}

// switched lays the tree with all mutants in it, of which it is one at a time.
func (f *finder) switched(dir string) (*overlay, error) {
	o := newOverlay(dir)
	if err := o.put(filepath.Join(f.root, "chosen", "chosen.go"), chosen); err != nil {
		return nil, err
	}
	for file, edits := range f.edits {
		head := f.offset(file.ast.Name.End())
		with := append([]edit{{at: head, end: head, text: fmt.Sprintf("; import %q", f.module+"/chosen"), closes: true}}, edits...)
		if err := o.put(file.full, apply(file.text, with)); err != nil {
			return nil, err
		}
	}
	return o, nil
}

// alone lays the tree with one mutant written into its text.
func alone(m *mutant, dir string) (*overlay, error) {
	o := newOverlay(dir)
	return o, o.put(m.of.full, apply(m.of.text, []edit{m.change}))
}

// tail is the end of what a program said.
func tail(text string) string {
	lines := strings.Split(strings.TrimSpace(text), "\n")
	return strings.Join(lines[max(0, len(lines)-20):], "\n")
}
