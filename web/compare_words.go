package web

import (
	"fmt"
	"slices"
	"strings"

	"lossbook/budget"
	"lossbook/web/quantity"
	"lossbook/web/view"
)

// listed joins words as a sentence does.
func listed(words []string) string {
	if len(words) < 2 {
		return strings.Join(words, "")
	}
	return strings.Join(words[:len(words)-1], ", ") + " and " + words[len(words)-1]
}

// conditionWords say which conditions differ, and what the others are.
func conditionWords(list []condition) (differ, same string) {
	var names, told []string
	for _, c := range list {
		if c.differ {
			names = append(names, c.name)
		} else {
			told = append(told, c.name+" "+c.texts[0])
		}
	}
	if len(names) == 0 {
		return "", "The conditions are the same: " + strings.Join(told, ", ") + "."
	}
	differ = "The conditions differ: " + listed(names) + "."
	if len(told) > 0 {
		same = "The same are: " + strings.Join(told, ", ") + "."
	}
	return differ, same
}

// offers lead to the comparison under one revision's conditions, and back to
// each under its own. There is nothing to offer where they don't differ.
func (c *comparison) offers(list []condition) (links []view.Link, stays string) {
	var left []string
	apart := false
	for _, condition := range list {
		switch {
		case condition.differ && condition.point:
			apart = true
		case condition.differ && condition.name != "model version":
			left = append(left, condition.name)
		}
	}
	if !apart {
		return nil, ""
	}
	if n := len(left); n == 1 {
		stays = "Input, load and ambient can be made the same; the " + left[0] + " belongs to each design and stays as it is."
	} else if n > 1 {
		stays = "Input, load and ambient can be made the same; " + listed(left) + " belong to each design and stay as they are."
	}
	return c.offered(), stays
}

// offered are the ways to take the conditions, those of equal ones once.
func (c *comparison) offered() []view.Link {
	links := []view.Link{{Text: "each under its own", Href: c.with(func(l *lineup) { l.under = 0 }), Here: c.under == 0}}
	var seen []conditions
	for i, label := range c.labels {
		own := conditionsOf(c.sides[i].design)
		if slices.Contains(seen, own) {
			continue
		}
		seen = append(seen, own)
		here := c.under > 0 && own == c.place.under[0]
		links = append(links, view.Link{Text: "all under those of " + label, Href: c.with(func(l *lineup) { l.under = i + 1 }), Here: here})
	}
	return links
}

// basis says whose figures are shown.
func (c *comparison) basis() string {
	if c.fresh == "" {
		return "All figures are those that were saved with the revisions."
	}
	same := "at its own points"
	if c.under > 0 || oneOf(c.place.under) {
		same = "at the same points"
	}
	return fmt.Sprintf("All figures are computed anew with today’s model, version %s, each revision %s, because %s.", budget.ModelVersion, same, c.fresh)
}

func oneOf(under []conditions) bool {
	return !slices.ContainsFunc(under, func(u conditions) bool { return u != under[0] })
}

// point names where the losses are compared.
func (c *comparison) point() string {
	share := loadShare(budget.LoadGrid()[c.load]) + " %"
	if oneOf(c.place.under) {
		u := c.place.under[0]
		return "at " + quantityOf(u.vin(c.place.in), "V", 4) + " in, " + quantityOf(budget.LoadGrid()[c.load]*u.current, "A", 3) + " (" + share + "), " + degreesCelsius(u.ambient)
	}
	in := quantityOf(c.place.in.volts, "V", 4) + " in, each at "
	if c.place.in.end != "" {
		in = "each at its own " + c.place.in.end + " input, "
	}
	return in + share + " of its full load and its own ambient"
}

// vinLinks offer the ends and the middle of the input range.
func (c *comparison) vinLinks() []view.Link {
	var links []view.Link
	for _, end := range []string{"lowest", "nominal", "highest"} {
		text := end
		if oneOf(c.place.under) {
			text += " " + quantityOf(c.place.under[0].vin(inputAt{end: end}), "V", 4)
		}
		here := c.place.in.end == end
		links = append(links, view.Link{Text: text, Here: here, Href: c.with(func(l *lineup) { l.vin = end })})
	}
	if c.place.in.end == "" {
		links = append(links, view.Link{Text: quantityOf(c.place.in.volts, "V", 4), Here: true, Href: c.address()})
	}
	return links
}

