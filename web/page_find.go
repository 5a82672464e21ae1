package web

import (
	"net/http"
	"net/url"
	"strconv"

	"lossbook/store"
	"lossbook/web/view"
)

// mostFound is how many entries are offered while one types.
const mostFound = 10

// findPage lists the entries of a sheet that a text may mean, as links to them; a
// script gets the first of them, to offer.
func (s *Server) findPage(w http.ResponseWriter, r *http.Request) error {
	kept, err := s.design(r)
	if err != nil {
		return err
	}
	q := r.URL.Query()
	page, err := findModel(kept, sightOf(q, "view."), q.Get("q"))
	if err != nil {
		return err
	}
	if !live(r) {
		return show(w, r, http.StatusOK, view.FindPage(page))
	}
	if len(page.Found) > mostFound {
		page.Count += ", the first " + strconv.Itoa(mostFound) + " listed"
		page.Found = page.Found[:mostFound]
	}
	return show(w, r, http.StatusOK, view.FindAnswer(page))
}

func findModel(kept store.Design, g sight, text string) (view.Find, error) {
	draft, err := readDraft(kept.Draft)
	if err != nil {
		return view.Find{}, err
	}
	sh := sheet{kept: kept, draft: draft, sight: g}
	sh.design, sh.wrong = draft.design()
	b := formOf(draft, sh.design, nil, false)
	drawn := view.Sheet{Sections: b.sections(), Profile: b.profile()}
	list := search(soughtOn(drawn, draft), text)
	page := view.Find{Page: frame("Find an entry of " + nameOf(draft["name"])), Name: nameOf(draft["name"]), Href: g.address(sh.address()),
		Box: view.FindBox{Send: sh.address() + "/find", Query: text, View: g.hidden()}, Count: plural(len(list), "entry", "entries")}
	for i, found := range list {
		page.Found = append(page.Found, view.Found{ID: "found-" + strconv.Itoa(i), Symbol: symbolOf(found.field.Symbol), Label: found.field.Name, Part: found.part,
			Where: found.field.Where, To: found.id, Away: found.away, Href: sh.entryAddress(url.Values{}, found.id)})
	}
	return page, nil
}
