package mutants

import (
	"context"
	"errors"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"regexp"
	"slices"
	"strconv"
	"strings"
	"time"
)

// binary is a package's tests, built.
type binary struct {
	path, dir string // of the program, and the folder to run it in
	names     []string
	took      map[string]time.Duration // by test, of the tree as it is
	quiet     []string                 // arguments that keep failures out of the tree
}

// enough is how long a test may take, at least and as a multiple of what it takes in
// the tree as it is, before it counts as hung.
const enough, multiple = 20 * time.Second, 30

// memory is the address space in KiB that a mutant may fill: some never stop.
const memory = 6 << 20

// command runs tests as a mutant, 0 for none.
func (b *binary) command(ctx context.Context, id int, args ...string) *exec.Cmd {
	limited := []string{"-c", fmt.Sprintf(`ulimit -v %d; exec "$0" "$@"`, memory), b.path, "-test.failfast", "-test.timeout=0"}
	cmd := exec.CommandContext(ctx, "sh", slices.Concat(limited, b.quiet, args)...)
	cmd.Dir = b.dir
	cmd.Env = append(os.Environ(), "MUTANT="+strconv.Itoa(id), "GOMAXPROCS=1", "GOGC=400")
	return cmd
}

var passed = regexp.MustCompile(`(?m)^--- PASS: (\S+) \(([0-9.]+s)\)`)

// measure runs all tests of the tree as it is, which must pass, and orders them by
// the time they take.
func (b *binary) measure() error {
	out, err := b.command(context.Background(), 0, "-test.v").CombinedOutput()
	if err != nil {
		return fmt.Errorf("the tests fail with no mutant chosen: %w\n%s", err, tail(string(out)))
	}
	b.took = map[string]time.Duration{}
	for _, found := range passed.FindAllStringSubmatch(string(out), -1) {
		d, err := time.ParseDuration(found[2])
		if err != nil {
			return err
		}
		b.names = append(b.names, found[1])
		b.took[found[1]] = d
	}
	slices.SortStableFunc(b.names, func(a, c string) int { return int(b.took[a] - b.took[c]) })
	if len(b.names) == 0 {
		return errors.New("no test was run")
	}
	return nil
}

// stages divides the tests into those that are quick and run at once, and the others
// one by one.
func (b *binary) stages() (all [][]string) {
	const quick = 100 * time.Millisecond
	n := slices.IndexFunc(b.names, func(name string) bool { return b.took[name] > quick })
	if n < 0 {
		return [][]string{b.names}
	}
	if n > 0 {
		all = append(all, b.names[:n])
	}
	for _, name := range b.names[n:] {
		all = append(all, []string{name})
	}
	return all
}

var failed = regexp.MustCompile(`(?m)^--- FAIL: (\S+)`)

// notices runs the tests as a mutant until one fails, and returns what noticed it, ""
// if nothing did.
func (b *binary) notices(id int) (string, error) {
	for _, names := range b.stages() {
		limit := enough
		for _, name := range names {
			limit += multiple * b.took[name]
		}
		ctx, cancel := context.WithTimeout(context.Background(), limit)
		out, err := b.command(ctx, id, "-test.run=^("+strings.Join(names, "|")+")$").CombinedOutput()
		hung := ctx.Err() != nil
		cancel()
		var exit *exec.ExitError
		switch {
		case err == nil:
			continue
		case hung:
			return "a test that does not end", nil
		case !errors.As(err, &exit):
			return "", err
		}
		if found := failed.FindStringSubmatch(string(out)); found != nil {
			return found[1], nil
		}
		return "a program that stops", nil
	}
	return "", nil
}

// court knows which tests can notice what.
type court struct {
	f        *finder
	dir      string
	binaries map[*source]*binary
}

// open builds the tests that can notice the mutants given.
func open(f *finder, dir string, mutants []*mutant) (*court, error) {
	c := &court{f, dir, map[*source]*binary{}}
	o, err := f.switched(dir)
	if err != nil {
		return nil, err
	}
	for _, m := range mutants {
		for _, s := range f.rely(m.of.of) {
			if c.binaries[s] != nil {
				continue
			}
			b, err := build(o, s, f.root, filepath.Join(dir, "all"))
			if err != nil {
				return nil, err
			}
			if err := b.measure(); err != nil {
				return nil, fmt.Errorf("%s: %w", s.path, err)
			}
			c.binaries[s] = b
		}
	}
	return c, nil
}

func build(o *overlay, s *source, root, name string) (*binary, error) {
	b := &binary{path: name + "-" + filepath.Base(s.path) + ".test", dir: s.dir}
	if s.imports("pgregory.net/rapid") {
		b.quiet = []string{"-rapid.nofailfile", "-rapid.seed=1"} // the same each time
	}
	return b, o.test(s, root, b.path)
}

// try lets the tests of a mutant's own package look at it, then those of the packages
// that rely on it.
func (c *court) try(m *mutant) (noticed string, err error) {
	for _, s := range c.f.rely(m.of.of) {
		b := c.binaries[s]
		if m.alone {
			if b, err = c.alone(m, s, b); err != nil {
				return "", err
			}
		}
		if noticed, err = b.notices(m.id); noticed != "" || err != nil {
			return noticed, err
		}
	}
	return "", nil
}

// alone builds a mutant that can't be switched. One that the compiler refuses is
// noticed all right.
func (c *court) alone(m *mutant, s *source, like *binary) (*binary, error) {
	dir, err := os.MkdirTemp(c.dir, "alone")
	if err != nil {
		return nil, err
	}
	o, err := alone(m, dir)
	if err != nil {
		return nil, err
	}
	b, err := build(o, s, c.f.root, filepath.Join(dir, "one"))
	b.names, b.took = like.names, like.took
	return b, err
}
