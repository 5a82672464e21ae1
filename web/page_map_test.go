package web

import (
	"context"
	"encoding/csv"
	"math"
	"slices"
	"strconv"
	"strings"
	"testing"

	"golang.org/x/net/html"

	"lossbook/budget"
	"lossbook/store"
)

func TestMapPages(t *testing.T) {
	s := seeded(t)
	s.want(201, "POST", "/api/v1/designs", text(t, designRequest{rough(t)}))
	link := read[shareMade](t, s.want(201, "POST", "/api/v1/designs/1/revisions/1/share", "{}")).URL
	link = link[strings.Index(link, "/share/"):]
	for _, base := range []string{"/designs/1", "/designs/1/revisions/1", link, "/designs/2"} {
		whole := s.open(200, base+"/map")
		if !whole.has("chart-map") || len(whole.all(tag("h1"))) != 1 || !strings.Contains(whole.words(), "Every fourth load") {
			t.Errorf("%s/map: %.300s", base, whole.words())
		}
		if rows := whole.all(func(n *html.Node) bool { return n.Data == "th" && attr(n, "scope") == "row" }); len(rows) != 11 {
			t.Errorf("%s/map: %d voltages in the table", base, len(rows))
		}
		piece := s.ask("GET", base+"/map", "", liveEdit)
		if text := piece.Body.String(); piece.Code != 200 || strings.Contains(text, "<html") || !strings.Contains(text, `kind="map"`) {
			t.Errorf("%s/map for a script: %d, %.200s", base, piece.Code, text)
		}
		closed := s.open(200, base)
		if closed.has("map-later") || !closed.has("map") {
			t.Errorf("%s: the map is open, or has no place", base)
		}
		opened := s.open(200, base+"?chart=map")
		if later := opened.one("map-later"); !hasAttr(later, "filled") || !opened.has("chart-map") || !strings.HasPrefix(attr(later, "src"), base+"/map?") {
			t.Errorf("%s?chart=map: the map does not stand on the page", base)
		}
		live := s.ask("GET", base+"?chart=map", "", liveEdit).Body.String()
		if !strings.Contains(live, "<loss-later") || strings.Contains(live, " filled") || strings.Contains(live, `kind="map"`) {
			t.Errorf("%s: a swapped answer computes the map", base)
		}
	}
	if got := s.open(200, link+"/map"); len(got.all(func(n *html.Node) bool { return n.Data == "a" && strings.HasPrefix(attr(n, "href"), "/designs") })) > 0 {
		t.Error("a link's map leads to the design")
	}
	if got := s.open(200, "/designs/2/map").words(); !strings.Contains(got, "switch runs away") || !strings.Contains(got, "over the limit: inductor, saturation") || !strings.Contains(got, "‡ a limit is exceeded") {
		t.Errorf("the words of a rough map: %s", got)
	}
}

func hasAttr(n *html.Node, name string) bool {
	return slices.ContainsFunc(n.Attr, func(a html.Attribute) bool { return a.Key == name })
}

// The sheet's address keeps the map open through edits and other views.
func TestMapStaysOpen(t *testing.T) {
	s := seeded(t)
	p := s.open(200, "/designs/1?chart=map&scale=lin")
	form := p.form("entries", map[string]string{"switch.rds_on": "12m"})
	if form.Get("view.chart") != "map" {
		t.Errorf("the form carries %q", form.Get("view.chart"))
	}
	src := attr(p.one("map-later"), "src")
	live := s.page(200, s.send("/designs/1", form, liveEdit), "edit")
	if later := live.one("map-later"); attr(later, "src") == src || !strings.Contains(attr(later, "src"), "scale=lin") {
		t.Errorf("after an edit the map is still fetched from %s", src)
	}
	links := 0
	for _, a := range p.all(tag("a")) {
		if href := attr(a, "href"); strings.HasPrefix(href, "/designs/1?") {
			links++
			if !strings.Contains(href, "chart=map") && words(a) != "close" {
				t.Errorf("%q leads to %s, without the map", words(a), href)
			}
		}
	}
	if links < 10 {
		t.Errorf("only %d links were looked at", links)
	}
	if moved := s.moved(s.send("/designs/1", form)); !strings.Contains(moved, "chart=map") {
		t.Errorf("without a script an edit leads to %s", moved)
	}
}

