package web

import (
	"strings"
	"testing"

	"lossbook/budget"
)

// TestDoubts asks for a word about a forgotten prefix, and for none about any entry
// of the samples.
func TestDoubts(t *testing.T) {
	for _, row := range []struct{ path, text, want string }{
		{"switch.q_g", "22", "unusually large"},
		{"switch.q_g", "22n", ""},
		{"switch.q_g", "22f", "unusually small"},
		{"switch.q_g", "-22", "unusually large"},
		{"switch.q_g", "0", ""},
		{"switch.q_g", "22 x", ""}, // an error, said as such
		{"switch.q_g", "", ""},
		{"output_capacitor.esr", "4k7", "unusually large"},
		{"inductor.inductance", "6.8", "unusually large"},
		{"frequency", "250", "unusually small"},
		{"inductor.sat_drop", "0.3", ""},
	} {
		f, ok := budget.FieldAt(row.path)
		if !ok {
			t.Fatalf("no field %s", row.path)
		}
		if got := doubtful(f, row.text); (row.want == "") != (got == "") || !strings.Contains(got, row.want) {
			t.Errorf("%s %q: %q, want %q", row.path, row.text, got, row.want)
		}
	}
	looked := 0
	for _, name := range []string{"frost-mast-boost", "radar-hut-buck", "fish-ladder-inverting"} {
		d := sample(t, name)
		for path, text := range draftOf(d) {
			f, ok := budget.FieldAt(path)
			if !ok || f.Kind != budget.Number {
				continue
			}
			looked++
			if got := doubtful(f, text); got != "" {
				t.Errorf("%s: %s %q: %s", d.Name, path, text, got)
			}
		}
	}
	if looked < 150 {
		t.Errorf("only %d entries looked at", looked)
	}
}
