package web

import (
	"context"
	"maps"
	"strconv"

	"github.com/a-h/templ"

	"lossbook/budget"
	"lossbook/store"
	"lossbook/web/view"
)

// exhibits are the pages of the gallery.
var exhibits = []exhibit{
	{"list", "Designs with hostile and endless names", listExhibit(false)},
	{"list-empty", "No design at all", listExhibit(true)},
	{"sheet-hostile", "A sheet with hostile texts, and changes since its last revision", sheetOf(hostileDesign, nil, sight{})},
	{"sheet-extreme", "A sheet of extreme magnitudes", sheetOf(extremeDesign, nil, sight{})},
	{"sheet-hot", "A sheet that is over most of its ratings", sheetOf(hotDesign, nil, sight{})},
	{"sheet-unreachable", "A sheet without a figure in its ledger", sheetOf(plainDesign, nil, sight{vin: "40 V"})},
	{"sheet-working", "A sheet with a working open", sheetOf(hostileDesign, nil, sight{working: "inductor.core@100"})},
	{"sheet-wrong", "A sheet on which every number is wrong", sheetOf(plainDesign, everyNumberWrong, sight{vin: hostileText, ambient: solidText, load: "33"})},
	{"sheet-empty", "A sheet without an entry", sheetOf(plainDesign, func(t Draft) { clear(t) }, sight{})},
	{"sheet-findings", "A sheet with 30 findings", findingsExhibit},
	{"sheet-stale", "A sheet that was changed elsewhere, for the first time seen", staleExhibit},
	{"revision", "A revision with hostile texts, notes and links", revisionExhibit},
	{"report", "The same on paper", reportExhibit},
	{"compare", "Five revisions that have nothing in common", compareExhibit},
	{"compare-choose", "No revision to choose", func(context.Context) (templ.Component, error) {
		return view.ChooserPage(view.Chooser{Page: frame("Lay revisions side by side")}), nil
	}},
	{"find-none", "An entry that is not found", findExhibit(hostileText)},
	{"find-all", "Every entry that can be found", findExhibit("")},
	{"rename", "A name that can’t be used", func(context.Context) (templ.Component, error) {
		return view.Rename(view.Nameplate{Page: view.Page{Title: "Rename " + solidText, Failed: true, Assets: frame("").Assets}, ID: "1", Problems: thirtyProblems()[:1],
			Field: view.Field{Name: "name", Label: "Name", Value: hostileText, Error: longText, Required: true, Wide: true}}), nil
	}},
	{"failure", "A fault with 30 reasons", func(context.Context) (templ.Component, error) {
		return view.Failure(view.Fault{Page: frame(hostileText), Heading: solidText, Words: []string{longText, hostileText}, Details: thirtyProblems(),
			Back: view.Link{Text: longText, Href: "/"}}), nil
	}},
}

func thirtyProblems() []view.Problem {
	var list []view.Problem
	for i := range 30 {
		text := []string{hostileText, longText, solidText}[i%3]
		list = append(list, view.Problem{Label: text, Message: text, Href: []string{"", "#main"}[i%2]})
	}
	return list
}

func listExhibit(empty bool) func(context.Context) (templ.Component, error) {
	return func(context.Context) (templ.Component, error) {
		l := view.List{Page: frame("Designs"), Spec: specification{draft: Draft{"name": hostileText, "input.min": "4k7x"},
			wrong: []budget.FieldError{{Path: "input.min", Message: longText}, {Path: "name", Message: hostileText}}}.fields()}
		if empty {
			return view.Designs(l), nil
		}
		l.Page.Notice = view.Notice{Text: "Removed “" + hostileText + "”.", Undo: "/designs/1/restore"}
		l.Samples = []view.Option{{Value: hostileText, Label: solidText}}
		for i, name := range []string{hostileText, longText, solidText, "—", "A"} {
			id := strconv.Itoa(i + 1)
			l.Designs = append(l.Designs, view.Entry{ID: id, Name: name, Sample: i%2 == 0, What: longText, Budget: []string{"99.99", "no figure", "", "0", "100"}[i],
				Missing: "parts missing", Level: []string{"exceeded", "caution", "note", "", "exceeded"}[i], Finding: []string{hostileText, longText, solidText, "", "x"}[i],
				Kept: "10,000 revisions", Updated: moment(galleryDay)})
			l.Starts = append(l.Starts, view.Option{Value: id, Label: name})
		}
		return view.Designs(l), nil
	}
}

// bareSheet is a sheet as it is drawn, of a design that was saved before as it was
// found.
func bareSheet(ctx context.Context, make func() (*budget.Design, error), change func(Draft), g sight) (*sheet, error) {
	d, err := make()
	if err != nil {
		return nil, err
	}
	plain, err := plainDesign()
	if err != nil {
		return nil, err
	}
	saved, err := savedNow(ctx, plain, 7, hostileText)
	if err != nil {
		return nil, err
	}
	t := draftOf(d)
	if change != nil {
		change(t)
	}
	stored, _, err := t.stored()
	if err != nil {
		return nil, err
	}
	sh := &sheet{kept: store.Design{ID: 1, Draft: stored, UpdatedAt: galleryDay, Version: 1 << 53, LatestRevision: 7}, draft: t, complete: d, sight: g, note: hostileText}
	sh.design, sh.wrong = t.design()
	_, sh.beside = t.profile(sh.design)
	if sh.last, err = milestoneOf(saved); err != nil {
		return nil, err
	}
	for n := 7; n > 0; n-- {
		sh.revisions = append(sh.revisions, store.RevisionHead{Design: 1, Number: n, Note: []string{hostileText, longText, solidText}[n%3], CreatedAt: galleryDay})
	}
	before := maps.Clone(t)
	before["name"], before["series_resistances[0].name"] = longText, solidText
	sh.steps.Undo, _, err = before.stored()
	sh.steps.Redo = saved.Draft
	sh.way = undone
	return sh, err
}

