package web

import (
	"context"
	"encoding/json"
	"fmt"
	"net/http"
	"strconv"
	"time"

	"lossbook/assets"
	"lossbook/budget"
	"lossbook/store"
	"lossbook/web/view"
)

// keepRevision keeps the sheet as it was sent as the next revision. Sent twice,
// it is kept once.
func (s *Server) keepRevision(w http.ResponseWriter, r *http.Request) error {
	e, sh, err := s.take(r)
	if err != nil {
		return s.notTaken(w, r, e, sh, err)
	}
	if len(sh.wrong) > 0 {
		sh.demanded = true
		return sh.draw(w, r, http.StatusUnprocessableEntity, nil)
	}
	if n := sh.alreadyKept(e.note); n > 0 {
		return back(w, r, fmt.Sprintf("%s?kept=%d", sh.address(), n))
	}
	saved, err := s.saveRevision(r.Context(), sh.kept, e.note)
	if err != nil {
		return s.notTaken(w, r, e, sh, err)
	}
	return back(w, r, fmt.Sprintf("%s?kept=%d", sh.address(), saved.Number))
}

// alreadyKept is the number of the last revision if it is this very one, else 0.
func (s *sheet) alreadyKept(note string) int {
	if !s.isKept() || s.last.note != note {
		return 0
	}
	return s.last.number
}

// reopenRevision makes a revision's entries the draft.
func (s *Server) reopenRevision(w http.ResponseWriter, r *http.Request) error {
	kept, err := s.design(r)
	if err != nil {
		return err
	}
	saved, err := s.revision(r)
	if err != nil {
		return err
	}
	design, err := readDesign(saved.DesignJSON)
	if err != nil {
		return err
	}
	change := store.Change{Name: nameOf(design.Name), Draft: saved.Draft, Complete: saved.DesignJSON}
	if _, err := s.store.Update(r.Context(), kept.ID, kept.Version, change); err != nil {
		return err
	}
	return back(w, r, fmt.Sprintf("%s?reopened=%d", sheetAddress(kept.ID), saved.Number))
}

// revisionPage shows a saved state as it was saved; nothing on it is computed
// anew but the comparison that the banner speaks of.
func (s *Server) revisionPage(w http.ResponseWriter, r *http.Request) error {
	saved, design, err := s.savedDesign(r)
	if err != nil {
		return err
	}
	page, err := s.revisionModel(r, saved, design)
	if err != nil {
		return err
	}
	return showRevision(w, r, http.StatusOK, page)
}

// showRevision draws the page, or what a script swaps into it.
func showRevision(w http.ResponseWriter, r *http.Request, status int, page view.Revision) error {
	if live(r) {
		return show(w, r, status, view.RevisionAnswer(page))
	}
	return show(w, r, status, view.RevisionPage(page))
}

// revisionModel is the page of a revision within its design: the ways on to the
// others, back to the draft, and to its links.
func (s *Server) revisionModel(r *http.Request, saved store.Revision, design *budget.Design) (view.Revision, error) {
	kept, err := s.store.Design(r.Context(), saved.Design)
	if err != nil {
		return view.Revision{}, err
	}
	base := revisionAddress(kept.ID, saved.Number)
	page, err := savedPage(r.Context(), saved, design, sightOn(r), base)
	if err != nil {
		return page, err
	}
	page.Page.Assets.Scripts = append(page.Page.Assets.Scripts, assets.URL("share.js"))
	page.Draft, page.Reopen = view.Link{Text: "the draft", Href: sheetAddress(kept.ID)}, base+"/reopen"
	if saved.Number > 1 {
		page.Compare = append(page.Compare, besideBefore(kept.ID, saved.Number-1, saved.Number))
		page.Previous = revisionLink(kept.ID, saved.Number-1)
	}
	if saved.Number < kept.LatestRevision {
		page.Next = revisionLink(kept.ID, saved.Number+1)
	}
	page.Compare = append(page.Compare, besideLink(pin{kept.ID, saved.Number}))
	page.Lost = "The draft as it stands is replaced; Undo on its sheet brings it back."
	if page.Answers.Banner != "" {
		page.Answers.Banner += " Reopen it as the draft to see what it says now."
	}
	page.Answers.Ledger.Paper = view.Link{Text: "paper", Href: base + "/report"}
	page.Answers.Links, err = s.links(r.Context(), saved)
	return page, err
}

func revisionLink(id int64, n int) view.Link {
	return view.Link{Text: "revision " + strconv.Itoa(n), Href: revisionAddress(id, n)}
}

