package web_test

import (
	"encoding/json"
	"os"
	"os/exec"
	"path/filepath"
	"regexp"
	"slices"
	"strings"
	"testing"
)

var moduleRules = []rule{
	{"every module has a reason", reasoned, 10, []sketch{
		{"go.mod": "require example.org/m v1.0.0", "web/x.go": "package web\nimport _ \"example.org/m/p\"", "DEVELOPERS.md": ""},
		{"go.mod": "require example.org/m v1.0.0\ntool example.org/m/cmd/x", "DEVELOPERS.md": ""},
		{"go.mod": "", "DEVELOPERS.md": "| `example.org/m` | gone |"},
	}},
}

var (
	required = regexp.MustCompile(`(?m)^\s*(?:require )?([\w.-]+\.[\w./~-]+) (v\S+)`)
	tool     = regexp.MustCompile(`(?m)^\s*(?:tool )?([\w-]+\.[\w./-]+)$`)
	reason   = regexp.MustCompile("(?m)^\\| `([\\w.-]+\\.[\\w.-]+/[\\w./-]+)` \\| \\S")
)

// reasoned compares the modules that the code imports, and the tools, with the
// table in DEVELOPERS.md.
func reasoned(r *repository) (v verdict) {
	gomod := r.find("go.mod")
	used := tool.FindAllString(gomod, -1)
	for _, f := range r.files {
		if f.tree != nil {
			used = append(used, importsOf(f)...)
		}
	}
	var reasons []string
	for _, row := range reason.FindAllStringSubmatch(r.find("DEVELOPERS.md"), -1) {
		reasons = append(reasons, row[1])
	}
	for _, m := range required.FindAllStringSubmatch(gomod, -1) {
		direct := slices.ContainsFunc(used, func(name string) bool { return within(m[1], strings.TrimSpace(strings.TrimPrefix(name, "tool "))) })
		if !direct {
			continue
		}
		v.checked++
		if i := slices.Index(reasons, m[1]); i < 0 {
			v.add("go.mod requires", m[1], "- DEVELOPERS.md has no row that says why")
		} else {
			reasons = slices.Delete(reasons, i, i+1)
		}
	}
	for _, left := range reasons {
		v.add("DEVELOPERS.md gives a reason for", left, "- which nothing here imports")
	}
	return v
}

// TestLibcPin keeps the C library at the version that the database was made and
// tested with: its authors promise nothing for another.
func TestLibcPin(t *testing.T) {
	const libc = "modernc.org/libc"
	wanted, err := os.ReadFile(moduleOf(t, "modernc.org/sqlite").GoMod)
	if err != nil {
		t.Fatal(err)
	}
	for _, m := range required.FindAllStringSubmatch(string(wanted), -1) {
		if m[1] != libc {
			continue
		}
		if got := moduleOf(t, libc).Version; got != m[2] {
			t.Errorf("%s is at %s, the database's own go.mod has %s", libc, got, m[2])
		}
		return
	}
	t.Error("the database's go.mod names no libc")
}

type goModule struct{ Version, GoMod string }

func moduleOf(t *testing.T, path string) (m goModule) {
	t.Helper()
	if err := json.Unmarshal(run(t, moduleRoot(t), "go", "list", "-m", "-json", path), &m); err != nil {
		t.Fatal(err)
	}
	return m
}

func run(t *testing.T, folder, name string, args ...string) []byte {
	t.Helper()
	command := exec.Command(name, args...)
	command.Dir = folder
	var said strings.Builder
	command.Stderr = &said
	out, err := command.Output()
	if err != nil {
		t.Fatalf("%s %s: %v\n%s", name, strings.Join(args, " "), err, said.String())
	}
	return out
}

// TestTemplatesAreFresh generates the pages' code once more, in a copy, and wants
// the very bytes that are kept. What is generated depends on the folder, so the
// copy has the module's shape.
func TestTemplatesAreFresh(t *testing.T) {
	root, copied := moduleRoot(t), t.TempDir()
	templates, err := filepath.Glob(filepath.Join(root, "web", "view", "*.templ"))
	if err != nil || len(templates) < 4 {
		t.Fatalf("%d templates: %v", len(templates), err)
	}
	for _, name := range append(templates, filepath.Join(root, "go.mod")) {
		copyFile(t, name, filepath.Join(copied, strings.TrimPrefix(name, root)))
	}
	generator := strings.TrimSpace(string(run(t, root, "go", "tool", "-n", "templ")))
	run(t, copied, generator, "generate")
	for _, name := range templates {
		path := strings.TrimSuffix(strings.TrimPrefix(name, root), ".templ") + "_templ.go"
		fresh, err := os.ReadFile(filepath.Join(copied, path))
		if err != nil {
			t.Fatal(err)
		}
		if kept, err := os.ReadFile(filepath.Join(root, path)); err != nil || string(kept) != string(fresh) {
			t.Errorf("%s is not what its template generates: run go tool templ generate at the root (%v)", path, err)
		}
	}
	kept, err := filepath.Glob(filepath.Join(root, "web", "view", "*_templ.go"))
	if err != nil || len(kept) != len(templates) {
		t.Errorf("%d templates and %d generated files: %v", len(templates), len(kept), err)
	}
}

func copyFile(t *testing.T, from, to string) {
	t.Helper()
	text, err := os.ReadFile(from)
	if err != nil {
		t.Fatal(err)
	}
	if err := os.MkdirAll(filepath.Dir(to), 0o700); err != nil {
		t.Fatal(err)
	}
	if err := os.WriteFile(to, text, 0o600); err != nil {
		t.Fatal(err)
	}
}