func sheetOf(make func() (*budget.Design, error), change func(Draft), g sight) func(context.Context) (templ.Component, error) {
	return func(ctx context.Context) (templ.Component, error) {
		v, err := sheetModel(ctx, make, change, g)
		return view.SheetPage(v), err
	}
}

func sheetModel(ctx context.Context, make func() (*budget.Design, error), change func(Draft), g sight) (view.Sheet, error) {
	sh, err := bareSheet(ctx, make, change, g)
	if err != nil {
		return view.Sheet{}, err
	}
	return sh.model(ctx)
}

func everyNumberWrong(t Draft) {
	for _, p := range budget.Parts() {
		for _, f := range p.Fields {
			if f.Kind == budget.Number && !p.List {
				t[f.Path] = solidText
			}
		}
	}
	t["series_resistances[0].resistance"] = hostileText
	t["inductor.l_curve[0][0]"], t["inductor.l_curve[0][1]"] = hostileText, solidText
	t["profile[0].load"], t["profile[0].hours"] = hostileText, "25"
	t[rippleRatio] = hostileText
}

func findingsExhibit(ctx context.Context) (templ.Component, error) {
	v, err := sheetModel(ctx, plainDesign, nil, sight{})
	for i := range 30 {
		text := []string{hostileText, longText, solidText}[i%3]
		f := view.Finding{Level: []string{"exceeded", "caution"}[i%2], Part: "switch", Message: text, At: "at 12 V in, 2 A", Source: text}
		v.Answers.Warnings = append(v.Answers.Warnings, f)
		f.Level = "note"
		v.Answers.Notes = append(v.Answers.Notes, f)
	}
	v.Answers.Count = "30 notes"
	return view.SheetPage(v), err
}

func staleExhibit(ctx context.Context) (templ.Component, error) {
	v, err := sheetModel(ctx, hostileDesign, nil, sight{})
	v.Page.Failed, v.Hint = true, view.Hint{Text: hints["sheet"], Send: "/hints/sheet/away", To: "/"}
	v.Stale = &view.Stale{Words: longText + hostileText, Keep: "Keep mine instead", Theirs: "Load the other and drop mine", Version: "1"}
	return view.SheetPage(v), err
}

func revisionExhibit(ctx context.Context) (templ.Component, error) {
	d, err := hostileDesign()
	if err != nil {
		return nil, err
	}
	saved, err := savedNow(ctx, d, 1<<30, longText+hostileText+solidText)
	if err != nil {
		return nil, err
	}
	page, err := savedPage(ctx, saved, d, sight{}, revisionAddress(1, 1))
	page.Answers.Banner, page.Reopen, page.Lost = longText, revisionAddress(1, 1)+"/reopen", longText
	page.Draft, page.Previous = view.Link{Text: "the draft", Href: "/designs/1"}, view.Link{Text: "revision 1", Href: "/designs/1"}
	page.Compare = []view.Link{{Text: longText, Href: "/compare"}}
	links := &view.Links{Send: shareAddress(1, 1), Made: "http://127.0.0.1:8470/share/" + solidText, Problems: thirtyProblems()[:1],
		Note: view.Field{Name: "note", Key: "share.note", Label: "Whom it is for", Wide: true, Value: hostileText, Error: solidText}}
	for i, note := range []string{hostileText, longText, solidText, ""} {
		l := view.ShareLink{Note: note, When: moment(galleryDay), Revoke: shareAddress(1, 1) + "/1/revoke"}
		if i%2 > 0 {
			l.Revoke, l.Revoked = "", moment(galleryDay)
		}
		links.List = append(links.List, l)
	}
	page.Answers.Links = links
	return view.RevisionPage(page), err
}

func reportExhibit(ctx context.Context) (templ.Component, error) {
	d, err := hostileDesign()
	if err != nil {
		return nil, err
	}
	saved, err := savedNow(ctx, d, 1<<30, longText+hostileText+solidText)
	if err != nil {
		return nil, err
	}
	page, err := reportModel(ctx, saved, d)
	return view.ReportPage(page), err
}

func compareExhibit(ctx context.Context) (templ.Component, error) {
	c := &comparison{lineup: lineup{base: 2}}
	c.load = c.loadIndex()
	for i, make := range []func() (*budget.Design, error){hostileDesign, extremeDesign, hotDesign, plainDesign, hostileDesign} {
		d, err := make()
		if err != nil {
			return nil, err
		}
		saved, err := savedNow(ctx, d, i+1, []string{hostileText, longText, solidText}[i%3])
		if err != nil {
			return nil, err
		}
		_, findings, err := savedResults(saved)
		if err != nil {
			return nil, err
		}
		c.pins, c.saved = append(c.pins, pin{int64(i + 1), i + 1}), append(c.saved, saved)
		c.sides = append(c.sides, side{design: d, model: saved.Model, entries: draftOf(d), findings: findings})
	}
	if err := c.settle(); err != nil {
		return nil, err
	}
	if err := recompute(ctx, c.sides, c.place); err != nil {
		return nil, err
	}
	c.fresh = longText
	c.differ()
	page, err := c.model()
	return view.ComparePage(page), err
}

func findExhibit(text string) func(context.Context) (templ.Component, error) {
	return func(context.Context) (templ.Component, error) {
		d, err := hostileDesign()
		if err != nil {
			return nil, err
		}
		stored, _, err := draftOf(d).stored()
		if err != nil {
			return nil, err
		}
		page, err := findModel(store.Design{ID: 1, Draft: stored}, sight{}, text)
		return view.FindPage(page), err
	}
}