func TestMapCSV(t *testing.T) {
	s := seeded(t)
	s.want(201, "POST", "/api/v1/designs", text(t, designRequest{rough(t)}))
	w := s.want(200, "GET", "/designs/2/map.csv", "")
	if got := w.Header().Get("Content-Disposition"); got != "attachment; filename=rough-b-amp-map.csv" {
		t.Errorf("it is called %s", got)
	}
	rows, err := csv.NewReader(w.Body).ReadAll()
	if err != nil || len(rows) != 2401 || !slices.Equal(rows[0], mapHead) {
		t.Fatalf("%d rows, %v", len(rows), err)
	}
	m := mapOfSize(t, rough(t), mapColumns, mapRows)
	seen := map[string]int{}
	for i, row := range rows[1:] {
		q := m.at(i)
		seen[row[3]]++
		if vin, err := strconv.ParseFloat(row[0], 64); err != nil || vin != q.Vin || row[3] != q.State.String() || (row[6] != "") != exceeds(q) {
			t.Fatalf("row %d: %v", i, row)
		}
		if q.State != budget.Settled {
			if strings.Join(row[4:], "") != "" {
				t.Errorf("row %d has figures: %v", i, row)
			}
			continue
		}
		if e, err := strconv.ParseFloat(row[4], 64); err != nil || math.Float64bits(e) != math.Float64bits(q.Efficiency) {
			t.Errorf("row %d: %v, want %v", i, row, q.Efficiency)
		}
	}
	if seen["settled"] < 1000 || seen["out_of_reach"] < 100 || seen["runaway"] < 3 {
		t.Errorf("%v", seen)
	}
	if row := rows[len(rows)-1]; !strings.Contains(row[6], "inductor.saturation") || !strings.Contains(row[6], "switch.junction") {
		t.Errorf("the last point exceeds %q", row[6])
	}
}

func TestMapRefusals(t *testing.T) {
	s := seeded(t)
	for address, status := range map[string]int{
		"/designs/99/map": 404, "/designs/99/map.csv": 404, "/designs/1/revisions/9/map": 404, "/share/nothing/map": 404, "/share/nothing/map.csv": 404,
		"/designs/x/map": 404, "/designs/1/map?ambient=4k7x": 200, "/designs/1/map.csv?ambient=4k7x": 422, "/designs/1/map.csv?ambient=-400": 422,
		"/designs/1/map?scale=none&load=7&vin=!": 200, "/designs/1/revisions/1/map.csv?ambient=4k7x": 200,
	} {
		s.want(status, "GET", address, "")
	}
	if got := s.open(200, "/designs/1/map?ambient=4k7x").words(); !strings.Contains(got, "The design’s own is taken") {
		t.Errorf("a wrong ambient: %s", got)
	}
	if got := s.open(200, "/designs/1/map?ambient=5").words(); !strings.Contains(got, "at 5 °C") {
		t.Errorf("another ambient: %s", got)
	}
	s.want(405, "POST", "/designs/1/map", "")
}

// A sheet that can't be read shows the last good map; one that never could, none.
func TestMapOfADraft(t *testing.T) {
	s := seeded(t)
	before := s.want(200, "GET", "/designs/1/map", "").Body.String()
	s.send("/designs/1", s.open(200, "/designs/1").form("entries", map[string]string{"switch.rds_on": "4k7x"}), liveEdit)
	if after := s.want(200, "GET", "/designs/1/map", "").Body.String(); dataOf(t, after) != dataOf(t, before) {
		t.Error("a wrong entry changes the map")
	}
	if got := s.open(200, "/designs/1/map").words(); !strings.Contains(got, "Of the last complete state") {
		t.Errorf("it isn’t said what the map is of: %s", got)
	}
	s.want(422, "GET", "/designs/1/map.csv", "")
	draft, complete, err := Draft{"name": "Begun", "topology": "buck"}.stored()
	if err != nil {
		t.Fatal(err)
	}
	begun, err := s.store.Create(context.Background(), store.NewDesign{Name: "Begun", Draft: draft, Complete: complete})
	if err != nil {
		t.Fatal(err)
	}
	for _, ending := range []string{"/map", "/map.csv"} {
		s.want(422, "GET", sheetAddress(begun.ID)+ending, "")
	}
	if s.open(200, sheetAddress(begun.ID)+"?chart=map").has("map") {
		t.Error("a design that was never complete has a map")
	}
}

func dataOf(t *testing.T, page string) string {
	t.Helper()
	_, data, found := strings.Cut(page, ` data="`)
	if data, _, _ = strings.Cut(data, `"`); !found || len(data) < 1000 {
		t.Fatalf("no map in %.200s", page)
	}
	return data
}

func TestOneVoltageHasNoMap(t *testing.T) {
	s := newSite(t)
	d := sample(t, "frost")
	d.Input.Min, d.Input.Max = d.Input.Nominal, d.Input.Nominal
	s.want(201, "POST", "/api/v1/designs", text(t, designRequest{d}))
	for _, path := range []string{"/designs/1", "/designs/1?chart=map", "/designs/1/map"} {
		if p := s.open(200, path); !strings.Contains(p.words(), "nothing to map") || p.has("chart-map") || p.has("map-later") {
			t.Errorf("%s: %s", path, p.words())
		}
	}
	if rows := strings.Count(s.want(200, "GET", "/designs/1/map.csv", "").Body.String(), "\n"); rows != 61 {
		t.Errorf("%d rows", rows)
	}
}
