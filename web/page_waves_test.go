package web

import (
	"encoding/json"
	"math"
	"slices"
	"strconv"
	"strings"
	"testing"

	"golang.org/x/net/html"

	"lossbook/assets"
	"lossbook/store"
)

// wavesOf reads what a page draws as waveforms.
func wavesOf(p page) assets.Waves {
	p.t.Helper()
	charts := p.all(func(n *html.Node) bool { return n.Data == "loss-chart" && attr(n, "kind") == "waves" })
	if len(charts) != 1 {
		p.t.Fatalf("%d drawings of waveforms", len(charts))
	}
	var w assets.Waves
	if err := json.Unmarshal([]byte(attr(charts[0], "data")), &w); err != nil {
		p.t.Fatal(err)
	}
	return w
}

// labelled reads what a level is labelled with.
func labelled(t *testing.T, level assets.Level, name string) float64 {
	t.Helper()
	v, err := strconv.ParseFloat(strings.ReplaceAll(level.Text, minus, "-"), 64)
	if err != nil || level.Name != name {
		t.Fatalf("%+v is not the %s", level, name)
	}
	return v
}

// What is drawn and labelled is what the budget says, on every page that draws it.
func TestWavesAreTheBudgets(t *testing.T) {
	s := seeded(t)
	q := s.point(12)
	still := func(rms float64) []float64 { return []float64{rms, 0} }
	want := [][]float64{{q.InductorCurrent.RMS, q.InductorCurrent.Mean}, {q.SwitchRMS, math.NaN()}, {q.RectifierRMS, q.RectifierMean},
		still(q.InputCapacitorRMS), still(q.OutputCapacitorRMS), {math.NaN(), math.NaN()}}
	for _, path := range []string{"/designs/1", "/designs/1/revisions/1", s.shared("")} {
		w := wavesOf(s.open(200, path))
		if len(w.Rows) != 6 || w.Period != 4 || w.X.Unit != "µs" || len(w.Intervals) != 2 || math.Abs(w.Intervals[0].To-q.OnTime*1e6) > 1e-6 || w.Intervals[1].To != 4 {
			t.Fatalf("%s: %+v", path, w)
		}
		for i, row := range w.Rows {
			square, mean := 0.0, 0.0
			for k := 1; k < len(row.Points); k++ {
				a, b, dt := row.Points[k-1][1], row.Points[k][1], row.Points[k][0]-row.Points[k-1][0]
				square, mean = square+dt*(a*a+a*b+b*b)/3/w.Period, mean+dt*(a+b)/2/w.Period
			}
			for k, said := range []float64{math.Sqrt(square), mean} {
				name := []string{"rms", "mean"}[k]
				figure := labelled(t, row.Levels[k+1], name)
				near := 2e-4 * math.Max(1, math.Abs(row.Levels[0].Value))
				if math.Abs(figure-said) > near || !math.IsNaN(want[i][k]) && math.Abs(figure-want[i][k]) > near {
					t.Errorf("%s: %s of %s: labelled %g, drawn %g, the budget has %g", path, name, row.Name, figure, said, want[i][k])
				}
			}
		}
		if peak, valley := w.Rows[0].Levels[0].Value, w.Rows[0].Levels[3].Value; math.Abs(peak-q.InductorCurrent.Max) > 1e-5 || math.Abs(valley-q.InductorCurrent.Min) > 1e-5 {
			t.Errorf("%s: from %g to %g A", path, valley, peak)
		}
	}
}

// The table beneath holds each bend, and the figures.
func TestWavesTable(t *testing.T) {
	p := seeded(t).open(200, "/designs/1?load=5")
	if w := wavesOf(p); len(w.Intervals) != 3 || w.Intervals[2].Name != "t3" {
		t.Errorf("intervals %+v", w.Intervals)
	}
	if got := words(p.all(withClass("waves"))[0]); !strings.Contains(got, "discontinuous conduction at 12 V in, 100 mA (5 %)") || !strings.Contains(got, "t3: no inductor current flows.") {
		t.Errorf("said: %s", got)
	}
	for heading, want := range map[string][]string{
		"0, t1 begins":   {"0", "0", "0", "212.2", "−104.5", "0"},
		"4.000, t3 ends": {"0", "0", "0", "212.2", "−104.5", "12.00"},
	} {
		if got := p.row(heading); !slices.Equal(got, want) {
			t.Errorf("%s: %q, want %q", heading, got, want)
		}
	}
	if got := p.row("mean"); len(got) != 6 || got[0] != "212.2" || got[2] != "104.5" || got[3] != "0" || got[4] != "0" {
		t.Errorf("mean: %q", got)
	}
}

// A revision whose figures are not those of straight waveforms is not drawn as if they
// were.
func TestWavesOfOtherFigures(t *testing.T) {
	s := seeded(t)
	first, err := s.store.Revision(t.Context(), 1, 1)
	if err != nil {
		t.Fatal(err)
	}
	points, _, err := savedResults(first)
	if err != nil {
		t.Fatal(err)
	}
	points[15].Figures.SwitchRMS *= 1.01
	var kept store.Revision = s.another("0", points)
	p := s.open(200, "/designs/1/revisions/"+strconv.Itoa(kept.Number))
	if got := words(p.all(withClass("waves"))[0]); !strings.Contains(got, "No waveforms at this point: the figures kept here are not those of the waveforms") {
		t.Errorf("said: %s", got)
	}
	if len(p.all(withClass("flow"))) != 1 || !p.has("flow-numbers") {
		t.Error("the strip, whose figures stand, is not drawn")
	}
	wavesOf(s.open(200, "/designs/1/revisions/"+strconv.Itoa(kept.Number)+"?load=50"))
}