// savedPage is what every page of a revision shows of it. All its addresses lie
// at base, which is the page's own.
func savedPage(ctx context.Context, saved store.Revision, design *budget.Design, g sight, base string) (view.Revision, error) {
	n, name := strconv.Itoa(saved.Number), nameOf(design.Name)
	page := view.Revision{
		Page: frame(name + ", revision " + n), Number: n, Name: name, Note: saved.Note, About: design.Note,
		When: moment(saved.CreatedAt), Stamp: saved.CreatedAt.Format(time.RFC3339),
		Parts: givenParts(design),
	}
	points, findings, err := savedResults(saved)
	if err != nil {
		return page, err
	}
	p := remembered(design, points, findings, g)
	p.model = saved.Model
	if p.energy, p.worked, err = savedEnergy(ctx, saved, design); err != nil {
		return page, err
	}
	words, same, err := banner(ctx, saved, design, points)
	if err != nil {
		return page, err
	}
	if err := p.retrace(ctx, same); err != nil {
		return page, err
	}
	if page.Answers, err = p.answers(base, false, files(base)); err != nil {
		return page, err
	}
	page.Answers.Banner, page.Answers.File = words, fileStem(design.Name, saved.Number)
	page.Answers.Map, err = p.mapPlace(ctx, base, mapModel(saved))
	return page, err
}

func revisionAddress(id int64, n int) string {
	return fmt.Sprintf("%s/revisions/%d", sheetAddress(id), n)
}

func savedResults(saved store.Revision) (points []Point, findings []Finding, err error) {
	if err = json.Unmarshal(saved.Points, &points); err != nil {
		return nil, nil, fmt.Errorf("stored points: %w", err)
	}
	if err = json.Unmarshal(saved.Findings, &findings); err != nil {
		return nil, nil, fmt.Errorf("stored findings: %w", err)
	}
	return points, findings, nil
}

// banner says so if the program would find something else today, and whether the same
// model finds the same. What is shown stays what was saved.
func banner(ctx context.Context, saved store.Revision, design *budget.Design, points []Point) (words string, same bool, err error) {
	asked := make([]budget.Point, len(points))
	for i, p := range points {
		asked[i] = budget.Point{Vin: p.Vin, Iout: p.Iout, Ambient: p.Ambient}
	}
	now, wrong, err := compute(ctx, design, asked)
	switch {
	case err != nil:
		return "", false, err
	case len(wrong) > 0:
		return fmt.Sprintf("Saved with model %s. Model %s, which runs now, no longer takes this design; the figures below are those that were saved.",
			saved.Model, budget.ModelVersion), false, nil
	case differs(points, now.Points):
		return fmt.Sprintf("Saved with model %s. Model %s, which runs now, gives other figures; those below are the saved ones.",
			saved.Model, budget.ModelVersion), false, nil
	}
	return "", saved.Model == budget.ModelVersion, nil
}

// givenParts lists every entry of a design with its source.
func givenParts(d *budget.Design) []view.Given {
	entries := draftOf(d)
	var parts []view.Given
	for _, p := range budget.Parts() {
		g := view.Given{Title: p.Name, Class: classOf(p.Of), Part: entries[below(p.Path, "part")]}
		for _, f := range p.Fields {
			if f.Kind != budget.Text || p.List {
				g.Values = append(g.Values, givenValues(p, f, entries)...)
			}
		}
		if len(g.Values) > 0 || g.Part != "" {
			parts = append(parts, g)
		}
	}
	return parts
}

// givenValues are a field's values: one, none, or one a row.
func givenValues(p budget.Part, f budget.Field, entries Draft) []view.GivenValue {
	var values []view.GivenValue
	add := func(label, path, text string) {
		if !blank(text) {
			values = append(values, view.GivenValue{Symbol: symbolOf(f.Symbol), Label: label, Value: text, Source: entries[sources+path]})
		}
	}
	switch {
	case p.List:
		for i := range entries.shownRows(p.Path) {
			path := below(rowPath(p.Path, i), f.Key)
			add(fmt.Sprintf("%s, row %d", f.Name, i+1), path, worded(f, entries[path]))
		}
	case f.Kind == budget.Rows:
		for i := range entries.shownRows(f.Path) {
			add(fmt.Sprintf("%s, at %s", f.Name, entries[cellPath(f.Path, i, 0)]), f.Path, entries[cellPath(f.Path, i, 1)])
		}
	default:
		add(f.Name, f.Path, worded(f, entries[f.Path]))
	}
	return values
}