func (c *comparison) loadLinks() []view.Link {
	var links []view.Link
	for i, part := range budget.LoadGrid() {
		share := loadShare(part)
		links = append(links, view.Link{Text: share + " %", Here: i == c.load, Href: c.with(func(l *lineup) { l.load = share })})
	}
	return links
}

// verdict says at which loads one revision is more efficient than the baseline,
// as far as the figures shown tell.
func (c *comparison) verdict(i int) string {
	var more, less, same, unknown []int
	for load := range budget.LoadGrid() {
		r := c.measured(measures[0], load)
		switch {
		case !r.comparable(c.base-1, i):
			unknown = append(unknown, load)
		case r.changes[i] > 0:
			more = append(more, load)
		case r.changes[i] < 0:
			less = append(less, load)
		default:
			same = append(same, load)
		}
	}
	var told []string
	for _, part := range []struct {
		words string
		loads []int
	}{{"more efficient", more}, {"less efficient", less}, {"the same within 0.01 points", same}, {"without a figure to compare", unknown}} {
		if len(part.loads) > 0 {
			told = append(told, part.words+" at "+loadsWords(part.loads))
		}
	}
	return c.labels[i] + " against " + c.labels[c.base-1] + ": " + strings.Join(told, ", ") + "."
}

// loadsWords names loads of the grid, neighbours as a range.
func loadsWords(loads []int) string {
	grid := budget.LoadGrid()
	if len(loads) == len(grid) {
		return "every load"
	}
	var words []string
	for i := 0; i < len(loads); i++ {
		from := i
		for i+1 < len(loads) && loads[i+1] == loads[i]+1 {
			i++
		}
		text := loadShare(grid[loads[from]])
		if i > from {
			text += " to " + loadShare(grid[loads[i]])
		}
		words = append(words, text)
	}
	return listed(words) + " %"
}

// rules say how signs and sums are to be read.
func (c *comparison) rules() []string {
	return []string{
		"A difference is the revision minus the baseline: + means more loss, hotter, or more efficient than the baseline, " + minus +
			" the contrary. The third column is that difference in % of the baseline’s loss; a loss the baseline does not have is “new”, one that only it has is “gone”.",
		"Losses in " + c.grain.unit + "; efficiency differs in percentage points, temperatures in K. Differences are rounded so that those shown add up to the shown total: " +
			"one may be a last digit off the difference of the two values beside it.",
	}
}

// gaps say why figures are missing, each reason once.
func (c *comparison) gaps() []string {
	var gaps []string
	for i, s := range c.sides {
		if s.reason != "" {
			gaps = append(gaps, c.labels[i]+" has no figures: "+s.reason+".")
			continue
		}
		var reasons []string
		loads := map[string][]int{}
		for load, p := range s.points {
			if p.Settled() {
				continue
			}
			if loads[p.Reason] == nil {
				reasons = append(reasons, p.Reason)
			}
			loads[p.Reason] = append(loads[p.Reason], load)
		}
		for _, reason := range reasons {
			gaps = append(gaps, c.labels[i]+" has no figures at "+loadsWords(loads[reason])+": "+reason+".")
		}
	}
	return gaps
}

// nothing says so if nothing differs at all.
func (c *comparison) nothing(changed, findings int, conditions string) string {
	if changed > 0 || findings > 0 || conditions != "" {
		return ""
	}
	for load := range budget.LoadGrid() {
		for i := range c.sides {
			if c.differs(load, i) {
				return ""
			}
		}
	}
	return "Conditions, entries, figures and findings are the same in all of them."
}

// differs reports whether a side has another figure than the baseline at a load.
func (c *comparison) differs(load, i int) bool {
	rows := append([]lossRow{c.losses[load].total}, c.losses[load].items...)
	for _, m := range measures {
		rows = append(rows, c.measured(m, load))
	}
	return slices.ContainsFunc(rows, func(r lossRow) bool {
		return r.figures[i].none != r.figures[c.base-1].none || !r.equal(c.base-1, i)
	})
}

// idleWords name the items that are 0 throughout.
func (c *comparison) idleWords() string {
	var names []string
	for i, r := range c.losses[0].items {
		if c.idle(i) {
			names = append(names, zeroWords(r.item))
		}
	}
	if len(names) == 0 {
		return ""
	}
	return "0 in all of them at every load: " + strings.Join(names, ", ") + "."
}

// noFigureOr writes a figure of a chart's table.
func noFigureOr(f datum, places int) string {
	if f.none {
		return quantity.NoFigure
	}
	return decimals(f.value, places)
}
