package web

import (
	"net/http"
	"strings"
	"sync"
)

// object is a JSON object of the API's description. Its names are written in
// order, so the description is the same at every start.
type object = map[string]any

var describedAPI = sync.OnceValues(func() ([]byte, error) { return encodeJSON(openAPI()) })

func getOpenAPI(w http.ResponseWriter, _ *http.Request) error {
	body, err := describedAPI()
	if err != nil {
		return err
	}
	w.Header().Set("Content-Type", "application/json")
	w.Write(body)
	return nil
}

// operation describes one method of one address.
type operation struct {
	method, path string
	summary      string
	body         object // nil: takes none
	status       string
	answer       object // nil: gives none
	kind         string // of the answer, where it is not JSON
	refusals     string // statuses of problems beside 500
}

const (
	onDesign   = "/designs/{id}"
	onRevision = "/designs/{id}/revisions/{n}"
	onShare    = onRevision + "/share"
)

func operations() []operation {
	design, revision := ref("DesignResource"), ref("Revision")
	return []operation{
		{method: "get", path: "/openapi.json", summary: "This description", status: "200", answer: object{"type": "object"}},
		{method: "post", path: "/budget", summary: "Work out the budget of a design at the points given, else at input min, nominal and max over 5 to 100 % of full load",
			body: ref("BudgetRequest"), status: "200", answer: ref("Answer"), refusals: "400 413 415 422"},
		{method: "get", path: "/designs", summary: "List the designs, the last changed first", status: "200", answer: listOf("designs", "DesignHead")},
		{method: "post", path: "/designs", summary: "Keep a new design", body: ref("DesignRequest"), status: "201", answer: design, refusals: "400 413 415 422 507"},
		{method: "get", path: onDesign, summary: "Read a design: its last complete state, and what its sheet lacks if that was edited on since", status: "200", answer: design, refusals: "404"},
		{method: "put", path: onDesign, summary: "Change a design from the version that was read", body: ref("ChangeRequest"), status: "200", answer: design, refusals: "400 404 409 413 415 422 507"},
		{method: "delete", path: onDesign, summary: "Delete a design", status: "204", refusals: "404 507"},
		{method: "get", path: onDesign + "/revisions", summary: "List the revisions of a design, the latest first", status: "200", answer: listOf("revisions", "RevisionHead"), refusals: "404"},
		{method: "post", path: onDesign + "/revisions", summary: "Save the design as it stands, with its results, as a revision that never changes",
			body: ref("RevisionRequest"), status: "201", answer: revision, refusals: "400 404 409 413 415 422 507"},
		{method: "get", path: onRevision, summary: "Read a revision as it was saved", status: "200", answer: revision, refusals: "404"},
		{method: "get", path: onRevision + "/efficiency.csv", summary: "The saved results as a table", status: "200", answer: object{"type": "string"}, kind: "text/csv", refusals: "404"},
		{method: "post", path: onShare, summary: "Make a link that opens this revision, and nothing else, to whoever has it; its address is told this once",
			body: ref("ShareRequest"), status: "201", answer: ref("ShareMade"), refusals: "400 404 413 415 422 507"},
		{method: "get", path: onShare, summary: "List the links to a revision, the latest first", status: "200", answer: listOf("shares", "ShareHead"), refusals: "404"},
		{method: "delete", path: onShare, summary: "Revoke every link to a revision", status: "204", refusals: "404 507"},
		{method: "delete", path: onShare + "/{share}", summary: "Revoke a link", status: "204", refusals: "404 507"},
		{method: "get", path: onRevision + "/efficiency.xlsx", summary: "The saved results as a workbook: entries, ledger, table with a chart, findings, provenance",
			status: "200", answer: object{"type": "string", "contentMediaType": workbookKind}, kind: workbookKind, refusals: "404"},
		{method: "get", path: onRevision + "/weights", summary: "Weighted efficiencies at each saved input voltage, and the energy a day of the load profile", status: "200", answer: ref("Weights"), refusals: "404"},
	}
}

func openAPI() object {
	paths := object{}
	for _, op := range operations() {
		at, known := paths[op.path].(object)
		if !known {
			at = object{}
			paths[op.path] = at
		}
		at[op.method] = op.describe()
	}
	return object{
		"openapi":    "3.1.0",
		"info":       object{"title": "Lossbook", "version": "1", "description": "Loss budgets of DC-DC converters. Values are in SI base units and °C."},
		"servers":    []object{{"url": "/api/v1"}},
		"paths":      paths,
		"components": object{"schemas": schemas()},
	}
}

func (op operation) describe() object {
	described := object{"summary": op.summary, "responses": op.responses()}
	if op.body != nil {
		described["requestBody"] = object{"required": true, "content": content("application/json", op.body)}
	}
	var parameters []object
	for _, name := range []string{"id", "n", "share"} {
		if strings.Contains(op.path, "{"+name+"}") {
			parameters = append(parameters, object{"name": name, "in": "path", "required": true, "schema": object{"type": "integer", "minimum": 1}})
		}
	}
	if parameters != nil {
		described["parameters"] = parameters
	}
	return described
}

func (op operation) responses() object {
	success := object{"description": "Done"}
	if op.answer != nil {
		kind := op.kind
		if kind == "" {
			kind = "application/json"
		}
		success["content"] = content(kind, op.answer)
	}
	if op.status == "201" {
		success["headers"] = object{"Location": object{"description": "where it is now", "schema": object{"type": "string"}}}
	}
	responses := object{op.status: success}
	for _, status := range append(strings.Fields(op.refusals), "500") {
		responses[status] = object{"description": "Refused, with what to do", "content": content("application/problem+json", ref("Problem"))}
	}
	return responses
}

func content(kind string, schema object) object { return object{kind: object{"schema": schema}} }

func ref(name string) object { return object{"$ref": "#/components/schemas/" + name} }

func listOf(name, of string) object {
	return object{"type": "object", "required": []string{name},
		"properties": object{name: object{"type": "array", "items": ref(of)}}}
}
