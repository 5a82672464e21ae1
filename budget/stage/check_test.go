package stage_test

import (
	"math"
	"testing"
)

// row is one line of a catalogue of figures: what the package gives, what a second
// way gives, how far apart they may be relative to it, and where the second comes
// from.
type row struct {
	name      string
	got, want float64
	tolerance float64
	source    string
}

const exact = 4e-15 // a few roundings

// hold compares every row of a catalogue.
func hold(t *testing.T, rows []row) {
	t.Helper()
	if len(rows) == 0 {
		t.Fatal("nothing to compare")
	}
	for _, r := range rows {
		if off := math.Abs(r.got - r.want); !(off <= r.tolerance*math.Abs(r.want)) {
			t.Errorf("%s: got %.12g, want %.12g by %s (off by %.2g)", r.name, r.got, r.want, r.source, off/math.Abs(r.want))
		}
	}
}
