package web

import (
	"bytes"
	"net/http"
	"sync"

	"github.com/a-h/templ"

	"lossbook/assets"
	"lossbook/web/view"
)

// frame is what every page has around its content.
func frame(title string) view.Page {
	return view.Page{Title: title, Assets: view.Assets{
		Style: assets.URL("app.css"), Icon: assets.URL("icon.svg"), Swap: assets.HTMXConfig,
		Scripts: []string{
			assets.URL("lib/htmx.min.js"), assets.URL("lib/d3.min.js"), assets.URL("lib/plot.umd.min.js"),
			assets.URL("chart.js"), assets.URL("chart-lines.js"), assets.URL("chart-stack.js"), assets.URL("chart-waves.js"), assets.URL("chart-map.js"),
			assets.URL("chart-take.js"), assets.URL("later.js"), assets.URL("app.js"), assets.URL("bring.js"), assets.URL("steps.js"), assets.URL("find.js"),
			assets.URL("working.js"),
		},
	}}
}

// show draws a page whole before its first header, so that a page that fails
// is never half of one.
func show(w http.ResponseWriter, r *http.Request, status int, page templ.Component) error {
	body := bodies.Get().(*bytes.Buffer)
	defer letGo(body)
	if err := page.Render(r.Context(), body); err != nil {
		return err
	}
	w.Header().Set("Content-Type", "text/html; charset=utf-8")
	w.WriteHeader(status)
	w.Write(body.Bytes()) // an error means that nobody is there to be told
	return nil
}

// bodies are rooms for pages to be drawn in: a sheet takes some 300 kB.
var bodies = sync.Pool{New: func() any { return new(bytes.Buffer) }}

// letGo empties a room for the next page; one that grew far beyond a sheet is not kept.
func letGo(body *bytes.Buffer) {
	const most = 4 << 20
	if body.Reset(); body.Cap() <= most {
		bodies.Put(body)
	}
}

// live reports whether a script asks, and swaps the answer into the page.
func live(r *http.Request) bool {
	return r.Header.Get("HX-Request") == "true" && r.Header.Get("HX-History-Restore-Request") == ""
}

// back sends the browser on to a page that only shows.
func back(w http.ResponseWriter, r *http.Request, address string) error {
	http.Redirect(w, r, address, http.StatusSeeOther)
	return nil
}

// failurePage tells a person what a script is told by problem details.
func failurePage(w http.ResponseWriter, r *http.Request, f *Failure) {
	fault := view.Fault{Page: frame(f.Title), Heading: f.Title, Words: []string{f.Detail},
		Details: problemsOf(f.Fields, false), Shared: isShared(r)}
	if !fault.Shared {
		fault.Back = view.Link{Text: "All designs", Href: "/"}
	}
	fault.Page.Failed = true
	if f.ID != "" {
		fault.Words = append(fault.Words, "The log has the cause under "+f.ID+".")
	}
	page := view.Failure(fault)
	if live(r) {
		page = view.FailureAnswer(fault)
	}
	if err := show(w, r, f.Status, page); err != nil {
		plainErrorPage(w, r, f)
	}
}
