package web

import (
	"bytes"
	"context"
	"crypto/sha256"
	"encoding/csv"
	"encoding/hex"
	"encoding/json"
	"net/http"
	"strings"

	"github.com/go-chi/chi/v5"

	"lossbook/budget"
	"lossbook/store"
	"lossbook/web/view"
)

// mapRoutes are the maps under the addresses of what they are of.
func mapRoutes(r chi.Router, s *Server) {
	for at, find := range map[string]mapFinder{
		"/designs/{id:[0-9]+}":                      s.draftToMap,
		"/designs/{id:[0-9]+}/revisions/{n:[0-9]+}": s.revisionToMap,
		sharePrefix + "{token}":                     s.shareToMap,
	} {
		r.Get(at+"/map", s.handle(mapPage(find)))
		r.Get(at+"/map.csv", s.handle(mapCSV(find)))
	}
}

// mapped is what a map is drawn of, and the page that it belongs to.
type mapped struct {
	design   *budget.Design
	revision int    // 0: the draft
	base     string // address of that page
	title    string
	foot     string // of the printed page
	home     view.Link
	worked   string // with which model, where it is not the one the revision was kept with
	shared   bool
	wrong    []budget.FieldError // why it is of the last complete state; none if it is of the current
}

// mapFinder finds what the map of a request is of.
type mapFinder func(r *http.Request) (mapped, error)

// draftToMap is the design as its sheet shows it: as it stands, or its last complete
// state.
func (s *Server) draftToMap(r *http.Request) (mapped, error) {
	kept, err := s.design(r)
	if err != nil {
		return mapped{}, err
	}
	draft, err := readDraft(kept.Draft)
	if err != nil {
		return mapped{}, err
	}
	design, wrong := draft.design()
	if len(wrong) > 0 {
		if len(kept.Complete) == 0 {
			return mapped{}, invalid(wrong)
		}
		if design, err = readDesign(kept.Complete); err != nil {
			return mapped{}, err
		}
	}
	name := nameOf(draft["name"])
	return mapped{design: design, base: sheetAddress(kept.ID), title: name + ", map", foot: name + " · draft · " + moment(kept.UpdatedAt),
		home: view.Link{Text: "the sheet"}, wrong: wrong}, nil
}

func (s *Server) revisionToMap(r *http.Request) (mapped, error) {
	saved, design, err := s.savedDesign(r)
	if err != nil {
		return mapped{}, err
	}
	return savedToMap(saved, design, revisionAddress(saved.Design, saved.Number)), nil
}

func (s *Server) shareToMap(r *http.Request) (mapped, error) {
	saved, design, err := s.sharedDesign(r)
	if err != nil {
		return mapped{}, err
	}
	m := savedToMap(saved, design, sharePrefix+chi.URLParam(r, "token"))
	m.shared = true
	return m, nil
}

func savedToMap(saved store.Revision, design *budget.Design, base string) mapped {
	link := revisionLink(saved.Design, saved.Number)
	name := nameOf(design.Name)
	return mapped{design: design, revision: saved.Number, base: base, title: name + ", " + link.Text + ", map",
		foot: name + " · " + link.Text + " · " + moment(saved.CreatedAt), home: view.Link{Text: link.Text}, worked: mapModel(saved)}
}

// mapModel says with which model a revision's map is worked: its points are not
// among those that were kept.
func mapModel(saved store.Revision) string {
	if saved.Model == budget.ModelVersion {
		return ""
	}
	return "Worked with model " + budget.ModelVersion + ", which runs now; the revision was kept with model " + saved.Model + "."
}

// mapPage shows a map on a page of its own, or gives it to the page that it stands on.
func mapPage(find mapFinder) handler {
	return func(w http.ResponseWriter, r *http.Request) error {
		m, err := find(r)
		if err != nil {
			return err
		}
		at := lookAt(m.design, m.sight(r))
		drawn, err := drawMap(r.Context(), m.design, at, m.base)
		if err != nil {
			return err
		}
		drawn.Worked = m.worked
		if live(r) {
			return show(w, r, http.StatusOK, view.MapAnswer(drawn))
		}
		page := view.MapPage{Page: frame(m.title), Title: m.title, Foot: m.foot, Shared: m.shared, Map: drawn, File: m.file()}
		page.Home = view.Link{Text: m.home.Text, Href: at.charted("map").address(m.base)}
		page.Map.Chart.Scales = scaleLinks(at.sight.charted(""), m.base+"/map")
		if len(m.wrong) > 0 {
			page.Wrong = "Of the last complete state: some entries of the sheet are missing or wrong."
		} else if at.wrong["ambient"] != "" {
			page.Wrong = "Ambient " + at.wrong["ambient"] + " The design’s own is taken."
		}
		return show(w, r, http.StatusOK, view.MapOwnPage(page))
	}
}

// sight is what the request looks at; a revision's ambient is its own.
func (m *mapped) sight(r *http.Request) sight {
	g := sightOf(r.URL.Query(), "")
	if m.revision > 0 {
		g.ambient = ""
	}
	return g
}

