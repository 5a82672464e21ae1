package quantity

import (
	"strings"
	"testing"
)

// What a refusal offers must be read, two offers as two values.
func TestReadingsAreRead(t *testing.T) {
	offers := 0
	for _, row := range rejected {
		seen := map[float64]bool{}
		for _, reading := range row.readings {
			v, err := Parse(reading, row.unit)
			if err != nil || seen[v] {
				t.Errorf("%q in %q offers %q, which gives %v, %v", row.text, row.unit, reading, v, err)
			}
			seen[v] = true
			offers++
		}
	}
	if offers < 20 {
		t.Errorf("only %d offers were tried", offers)
	}
}

// The promise is 120 rows at least, each of them once.
func TestRowsAreManyAndDistinct(t *testing.T) {
	type key struct {
		text string
		unit Unit
	}
	seen := map[key]bool{}
	for _, row := range accepted {
		seen[key{row.text, row.unit}] = true
	}
	for _, row := range rejected {
		seen[key{row.text, row.unit}] = true
	}
	if len(seen) != len(accepted)+len(rejected) || len(seen) < 120 {
		t.Errorf("%d distinct rows of %d", len(seen), len(accepted)+len(rejected))
	}
}

// Every example that an error gives must itself be read.
func TestExamplesAreRead(t *testing.T) {
	for _, s := range specs {
		for _, example := range strings.Split(s.example, " or ") {
			if _, err := Parse(example, s.unit); err != nil {
				t.Errorf("example %q for %q: %v", example, s.unit, err)
			}
		}
	}
}

func TestUnlistedUnitTakesNoPrefix(t *testing.T) {
	if v, err := Parse("7 W/m³", "W/m³"); v != 7 || err != nil {
		t.Errorf("got %v, %v", v, err)
	}
	if v, err := Parse("7 k", "W/m³"); err == nil {
		t.Errorf("a prefix was read: %v", v)
	}
}

func FuzzParse(f *testing.F) {
	for _, row := range accepted {
		f.Add(row.text, string(row.unit))
	}
	for _, row := range rejected {
		f.Add(row.text, string(row.unit))
	}
	f.Fuzz(func(t *testing.T, text, unit string) {
		v, err := Parse(text, Unit(unit))
		switch {
		case err != nil && err.Error() == "":
			t.Error("an error without words")
		case err == nil && !finite(v):
			t.Errorf("read as %v", v)
		}
	})
}
