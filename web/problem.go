package web

import (
	"encoding/json"
	"net/http"

	"lossbook/budget"
)

// problem is an error of the API as RFC 9457 has it, with members of our own.
type problem struct {
	Type    string          `json:"type"`
	Title   string          `json:"title"`
	Status  int             `json:"status"`
	Detail  string          `json:"detail"`
	ID      string          `json:"id,omitempty"`
	Errors  []fieldProblem  `json:"errors,omitempty"`
	Version int64           `json:"version,omitempty"` // of a stale save: the one sent
	Current *designResource `json:"current,omitempty"` // of a stale save: the design as it is
}

type fieldProblem struct {
	Field   string `json:"field"`
	Message string `json:"message"`
}

func writeProblem(w http.ResponseWriter, f *Failure) {
	body, err := json.Marshal(problem{Type: "about:blank", Title: f.Title, Status: f.Status, Detail: f.Detail,
		ID: f.ID, Errors: fieldProblems(f.Fields), Version: f.Sent, Current: f.Current})
	if err != nil { // only Current can fail; without it the rest still helps
		f.Current = nil
		writeProblem(w, f)
		return
	}
	w.Header().Set("Content-Type", "application/problem+json")
	w.WriteHeader(f.Status)
	w.Write(append(body, '\n'))
}

func fieldProblems(fields []budget.FieldError) []fieldProblem {
	var problems []fieldProblem
	for _, f := range fields {
		problems = append(problems, fieldProblem{f.Path, f.Message})
	}
	return problems
}
