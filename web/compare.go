package web

import (
	"cmp"
	"math"
	"slices"

	"lossbook/budget"
)

// side is one revision of a comparison, with its figures at the loads and the
// input voltage they are compared at.
type side struct {
	design   *budget.Design
	model    string
	entries  Draft     // the design's, in the one way of writing them
	points   []Point   // one a load; none of a design that this model refuses
	findings []Finding // of the whole design, over its input range
	reason   string    // why there are no figures at all
}

// at is the point at a load; nil where there are no figures.
func (s *side) at(load int) *Point {
	if load >= len(s.points) || !s.points[load].Settled() {
		return nil
	}
	return &s.points[load]
}

// grain is the unit of a comparison's losses and the decimals they are shown
// with: the same everywhere, so that differences can be added up.
type grain struct {
	watts
	places int
}

// grainFor shows the largest loss in five digits: a difference of a per cent of
// it then has three.
func grainFor(sides []side) grain {
	most := 0.0
	for _, s := range sides {
		most = max(most, mostLoss(s.points))
	}
	unit := watts{"W", 1, 3}
	if most < 10 {
		unit = watts{"mW", 1e3, 2}
	}
	if most == 0 {
		return grain{unit, 1}
	}
	digits := int(math.Floor(math.Log10(most*unit.factor))) + 1
	return grain{unit, max(0, min(5-digits, 3))}
}

// steps counts a loss in the smallest steps shown.
func (g grain) steps(power float64) float64 {
	return math.Round(power * g.factor * math.Pow10(g.places))
}

// datum is one value of a row, of one revision.
type datum struct {
	value   float64
	none    bool // there is no figure
	outside bool // a curve was held flat for it
}

// lossRow is one figure of all revisions, each in the place of its revision.
type lossRow struct {
	item    Item // what loss it is; without a part none
	figures []datum
	changes []float64 // against the baseline, in steps shown; 0 where there is none
}

// sheetOfLosses is what the revisions lose at one load, by item.
type sheetOfLosses struct {
	items []lossRow
	total lossRow
}

// lossesAt lays the losses of the sides beside each other at one load.
func lossesAt(sides []side, load, base int, g grain) sheetOfLosses {
	var s sheetOfLosses
	for _, it := range itemsAmong(sides) {
		s.items = append(s.items, rowOf(Item{Part: it.part, Kind: it.kind}, sides, func(s *side) datum { return it.figure(s.at(load)) }))
	}
	s.total = rowOf(Item{}, sides, func(s *side) datum { return datumOf(s.at(load), func(f *Figures) float64 { return f.Loss }) })
	s.total.changes = make([]float64, len(sides))
	for i := range sides {
		s.round(base, i, g)
	}
	return s
}

func rowOf(it Item, sides []side, of func(*side) datum) lossRow {
	r := lossRow{item: it, changes: make([]float64, len(sides))}
	for i := range sides {
		r.figures = append(r.figures, of(&sides[i]))
	}
	return r
}

func datumOf(p *Point, value func(*Figures) float64) datum {
	if p == nil {
		return datum{none: true}
	}
	return datum{value: value(p.Figures)}
}

// comparable reports whether two figures of the row have a difference.
func (r lossRow) comparable(a, b int) bool { return !r.figures[a].none && !r.figures[b].none }

// equal reports whether two figures of the row are the same but for rounding.
func (r lossRow) equal(a, b int) bool { return !far(r.figures[a].value, r.figures[b].value) }

// round rounds the differences between one side and the baseline so that those
// shown add up to the shown difference of the totals, which is that of the shown
// totals. Where plain rounding leaves a rest, the differences that it moved
// furthest from their values take it, a step each. What has not changed takes
// none. Exchanging the sides changes the signs and nothing else.
func (s *sheetOfLosses) round(base, i int, g grain) {
	if i == base || !s.total.comparable(base, i) {
		return
	}
	s.total.changes[i] = g.steps(s.total.figures[i].value) - g.steps(s.total.figures[base].value)
	rest := s.total.changes[i]
	var moved []int
	for n, r := range s.items {
		if r.equal(base, i) {
			continue
		}
		moved = append(moved, n)
		r.changes[i] = g.steps(r.figures[i].value - r.figures[base].value)
		rest -= r.changes[i]
	}
	sign := math.Copysign(1, rest)
	left := func(n int) float64 {
		r := s.items[n]
		exact := (r.figures[i].value - r.figures[base].value) * g.factor * math.Pow10(g.places)
		return sign * (exact - r.changes[i])
	}
	slices.SortStableFunc(moved, func(a, b int) int { return cmp.Compare(left(b), left(a)) })
	for n := 0; n < len(moved) && rest != 0; n++ {
		s.items[moved[n]].changes[i] += sign
		rest -= sign
	}
}

// mostShare bounds a ratio: of next to nothing anything is a multiple beyond all
// numbers.
const mostShare = 1e6

// ratio is a difference in per cent of the baseline's figure; of nothing there
// is no share, so that what is new or gone is called that.
type ratio struct {
	percent   float64
	new, gone bool
}

// ratioTo is the ratio of one figure of the row to another.
func (r lossRow) ratioTo(base, i int) ratio {
	was, is := r.figures[base].value, r.figures[i].value
	switch {
	case r.equal(base, i):
		return ratio{}
	case was == 0:
		return ratio{new: true}
	case is == 0:
		return ratio{gone: true}
	}
	return ratio{percent: 100 * max(-mostShare, min((is-was)/math.Abs(was), mostShare))}
}

// named is a loss item in the order of the ledger; items of the same name are
// told apart by their turn.
type named struct {
	part, kind string
	turn       int
}

// itemsAmong lists the items of all sides, each once, part by part.
func itemsAmong(sides []side) []named {
	var list []named
	for _, s := range sides {
		for _, it := range turns(itemsOf(s.design, s.points)) {
			if !slices.Contains(list, it) {
				list = append(list, it)
			}
		}
	}
	slices.SortStableFunc(list, func(a, b named) int { return groupOf(a.part) - groupOf(b.part) })
	return list
}

func turns(items []Item) []named {
	var list []named
	for i, it := range items {
		n := named{part: it.Part, kind: it.Kind}
		for _, before := range items[:i] {
			if before.Part == it.Part && before.Kind == it.Kind {
				n.turn++
			}
		}
		list = append(list, n)
	}
	return list
}

func groupOf(part string) int {
	return slices.IndexFunc(groups, func(g group) bool { return slices.Contains(g.parts, part) })
}

// figure is the item's at a point; 0 where the design has no such item.
func (n named) figure(p *Point) datum {
	if p == nil {
		return datum{none: true}
	}
	turn := n.turn
	for _, it := range p.Items {
		if it.Part != n.part || it.Kind != n.kind {
			continue
		}
		if turn == 0 {
			return datum{value: it.Power, outside: it.Outside}
		}
		turn--
	}
	return datum{}
}
