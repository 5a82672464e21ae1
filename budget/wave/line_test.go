package wave_test

import (
	"math"
	"slices"
	"testing"

	"lossbook/budget/wave"
	"pgregory.net/rapid"
)

func TestLineCorners(t *testing.T) {
	resting := wave.Triangle{Max: 4, D1: 0.25, D2: 0.5}
	flowing := wave.Triangle{Min: -1, Max: 3, D1: 0.25, D2: 0.75}
	count := 0
	for _, row := range []struct {
		name string
		got  wave.Line
		want wave.Line
	}{
		{"resting", resting.Course(), wave.Line{{0, 0}, {0.25, 4}, {0.75, 0}, {1, 0}}},
		{"resting, rising", resting.Rising(), wave.Line{{0, 0}, {0.25, 4}, {0.25, 0}, {0.75, 0}, {1, 0}}},
		{"resting, falling", resting.Falling(), wave.Line{{0, 0}, {0.25, 0}, {0.25, 4}, {0.75, 0}, {1, 0}}},
		{"resting, levels", resting.Levels(7, 8, 9), wave.Line{{0, 7}, {0.25, 7}, {0.25, 8}, {0.75, 8}, {0.75, 9}, {1, 9}}},
		{"flowing", flowing.Course(), wave.Line{{0, -1}, {0.25, 3}, {1, -1}}},
		{"flowing, rising", flowing.Rising(), wave.Line{{0, -1}, {0.25, 3}, {0.25, 0}, {1, 0}}},
		{"flowing, falling", flowing.Falling(), wave.Line{{0, 0}, {0.25, 0}, {0.25, 3}, {1, -1}}},
		{"flowing, levels", flowing.Levels(0, 8, 9), wave.Line{{0, 0}, {0.25, 0}, {0.25, 8}, {1, 8}}},
		{"nothing flows", wave.Triangle{}.Course(), wave.Line{{0, 0}, {1, 0}}},
		{"nothing flows, levels", wave.Triangle{}.Levels(0, 8, 9), wave.Line{{0, 9}, {1, 9}}},
		{"a rounding too long", wave.Triangle{Max: 4, D1: 0.25, D2: 0.75 + 1e-13}.Course(), wave.Line{{0, 0}, {0.25, 4}, {1, 0}}},
		{"less its level", flowing.Course().Less(1, -1), wave.Line{{0, 2}, {0.25, -2}, {1, 2}}},
		{"less nothing", wave.Line{{0, 0}, {1, 2}}.Less(0, -1), wave.Line{{0, 0}, {1, -2}}},
	} {
		if count++; !slices.Equal(row.got, row.want) {
			t.Errorf("%s: %v, want %v", row.name, row.got, row.want)
		}
	}
	if count != 13 {
		t.Errorf("%d lines compared", count)
	}
	if first := (wave.Line{{0, 0}}).Less(0, -1)[0].Value; math.Signbit(first) {
		t.Error("0 became −0")
	}
}

func TestLineFigures(t *testing.T) {
	l := wave.Line{{0, 2}, {0.5, -4}, {0.5, 1}, {1, 1}}
	hold(t, []row{
		{"mean, shifted", l.Less(-3, 1).Mean(), 3, exact, "by hand"},
		{"mean square", l.MeanSquare(), 0.5*(4-8+16)/3 + 0.5, exact, "by hand"},
		{"peak", l.Peak(), -4, 0, "the farthest from 0"},
		{"peak of equals", wave.Line{{0, -2}, {1, 2 * (1 - 1e-12)}}.Peak(), 2, 1e-11, "the positive one"},
		{"peak of a near miss", wave.Line{{0, -2}, {1, 2 * (1 - 1e-8)}}.Peak(), -2, 0, "the farthest from 0"},
	})
	if mean := l.Mean(); mean != 0 {
		t.Errorf("mean %g, want 0", mean)
	}
	if (wave.Line{}).Peak() != 0 || (wave.Line{}).Mean() != 0 || (wave.Line{}).MeanSquare() != 0 {
		t.Error("a line without corners has figures")
	}
}

// TestLinesAreTheShares compares lines, added up piece by piece, with the closed forms
// of the currents they draw.
func TestLinesAreTheShares(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		d1 := rapid.Float64Range(0, 1).Draw(t, "d1")
		w := wave.Triangle{Min: rapid.Float64Range(-5, 5).Draw(t, "min"), D1: d1, D2: 1 - d1}
		w.Max = w.Min + rapid.Float64Range(0, 20).Draw(t, "swing")
		if rapid.Bool().Draw(t, "rests") {
			w.Min, w.Max, w.D2 = 0, math.Abs(w.Max), rapid.Float64Range(0, 1-d1).Draw(t, "d2")
		}
		for name, pair := range map[string]struct {
			line  wave.Line
			share wave.Share
		}{"course": {w.Course(), w.Whole()}, "rising": {w.Rising(), w.Rise()}, "falling": {w.Falling(), w.Fall()}} {
			near := 1e-13 * math.Max(1, w.Max*w.Max+w.Min*w.Min)
			if off := math.Abs(pair.line.Mean() - pair.share.Mean()); off > near {
				t.Fatalf("%s of %+v: mean off by %g", name, w, off)
			}
			if off := math.Abs(pair.line.MeanSquare() - pair.share.MeanSquare()); off > near {
				t.Fatalf("%s of %+v: mean square off by %g", name, w, off)
			}
			ripple := pair.line.Less(pair.line.Mean(), 1)
			if off := math.Abs(ripple.MeanSquare() - pair.share.RippleSquare()); off > 10*near || math.Abs(ripple.Mean()) > near {
				t.Fatalf("%s of %+v: ripple off by %g, its mean is %g", name, w, off, ripple.Mean())
			}
			if last := pair.line[len(pair.line)-1]; pair.line[0].At != 0 || last.At != 1 {
				t.Fatalf("%s of %+v runs from %g to %g", name, w, pair.line[0].At, last.At)
			}
		}
	})
}
