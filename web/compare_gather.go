package web

import (
	"context"
	"errors"
	"fmt"
	"net/url"
	"slices"

	"lossbook/budget"
	"lossbook/store"
)

// comparison is several revisions at the loads of one input voltage, with all
// their differences.
type comparison struct {
	lineup
	saved   []store.Revision
	labels  []string
	sides   []side
	place   place
	load    int    // index in the load grid
	fresh   string // why the figures are computed anew; "" when they are the saved ones
	grain   grain
	losses  []sheetOfLosses // one a load
	entries []sheetEntry
}

// compare reads the revisions that an address names, finds figures for them and
// works out how they differ.
func (s *Server) compare(ctx context.Context, q url.Values) (*comparison, error) {
	l, wrong := readLineup(q)
	if len(wrong) > 0 {
		f := invalid(wrong)
		f.Title, f.Detail = "This comparison can’t be read from its address", "All revisions there are to choose from stand at /compare/choose."
		return nil, f
	}
	c := &comparison{lineup: l, load: l.loadIndex()}
	saved, err := s.pinned(ctx, c)
	if err != nil {
		return nil, err
	}
	if err := c.settle(); err != nil {
		return nil, err
	}
	if c.fresh = stored(c.sides, saved, c.place); c.fresh != "" {
		if err := recompute(ctx, c.sides, c.place); err != nil {
			return nil, err
		}
	}
	c.differ()
	return c, nil
}

// pinned reads the revisions, and returns the points they were saved with.
func (s *Server) pinned(ctx context.Context, c *comparison) (saved [][]Point, err error) {
	for _, p := range c.pins {
		r, err := s.store.Revision(ctx, p.design, p.number)
		if errors.Is(err, store.ErrNotFound) {
			return nil, noRevision(p, err)
		}
		if err != nil {
			return nil, err
		}
		design, err := readDesign(r.DesignJSON)
		if err != nil {
			return nil, err
		}
		points, findings, err := savedResults(r)
		if err != nil {
			return nil, err
		}
		c.saved = append(c.saved, r)
		c.sides = append(c.sides, side{design: design, model: r.Model, entries: draftOf(design), findings: findings})
		saved = append(saved, points)
	}
	return saved, nil
}

// settle works out where each side's figures are taken, and refuses an input
// voltage that no point can have.
func (c *comparison) settle() error {
	in, err := c.input()
	if err != nil {
		return err
	}
	c.place.in = in
	for i := range c.sides {
		from := &c.sides[i]
		if c.under > 0 {
			from = &c.sides[c.under-1]
		}
		under := conditionsOf(from.design)
		c.place.under = append(c.place.under, under)
		if wrong := budget.ValidatePoints(under.grid(in)); len(wrong) > 0 {
			return invalid([]budget.FieldError{{Path: "vin", Message: wrong[0].Message}})
		}
	}
	return nil
}

// differ works out all differences.
func (c *comparison) differ() {
	c.labels = labelsOf(c.pins, c.sides)
	c.grain = grainFor(c.sides)
	for load := range budget.LoadGrid() {
		c.losses = append(c.losses, lossesAt(c.sides, load, c.base-1, c.grain))
	}
	drafts := make([]Draft, len(c.sides))
	for i, s := range c.sides {
		drafts[i] = s.entries
	}
	c.entries = entriesAmong(drafts...)
}

// labelsOf gives each revision a short name of its own: its number where all are
// of one design, else with the beginning of the design's name.
func labelsOf(pins []pin, sides []side) []string {
	one := oneDesign(pins)
	used := map[string]int{}
	labels := make([]string, len(pins))
	for i, p := range pins {
		label := fmt.Sprintf("rev. %d", p.number)
		if !one {
			label = beginning(nameOf(sides[i].design.Name), 16) + fmt.Sprintf(" r%d", p.number)
		}
		if used[label]++; used[label] > 1 {
			label += fmt.Sprintf(" (%d)", used[label])
		}
		labels[i] = label
	}
	return labels
}

// oneDesign reports whether all are revisions of the same design.
func oneDesign(pins []pin) bool {
	return !slices.ContainsFunc(pins, func(p pin) bool { return p.design != pins[0].design })
}

// beginning cuts a text at a blank, so that it has no more than so many letters.
func beginning(text string, most int) string {
	letters := []rune(text)
	if len(letters) <= most {
		return text
	}
	cut := most
	for i := most; i > most/2; i-- {
		if letters[i] == ' ' {
			cut = i
			break
		}
	}
	return string(letters[:cut]) + "…"
}

// order is the order of the columns: the baseline, then the others as the
// address has them.
func (c *comparison) order() []int {
	order := []int{c.base - 1}
	for i := range c.sides {
		if i != c.base-1 {
			order = append(order, i)
		}
	}
	return order
}
