package web

import (
	"context"
	"crypto/rand"
	"errors"
	"fmt"
	"html"
	"net/http"
	"runtime/debug"
	"strings"

	"lossbook/budget"
	"lossbook/store"
)

// Failure is what a person or a script is told when a request does not
// succeed: safe words, what to do, and where. Its cause is for the log alone.
type Failure struct {
	Status  int
	Title   string              // what happened
	Detail  string              // what to do about it
	Fields  []budget.FieldError // what is wrong with the entries
	Current *designResource     // of a stale save: the design as it is now
	Sent    int64               // of a stale save: the version it was made from
	ID      string              // finds the cause in the log
	cause   error
}

// Error returns what happened and why.
func (f *Failure) Error() string {
	if f.cause != nil {
		return fmt.Sprintf("%s: %v", f.Title, f.cause)
	}
	return f.Title + ": " + f.Detail
}

// Unwrap returns the cause.
func (f *Failure) Unwrap() error { return f.cause }

var (
	errNoPage = &Failure{Status: http.StatusNotFound, Title: "Not found",
		Detail: "There is nothing at this address. The list of designs is at /."}
	errMethod = &Failure{Status: http.StatusMethodNotAllowed, Title: "Method not allowed",
		Detail: "This address takes other methods: see the Allow header."}
)

// invalid refuses entries, each with what would be right.
func invalid(fields []budget.FieldError) *Failure {
	return &Failure{Status: http.StatusUnprocessableEntity, Title: "Entries to correct",
		Detail: "Some entries are missing or wrong; each is named with what would be right.", Fields: fields}
}

// failureOf finds the words for an error. What is not known here is a fault of
// the program, and says no more than that.
func failureOf(err error) *Failure {
	var f *Failure
	var stale *store.StaleError
	var tooLarge *http.MaxBytesError
	switch {
	case errors.As(err, &f):
		own := *f // so that an id is never written into a shared value
		return &own
	case errors.As(err, &stale):
		return staleFailure(stale)
	case errors.As(err, &tooLarge):
		return &Failure{Status: http.StatusRequestEntityTooLarge, Title: "Too large",
			Detail: fmt.Sprintf("A request may hold %d MiB.", tooLarge.Limit>>20), cause: err}
	case errors.Is(err, store.ErrNotFound):
		return &Failure{Status: http.StatusNotFound, Title: "Not found",
			Detail: "There is no such design or revision; it may have been deleted.", cause: err}
	case errors.Is(err, store.ErrFull):
		return &Failure{Status: http.StatusInsufficientStorage, Title: "The disk is full",
			Detail: "Nothing was saved, and nothing was lost. Make room on the disk and save again.", cause: err}
	case errors.Is(err, store.ErrCorrupt):
		return &Failure{Status: http.StatusInternalServerError, Title: "This record is damaged",
			Detail: "What is stored differs from what was saved, so it is not shown. Restore the data file from a copy.", cause: err}
	case errors.Is(err, context.Canceled):
		return &Failure{Status: http.StatusServiceUnavailable, Title: "Interrupted",
			Detail: "The request ended before its answer was ready. Send it again.", cause: err}
	}
	return &Failure{Status: http.StatusInternalServerError, Title: "Something went wrong",
		Detail: "This is a fault of the program; nothing of yours was changed by it.", cause: err}
}

func staleFailure(stale *store.StaleError) *Failure {
	f := &Failure{Status: http.StatusConflict, Title: "Changed meanwhile", cause: stale,
		Detail: "The design was changed after the version this was made from. Read it again, then repeat the change."}
	if current, err := resourceOf(stale.Current); err == nil {
		f.Current = current
	}
	return f
}

// fail is the one place where an error becomes an answer.
func (s *Server) fail(w http.ResponseWriter, r *http.Request, err error) {
	f := failureOf(err)
	if f.Status >= http.StatusInternalServerError {
		f.ID = rand.Text()[:10]
		s.log.ErrorContext(r.Context(), f.Title, "id", f.ID, "method", r.Method, "path", loggedPath(r), "cause", err)
	}
	if isAPI(r) {
		writeProblem(w, f)
		return
	}
	s.errorPage(w, r, f)
}

func isAPI(r *http.Request) bool { return strings.HasPrefix(r.URL.Path, "/api/") }

// recovered turns a panic into an answer and a line in the log.
func (s *Server) recovered(next http.Handler) http.Handler {
	return http.HandlerFunc(func(w http.ResponseWriter, r *http.Request) {
		defer func() {
			p := recover()
			if p == http.ErrAbortHandler {
				panic(p) // how a handler asks the server to cut the connection
			}
			if p != nil {
				s.fail(w, r, fmt.Errorf("panic: %v\n%s", p, debug.Stack()))
			}
		}()
		next.ServeHTTP(w, r)
	})
}

// plainErrorPage says it without a layout; it serves where no page can.
func plainErrorPage(w http.ResponseWriter, _ *http.Request, f *Failure) {
	w.Header().Set("Content-Type", "text/html; charset=utf-8")
	w.WriteHeader(f.Status)
	id := ""
	if f.ID != "" {
		id = "<p>The log has the cause under " + html.EscapeString(f.ID) + ".</p>"
	}
	fmt.Fprintf(w, "<!doctype html><html lang=\"en\"><title>%[1]s · Lossbook</title><h1>%[1]s</h1><p>%[2]s</p>%[3]s<p><a href=\"/\">Designs</a></p></html>\n",
		html.EscapeString(f.Title), html.EscapeString(f.Detail), id)
}
