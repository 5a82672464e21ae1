package web

import (
	"net/url"
	"strings"
	"testing"
)

func TestReadLineup(t *testing.T) {
	for _, row := range []struct{ query, wrong string }{
		{"r=1.1&r=1.2", ""},
		{"r=1.1&r=1.1&r=2.9&r=3.4&r=1.2&base=5&under=2&vin=highest&load=50&all=1&scale=lin", ""},
		{"r=1.1&r=1.2&vin=13V8", ""},
		{"r=1.1&r=1.2&vin=13.8+V", ""},
		{"", "0 revisions"},
		{"r=1.1", "1 revision:"},
		{"r=1.1&r=1.2&r=1.3&r=1.4&r=1.5&r=1.6", "6 revisions"},
		{"r=1.1&r=1", "“1” names no"},
		{"r=1.1&r=1.0", "“1.0” names no"},
		{"r=1.1&r=0.1", "“0.1” names no"},
		{"r=1.1&r=+1.2", "names no"},
		{"r=1.1&r=99999999999999999999.1", "names no"},
		{"r=1.1&r=1.1.1", "names no"},
		{"r=1.1&r=1.2&base=3", "base must"},
		{"r=1.1&r=1.2&base=0", "base must"},
		{"r=1.1&r=1.2&base=x", "base must"},
		{"r=1.1&r=1.2&under=3", "under must"},
		{"r=1.1&r=1.2&vin=-3", "vin must"},
		{"r=1.1&r=1.2&vin=tall", "vin "},
		{"r=1.1&r=1.2&load=40", "load is not"},
	} {
		q, err := url.ParseQuery(row.query)
		if err != nil {
			t.Fatal(err)
		}
		l, wrong := readLineup(q)
		var told []string
		for _, e := range wrong {
			told = append(told, e.Path+" "+e.Message)
		}
		got := strings.Join(told, "; ")
		if (got == "") != (row.wrong == "") || !strings.Contains(got, row.wrong) {
			t.Errorf("%s: %q, want %q", row.query, got, row.wrong)
		}
		if row.wrong != "" {
			continue
		}
		again, err := url.ParseQuery(strings.TrimPrefix(l.query(), "?"))
		if err != nil {
			t.Fatal(err)
		}
		if same, wrong := readLineup(again); len(wrong) > 0 || same.query() != l.query() {
			t.Errorf("%s is written as %s and read as %s", row.query, l.query(), same.query())
		}
	}
}

func TestLeavingASideOut(t *testing.T) {
	l := lineup{pins: []pin{{1, 1}, {1, 2}, {2, 1}}, base: 2, under: 3}
	for i, want := range []string{
		"/compare?r=1.2&r=2.1&under=2", "/compare?r=1.1&r=2.1&under=2", "/compare?r=1.1&r=1.2&base=2",
	} {
		if got := l.without(i); got != want {
			t.Errorf("without %d: %s, want %s", i, got, want)
		}
	}
	if len(l.pins) != 3 || l.pins[0] != (pin{1, 1}) {
		t.Error("the lineup itself has changed")
	}
}
