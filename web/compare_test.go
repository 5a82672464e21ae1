package web

import (
	"math"
	"slices"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"lossbook/budget"
	"lossbook/web/view"
)

// powers draws the losses of a revision: none, tiny, usual and large ones.
var powers = rapid.SliceOfN(rapid.OneOf(rapid.Just(0.0), rapid.Float64Range(0, 1e-5), rapid.Float64Range(0, 3)), 6, 6)

// after draws the losses of the next revision: some are what they were.
func after(t *rapid.T, before []float64) []float64 {
	next := powers.Draw(t, "next")
	for i := range next {
		if rapid.Bool().Draw(t, "same") {
			next[i] = before[i]
		}
	}
	return next
}

// sideOf is a revision with those losses at every load, and nothing else to tell.
func sideOf(powers []float64) side {
	kinds := []Item{{Part: "switch", Kind: "conduction"}, {Part: "switch", Kind: "turn_on"}, {Part: "rectifier", Kind: "conduction"},
		{Part: "inductor", Kind: "core"}, {Part: "layout", Kind: "shunt"}, {Part: "layout", Kind: "shunt"}}
	f := Figures{Items: kinds}
	for i, p := range powers {
		f.Items[i].Power = p
		f.Loss += p
	}
	f.Efficiency, f.Temperatures = 10/(10+f.Loss), Temperatures{25 + f.Loss, 30, 40}
	s := side{design: &budget.Design{}, entries: Draft{}}
	for range budget.LoadGrid() {
		s.points = append(s.points, Point{State: "settled", Figures: &f})
	}
	return s
}

// between lays sides beside each other without an address.
func between(base int, sides ...side) *comparison {
	c := &comparison{lineup: lineup{base: base, pins: make([]pin, len(sides))}, sides: sides, place: place{under: make([]conditions, len(sides))}}
	c.differ()
	return c
}

func TestExchangingSidesChangesSigns(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		before := powers.Draw(t, "before")
		a, b := sideOf(before), sideOf(after(t, before))
		there, back := between(1, a, b), between(1, b, a)
		for i, r := range there.losses[0].items {
			q := back.losses[0].items[i]
			if r.changes[1] != -q.changes[1] {
				t.Errorf("%s.%s: %v there, %v back", r.item.Part, r.item.Kind, r.changes[1], q.changes[1])
			}
			p, o := r.ratioTo(0, 1), q.ratioTo(0, 1)
			if p.new != o.gone || p.gone != o.new || p.percent*o.percent > 0 {
				t.Errorf("%s.%s: %+v there, %+v back", r.item.Part, r.item.Kind, p, o)
			}
			if math.IsInf(p.percent, 0) || math.IsNaN(p.percent) {
				t.Errorf("%s.%s: %v per cent", r.item.Part, r.item.Kind, p.percent)
			}
		}
		for _, m := range measures {
			if x, y := there.measured(m, 0).changes[1], back.measured(m, 0).changes[1]; x != -y {
				t.Errorf("%s: %v there, %v back", m.head, x, y)
			}
		}
	})
}

func TestShownDifferencesAddUp(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		before := powers.Draw(t, "before")
		a, b := sideOf(before), sideOf(after(t, before))
		c := between(1, a, b)
		s, total := c.losses[0], 0.0
		for i, r := range s.items {
			total += r.changes[1]
			exact := (b.points[0].Items[i].Power - a.points[0].Items[i].Power) * c.grain.factor * math.Pow10(c.grain.places)
			if math.Abs(r.changes[1]-exact) >= 2 {
				t.Errorf("item %d differs by %v steps, shown are %v", i, exact, r.changes[1])
			}
			if a.points[0].Items[i].Power == b.points[0].Items[i].Power && r.changes[1] != 0 {
				t.Errorf("item %d is the same, shown are %v", i, r.changes[1])
			}
		}
		if total != s.total.changes[1] {
			t.Errorf("the differences shown add up to %v, the total says %v", total, s.total.changes[1])
		}
		if want := c.grain.steps(b.points[0].Loss) - c.grain.steps(a.points[0].Loss); s.total.changes[1] != want {
			t.Errorf("the totals shown differ by %v, said are %v", want, s.total.changes[1])
		}
	})
}

func TestEveryCellBelongsToItsSide(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		var sides []side
		for range rapid.IntRange(2, 5).Draw(t, "sides") {
			sides = append(sides, sideOf(powers.Draw(t, "powers")))
		}
		base := rapid.IntRange(1, len(sides)).Draw(t, "base")
		c := between(base, sides...)
		for n, r := range c.losses[3].items {
			for i, f := range r.figures {
				if want := sides[i].points[3].Items[n].Power; f.value != want || f.none {
					t.Errorf("item %d of side %d is %v, want %v", n, i, f, want)
				}
			}
		}
		table := c.lossTable(3)
		for column, i := range c.order() {
			line := table.Lines[slices.IndexFunc(table.Lines, func(l view.CompareLine) bool { return l.Class == "sum" })]
			if want := decimals(sides[i].points[3].Loss*c.grain.factor, c.grain.places); line.Cells[column].Value != want && sides[i].points[3].Loss != 0 {
				t.Errorf("the total of side %d is %s, want %s", i, line.Cells[column].Value, want)
			}
		}
	})
}

