package web

import (
	"bytes"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"mime"
	"net/http"
	"strconv"
	"strings"

	"github.com/go-chi/chi/v5"

	"lossbook/budget"
)

func apiRoutes(r chi.Router, s *Server) {
	r.Route("/api/v1", func(r chi.Router) {
		r.Get("/openapi.json", s.handle(getOpenAPI))
		r.Post("/budget", s.handle(postBudget))
		r.Get("/designs", s.handle(s.listDesigns))
		r.Post("/designs", s.handle(s.postDesign))
		r.Get("/designs/{id:[0-9]+}", s.handle(s.getDesign))
		r.Put("/designs/{id:[0-9]+}", s.handle(s.putDesign))
		r.Delete("/designs/{id:[0-9]+}", s.handle(s.deleteDesign))
		r.Get("/designs/{id:[0-9]+}/revisions", s.handle(s.listRevisions))
		r.Post("/designs/{id:[0-9]+}/revisions", s.handle(s.postRevision))
		r.Get("/designs/{id:[0-9]+}/revisions/{n:[0-9]+}", s.handle(s.getRevision))
		r.Get("/designs/{id:[0-9]+}/revisions/{n:[0-9]+}/efficiency.csv", s.handle(savedCSV(s.savedDesign)))
		const share = "/designs/{id:[0-9]+}/revisions/{n:[0-9]+}/share"
		r.Get(share, s.handle(s.listShares))
		r.Post(share, s.handle(s.postShare))
		r.Delete(share, s.handle(s.deleteShares))
		r.Delete(share+"/{share:[0-9]+}", s.handle(s.deleteShare))
		r.Get("/designs/{id:[0-9]+}/revisions/{n:[0-9]+}/efficiency.xlsx", s.handle(savedXLSX(s.savedDesign)))
		r.Get("/designs/{id:[0-9]+}/revisions/{n:[0-9]+}/weights", s.handle(s.getWeights))
	})
}

// budgetRequest asks for results; without points, over the default grid.
type budgetRequest struct {
	Design *budget.Design `json:"design"`
	Points []requestPoint `json:"points"`

	Working bool `json:"working"` // with how each item came about
}

// requestPoint is a point asked for; its ambient may be left to the design.
type requestPoint struct {
	Vin     budget.Num `json:"vin"`
	Iout    budget.Num `json:"iout"`
	Ambient budget.Num `json:"ambient"`
}

func postBudget(w http.ResponseWriter, r *http.Request) error {
	var ask budgetRequest
	wrong, err := readJSON(r, &ask)
	if err != nil {
		return err
	}
	wrong = designErrors(wrong, ask.Design)
	points, missing := ask.points()
	wrong = append(wrong, missing...)
	if ask.Working && len(ask.Points) > maxWorkings {
		wrong = append(wrong, budget.FieldError{Path: "points", Message: fmt.Sprintf("holds %d points; with the working at most %d are taken", len(ask.Points), maxWorkings)})
	}
	if len(wrong) > 0 {
		return invalid(wrong)
	}
	found, wrong, err := compute(r.Context(), ask.Design, points)
	if err != nil {
		return err
	}
	if len(wrong) > 0 {
		return invalid(wrong)
	}
	if ask.Working {
		if err := found.work(r.Context(), ask.Design); err != nil {
			return err
		}
	}
	return writeJSON(w, http.StatusOK, found)
}

// points reads the points asked for, once the design stands.
func (ask *budgetRequest) points() (points []budget.Point, missing []budget.FieldError) {
	if ask.Design == nil || ask.Points == nil {
		return nil, nil
	}
	points = make([]budget.Point, len(ask.Points))
	for i, p := range ask.Points {
		missing = append(missing, p.missing(rowPath("points", i))...)
		points[i] = budget.Point{Vin: p.Vin.V, Iout: p.Iout.V, Ambient: ask.Design.AmbientTemperature()}
		if p.Ambient.Stated {
			points[i].Ambient = p.Ambient.V
		}
	}
	return points, missing
}

func (p requestPoint) missing(path string) (errs []budget.FieldError) {
	if !p.Vin.Stated {
		errs = append(errs, absent(below(path, "vin")))
	}
	if !p.Iout.Stated {
		errs = append(errs, absent(below(path, "iout")))
	}
	return errs
}

func absent(path string) budget.FieldError {
	return budget.FieldError{Path: path, Message: "is missing", Missing: true}
}

// designErrors adds, to what could not be read of a body, everything that keeps
// its design from a budget; one word for one field.
func designErrors(wrong []budget.FieldError, d *budget.Design) []budget.FieldError {
	named := map[string]bool{}
	for _, e := range wrong {
		named[e.Path] = true
	}
	if d == nil {
		if !named["design"] {
			wrong = append(wrong, absent("design"))
		}
		return wrong
	}
	for _, e := range budget.Validate(d) {
		e.Path = below("design", e.Path)
		if !named[e.Path] {
			wrong = append(wrong, e)
		}
	}
	return wrong
}

// readJSON reads a request's body into what target points at.
func readJSON(r *http.Request, target any) ([]budget.FieldError, error) {
	kind, parameters, err := mime.ParseMediaType(r.Header.Get("Content-Type"))
	charset := parameters["charset"]
	if err != nil || kind != "application/json" || charset != "" && !strings.EqualFold(charset, "utf-8") {
		return nil, &Failure{Status: http.StatusUnsupportedMediaType, Title: "Not JSON", Detail: "Send the body with Content-Type: application/json."}
	}
	if r.Header.Get("Content-Encoding") != "" {
		return nil, &Failure{Status: http.StatusUnsupportedMediaType, Title: "Compressed body", Detail: "Send the body as it is, without Content-Encoding."}
	}
	raw, err := io.ReadAll(r.Body)
	if err != nil {
		return nil, unreadable(err)
	}
	wrong, err := decode(raw, target)
	var syntax *syntaxError
	if errors.As(err, &syntax) {
		return nil, &Failure{Status: http.StatusBadRequest, Title: "Not readable as JSON", Detail: syntax.words}
	}
	return wrong, err
}

// unreadable tells a body over the limit from one whose sender went away.
func unreadable(err error) error {
	var tooLarge *http.MaxBytesError
	if errors.As(err, &tooLarge) {
		return err
	}
	return &Failure{Status: http.StatusBadRequest, Title: "The body did not arrive", Detail: "The connection ended before the body did. Send it again.", cause: err}
}

// writeJSON answers with a value, written whole before the first header.
func writeJSON(w http.ResponseWriter, status int, value any) error {
	body, err := encodeJSON(value)
	if err != nil {
		return err
	}
	w.Header().Set("Content-Type", "application/json")
	w.WriteHeader(status)
	w.Write(body) // an error means that nobody is there to be told
	return nil
}

// encodeJSON writes floats with the shortest digits that read back the same,
// refuses what is no number, and leaves <, > and & as they are.
func encodeJSON(value any) ([]byte, error) {
	var body bytes.Buffer
	encoder := json.NewEncoder(&body)
	encoder.SetEscapeHTML(false)
	err := encoder.Encode(value)
	return body.Bytes(), err
}

// number reads a number of the address, whose pattern holds digits alone; one
// too long for any record names none.
func number(r *http.Request, name string) (int64, error) {
	n, err := strconv.ParseInt(chi.URLParam(r, name), 10, 64)
	if err != nil {
		return 0, errNoPage
	}
	return n, nil
}
