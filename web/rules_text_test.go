package web_test

import (
	"fmt"
	"go/format"
	"path"
	"regexp"
	"slices"
	"strings"
)

var textRules = []rule{
	{"Go files are formatted", formatted, 80, []sketch{{"web/x.go": "package web\nvar  x=1\n"}}},
	{"files are short enough to read", short, 100, []sketch{
		{"web/x.go": "package web\n" + strings.Repeat("// more\n", longest)},
		{"assets/x.css": strings.Repeat("p {}\n", longest+1)},
	}},
	{"pages hold text, not raw HTML", escaped, 30, []sketch{
		{"web/view/x.templ": "@templ." + "Raw(name)"},
		{"web/x.go": "package web\nvar x = template." + "HTML(name)"},
		{"assets/x.js": "cell.inner" + "HTML = name"},
		{"assets/x.js": "ev" + "al(text)"},
	}},
	{"nothing is left to be done", finished, 100, []sketch{
		{"web/x.go": "package web\n// TO" + "DO: more"},
		{"README.md": "coming so" + "on"},
	}},
	{"the project speaks of itself alone", aboutItself, 100, []sketch{
		{"README.md": "see ../sha" + "red/notes"}, {"web/x.go": "package web\n// of /wo" + "rk/main"},
		{"web/x.go": "package web\n// asked for in iss" + "ue 2"}, {"testdata/x.md": "after design-ba" + "sis.md"},
	}},
}

// longest is the lines a file may have.
const longest = 450

// texts calls look for each file of ours that people read.
func (r *repository) texts(look func(f file)) {
	kinds := strings.Fields(".go .templ .js .css .md .sql .svg .mod .json .txt .html")
	for _, f := range r.files {
		if f.foreign() || f.generated() || !slices.Contains(kinds, path.Ext(f.path)) && !strings.HasPrefix(f.path, ".") {
			continue
		}
		look(f)
	}
}

func formatted(r *repository) (v verdict) {
	for _, f := range r.files {
		if f.tree == nil {
			continue
		}
		v.checked++
		text, err := format.Source([]byte(f.text))
		if err != nil || string(text) != f.text {
			v.add(f.path, "is not as gofmt writes it")
		}
	}
	return v
}

func short(r *repository) (v verdict) {
	r.texts(func(f file) {
		if !slices.Contains([]string{".go", ".templ", ".js", ".css", ".sql"}, path.Ext(f.path)) {
			return
		}
		v.checked++
		if lines := strings.Count(f.text, "\n"); lines > longest {
			v.add(f.path, fmt.Sprintf("has %d lines: divide it", lines))
		}
	})
	return v
}

// raw matches the ways round a template's or a browser's escaping.
var raw = regexp.MustCompile(`\btempl\.Raw\b|\btemplate\.(HTML|JS|CSS|URL)\(|\b(inner|outer)HTML\b\s*[+=]|insertAdjacent[H]TML|document\.wri[t]e|\beval\(|new Function\(`)

func escaped(r *repository) (v verdict) {
	r.texts(func(f file) {
		if f.test() || !slices.Contains([]string{".go", ".templ", ".js"}, path.Ext(f.path)) {
			return
		}
		v.checked++
		if found := raw.FindString(f.text); found != "" {
			v.add(f.path, "has", found, "- which puts text on a page unescaped")
		}
	})
	return v
}

var unfinished = regexp.MustCompile(`\b(TO[D]O|FI[X]ME|XX[X]|HA[C]K)\b|(?i:not yet impl[e]mented|coming so[o]n|place[h]older text|lorem ips[u]m)`)

func finished(r *repository) (v verdict) {
	r.texts(func(f file) {
		v.checked++
		if found := unfinished.FindString(f.text); found != "" {
			v.add(f.path, "has", found, "- finish it, or leave it out")
		}
	})
	return v
}

// elsewhere matches what only somebody at one workplace would understand.
var elsewhere = regexp.MustCompile(`\.\./sha[r]ed|\bsha[r]ed/|/wo[r]k/|/ro[o]t/|(?i:\biss[u]e #?\d|\bpull requ[e]st|\bdesign[- ]ba[s]is|\b(hou[s]e|contra[c]t|promi[s]es|lo[o]k|sta[c]k)\.md|\bclau[d]e\b|\bchat[g]pt|\bLL[M]\b|\bcoding ag[e]nt)`)

func aboutItself(r *repository) (v verdict) {
	r.texts(func(f file) {
		v.checked++
		if found := elsewhere.FindString(f.text); found != "" {
			v.add(f.path, "has", found, "- which means nothing to a reader of the project alone")
		}
	})
	return v
}
