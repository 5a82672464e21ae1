package web

import (
	"context"
	"encoding/json"
	"fmt"
	"time"

	"lossbook/budget"
	"lossbook/store"
	"lossbook/web/quantity"
	"lossbook/web/view"
)

// milestone is the last revision, as far as a sheet compares itself with it.
type milestone struct {
	number  int
	design  *budget.Design
	entries Draft  // the design's, in the one way of writing them
	typed   Draft  // as typed
	full    *Point // at nominal input and full load
	note    string
}

// milestoneOf reads a revision for comparison.
func milestoneOf(r store.Revision) (*milestone, error) {
	d, err := readDesign(r.DesignJSON)
	if err != nil {
		return nil, err
	}
	var points []Point
	if err := json.Unmarshal(r.Points, &points); err != nil {
		return nil, fmt.Errorf("stored points: %w", err)
	}
	typed, err := readDraft(r.Draft)
	return &milestone{number: r.Number, design: d, entries: draftOf(d), typed: typed, full: fullLoad(d, points), note: r.Note}, err
}

// since draws what changed since the last revision and what that did.
func (s *sheet) since(ctx context.Context) (view.Since, error) {
	v := view.Since{Title: "No revision kept yet", Note: s.note, Send: s.address() + "/revisions"}
	if s.last != nil {
		v.Title = fmt.Sprintf("Since revision %d", s.last.number)
		var err error
		if v.Changes, err = s.changes(ctx); err != nil {
			return v, err
		}
		if len(v.Changes) == 0 {
			v.Unchanged = "Nothing has changed."
		}
	}
	v.Keep = fmt.Sprintf("Keep as revision %d", s.kept.LatestRevision+1)
	if len(s.wrong) > 0 {
		v.Why = "It can be kept once " + plural(len(s.wrong), "entry is", "entries are") + " made or put right."
	} else if err := s.effect(ctx, &v); err != nil {
		return v, err
	}
	v.Revisions, v.Compare = s.keptLines(), besideLink(pin{s.kept.ID, s.kept.LatestRevision})
	return v, nil
}

// keptLines list the revisions, each with a way to lay it beside the one before.
func (s *sheet) keptLines() []view.RevisionLine {
	var lines []view.RevisionLine
	for i, h := range s.revisions {
		line := view.RevisionLine{Name: fmt.Sprintf("Revision %d", h.Number), Note: h.Note,
			Href: revisionAddress(s.kept.ID, h.Number), When: moment(h.CreatedAt), Stamp: h.CreatedAt.Format(time.RFC3339)}
		if i+1 < len(s.revisions) { // the newest come first
			line.Beside = besideBefore(s.kept.ID, s.revisions[i+1].Number, h.Number)
		}
		lines = append(lines, line)
	}
	return lines
}

// effect says what the changes did at full load and nominal input, whatever
// else is looked at.
func (s *sheet) effect(ctx context.Context, v *view.Since) error {
	if s.last == nil || len(v.Changes) == 0 || s.last.full == nil || !s.last.full.Settled() {
		return nil
	}
	now, err := s.fullNow(ctx)
	if err != nil || now == nil || !now.Settled() {
		return err
	}
	was := s.last.full
	v.EffectAt = "at full load, " + quantityOf(now.Vin, "V", 4) + " in"
	if !pointDiffers(was, now) {
		v.Effect = "No change of efficiency or losses"
		return nil
	}
	v.Effect = signed(100*(now.Efficiency-was.Efficiency), func(x float64) string { return decimals(x, 2) }) + " points, " +
		signed(now.Loss-was.Loss, func(x float64) string { return quantity.Show(x, "W", 2) })
	if now.Vin != was.Vin || now.Iout != was.Iout || now.Ambient != was.Ambient || now.Vout != was.Vout {
		v.EffectAt = "at full load, each at its own nominal input, output and ambient"
	}
	return nil
}

// fullNow is the draft's point at its own nominal input, full load and ambient.
func (s *sheet) fullNow(ctx context.Context) (*Point, error) {
	d := s.design
	if s.now != nil && s.now.Ambient == d.AmbientTemperature() {
		return s.now, nil
	}
	found, _, err := compute(ctx, d, []budget.Point{{Vin: d.Input.Nominal.V, Iout: d.Output.Current.V, Ambient: d.AmbientTemperature()}})
	if err != nil || len(found.Points) == 0 {
		return nil, err
	}
	return &found.Points[0], nil
}