func TestTheSameHasNoDifferences(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		p := powers.Draw(t, "powers")
		c := between(1, sideOf(p), sideOf(p))
		if got := c.nothing(0, 0, ""); got == "" {
			t.Error("the same twice is said to differ")
		}
		for _, l := range c.lossTable(0).Lines {
			if l.Cells[1].Change != "0" {
				t.Errorf("%s differs by %s", l.Head, l.Cells[1].Change)
			}
		}
	})
	other := sideOf([]float64{1, 0, 0, 0, 0, 1e-6})
	if c := between(1, sideOf([]float64{1, 0, 0, 0, 0, 0}), other); c.nothing(0, 0, "") != "" {
		t.Error("what differs by less than is shown is said to be the same")
	}
}

func TestShares(t *testing.T) {
	for _, row := range []struct {
		was, is float64
		change  string
		share   string
	}{
		{1, 1.5, "+500.0", "+50.0"}, {1.5, 1, minus + "500.0", minus + "33.3"}, {0, 0.2, "+200.0", "new"}, {0.2, 0, minus + "200.0", "gone"},
		{0, 0, "0", "0"}, {1, 1 + 1e-12, "0", "0"}, {1, 1 + 1e-6, "±0.0", "±0.0"}, {0.001, 2, "+1" + thin + "999.0", "> 999"}, {1e-306, 2, "+2" + thin + "000.0", "> 999"},
	} {
		c := between(1, sideOf([]float64{row.was, 0, 0, 0, 0, 0}), sideOf([]float64{row.is, 0, 0, 0, 0, 0}))
		c.grain.places = 1
		c.losses = []sheetOfLosses{lossesAt(c.sides, 0, 0, c.grain)}
		r := c.losses[0].items[0]
		if change, share := c.changeText(r, 1, 1), c.shareText(r, 1); change != row.change || share != row.share {
			t.Errorf("%v → %v: %s, %s %%, want %s, %s %%", row.was, row.is, change, share, row.change, row.share)
		}
	}
}

// An item of one revision alone is 0 in the others; two of one name stay apart.
func TestItemsAmong(t *testing.T) {
	a, b := sideOf([]float64{1, 1, 1, 1, 2, 3}), sideOf([]float64{1, 1, 1, 1, 4, 5})
	f := *b.points[0].Figures
	f.Items = append(slices.Clone(f.Items[:4]), Item{Part: "layout", Kind: "fuse", Power: 7})
	b.points[0].Figures = &f
	c := between(1, a, b)
	var got []float64
	for _, r := range c.losses[0].items {
		if r.item.Part == "layout" {
			got = append(got, r.figures[0].value, r.figures[1].value)
		}
	}
	if want := []float64{2, 0, 3, 0, 0, 7}; !slices.Equal(got, want) {
		t.Errorf("%v, want %v", got, want)
	}
}

func TestLoadsWords(t *testing.T) {
	for want, loads := range map[string][]int{
		"every load": {0, 1, 2, 3, 4, 5, 6, 7}, "5 %": {0}, "5 to 20 %": {0, 1, 2}, "5, 20 to 25 and 100 %": {0, 2, 3, 7},
	} {
		if got := loadsWords(loads); got != want {
			t.Errorf("%v: %q, want %q", loads, got, want)
		}
	}
}

func TestVerdictNamesLoads(t *testing.T) {
	a, b := sideOf([]float64{1, 0, 0, 0, 0, 0}), sideOf([]float64{1, 0, 0, 0, 0, 0})
	better, worse := *a.points[0].Figures, *a.points[0].Figures
	better.Efficiency += 0.01
	worse.Efficiency -= 0.01
	b.points[6].Figures, b.points[7].Figures, b.points[0].Figures = &better, &better, &worse
	b.points[1] = Point{State: "runaway", Reason: "it runs away"}
	c := between(1, a, b)
	got := c.verdict(1)
	for _, want := range []string{"more efficient at 75 to 100 %", "less efficient at 5 %", "without a figure to compare at 10 %", "the same within 0.01 points at 20 to 50 %"} {
		if !strings.Contains(got, want) {
			t.Errorf("%q lacks %q", got, want)
		}
	}
	if got := c.gaps(); len(got) != 1 || !strings.Contains(got[0], "at 10 %: it runs away") {
		t.Errorf("gaps: %q", got)
	}
}

func TestFindingsGainedAndLost(t *testing.T) {
	hot := Finding{Level: "caution", Part: "switch", Rule: "temperature"}
	over := hot
	over.Level = "exceeded"
	lost, both := Finding{Part: "diode", Rule: "voltage", Level: "caution"}, Finding{Part: "inductor", Rule: "ripple", Level: "note"}
	sides := []side{{findings: []Finding{hot, lost, both}}, {findings: []Finding{both, over}}, {reason: "no figures"}}
	var got []string
	for _, f := range findingsAmong(sides) {
		got = append(got, f.Rule+": "+f.change(0, 1)+" "+f.change(1, 0)+" "+f.change(0, 2))
	}
	want := []string{"temperature: now exceeded now caution ", "voltage: lost gained ", "ripple:   "}
	if !slices.Equal(got, want) {
		t.Errorf("%q, want %q", got, want)
	}
	if findingsAmong(sides)[0].common() || !findingsAmong(sides)[2].common() {
		t.Error("what they have in common is told wrongly")
	}
}