func (m *mapped) file() string { return fileStem(m.design.Name, m.revision) }

// drawMap computes a page's map of a valid design, under the ambient looked at.
func drawMap(ctx context.Context, d *budget.Design, at spot, base string) (view.Map, error) {
	m, err := mapAt(ctx, d, at)
	if err != nil {
		return view.Map{}, err
	}
	v := view.Map{CSV: view.Link{Text: "CSV", Href: at.mapAddress(base, ".csv", "")}, Page: view.Link{Text: "page of its own", Href: at.mapAddress(base, "", "")}}
	if len(m.Vins) == 1 {
		v.None = oneVoltage
		return v, nil
	}
	v.Caution, v.Limits, v.Words = m.caution(), m.limitLines(), m.tableWords()
	v.Chart, err = m.chart(at)
	return v, err
}

const oneVoltage = "The input has one voltage, so there is nothing to map: the efficiency against load says it all."

func mapAt(ctx context.Context, d *budget.Design, at spot) (efficiencyMap, error) {
	l := budget.MapLattice(d, mapColumns, mapRows, at.scale == "lin")
	l.Ambient = at.ambient
	return mapOf(ctx, d, l)
}

// mapAddress is where the map of what is looked at is, as a page or with an ending;
// of tells apart what it is of.
func (g sight) mapAddress(base, ending, of string) string {
	g.working, g.chart = "", ""
	address := g.address(base + "/map" + ending)
	if of == "" {
		return address
	}
	if strings.Contains(address, "?") {
		return address + "&of=" + of
	}
	return address + "?of=" + of
}

// place is where a page's map stands: closed, or fetched by the page when it is
// there, or at once on a page that is drawn whole.
func (p *picture) mapPlace(ctx context.Context, base, worked string) (*view.MapPlace, error) {
	if p.design.Input.Min.V == p.design.Input.Max.V {
		return &view.MapPlace{None: oneVoltage}, nil
	}
	v := &view.MapPlace{Open: p.spot.chart == "map", Show: p.spot.charted("map").address(base), Close: p.spot.charted("").address(base),
		Page: p.spot.mapAddress(base, "", "")}
	if !v.Open {
		return v, nil
	}
	text, err := json.Marshal(p.design)
	if err != nil {
		return nil, err
	}
	sum := sha256.Sum256(text)
	v.Source = p.spot.mapAddress(base, "", hex.EncodeToString(sum[:8]))
	if p.spot.whole {
		drawn, err := drawMap(ctx, p.design, p.spot, base)
		if err != nil {
			return nil, err
		}
		drawn.Worked = worked
		v.Drawn = &drawn
	}
	return v, nil
}

// mapHead is the header of a map's CSV.
var mapHead = []string{"vin_V", "iout_A", "ambient_C", "state", "efficiency", "loss_W", "exceeded", "cautions", "outside"}

// mapCSV gives every point of a map: one row a point, full precision, empty where a
// point has no figure, the limits as part.rule.
func mapCSV(find mapFinder) handler {
	return func(w http.ResponseWriter, r *http.Request) error {
		m, err := find(r)
		if err != nil {
			return err
		}
		if len(m.wrong) > 0 { // a file could not say that it is not of what stands on the sheet
			return invalid(m.wrong)
		}
		at := lookAt(m.design, m.sight(r))
		if wrong := at.wrong["ambient"]; wrong != "" {
			return invalid([]budget.FieldError{{Path: "ambient", Message: wrong}})
		}
		drawn, err := mapAt(r.Context(), m.design, at)
		if err != nil {
			return err
		}
		body, err := drawn.csv()
		if err != nil {
			return err
		}
		attach(w, fileName(m.design.Name, m.revision, "map.csv"), "text/csv; charset=utf-8", body)
		return nil
	}
}

func (m *efficiencyMap) csv() ([]byte, error) {
	var body bytes.Buffer
	table := csv.NewWriter(&body)
	table.Write(mapHead)
	for i := range m.size() {
		table.Write(mapRow(m.at(i)))
	}
	table.Flush()
	return body.Bytes(), table.Error()
}

func mapRow(q *budget.Spot) []string {
	row := []string{numberCell(q.Vin), numberCell(q.Iout), numberCell(q.Ambient), textCell(q.State.String())}
	if q.State != budget.Settled {
		return append(row, make([]string, len(mapHead)-len(row))...)
	}
	outside := ""
	if q.Outside {
		outside = "yes"
	}
	return append(row, numberCell(q.Efficiency), numberCell(q.Loss), limitCell(q, budget.Exceeded), limitCell(q, budget.Caution), outside)
}

func limitCell(q *budget.Spot, level budget.Level) string {
	var names []string
	for _, f := range q.Findings {
		if f.Level == level {
			names = append(names, limitAt(f).id())
		}
	}
	return textCell(strings.Join(names, " "))
}
