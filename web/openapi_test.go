package web

import (
	"encoding/json"
	"fmt"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"lossbook/budget"
)

// description is openapi.json as a reader sees it.
func description(t *testing.T) map[string]any {
	t.Helper()
	return read[map[string]any](t, newSite(t).want(200, "GET", "/api/v1/openapi.json", ""))
}

// TestEveryRouteIsDescribed compares the description with the router, both ways.
func TestEveryRouteIsDescribed(t *testing.T) {
	var described, served []string
	for path, methods := range description(t)["paths"].(map[string]any) {
		for method := range methods.(map[string]any) {
			described = append(described, strings.ToUpper(method)+" /api/v1"+path)
		}
	}
	for _, r := range routesOf(t, newSite(t).router) {
		if strings.HasPrefix(r.pattern, "/api/") {
			served = append(served, r.method+" "+strings.ReplaceAll(r.pattern, ":[0-9]+", ""))
		}
	}
	slices.Sort(described)
	slices.Sort(served)
	if !slices.Equal(described, served) || len(served) < 10 {
		t.Errorf("described\n%s\nserved\n%s", strings.Join(described, "\n"), strings.Join(served, "\n"))
	}
}

// TestSchemaAndDecoderAgree holds the schema of a design against everything
// that is read here: the samples, the cases, and bodies that are refused.
func TestSchemaAndDecoderAgree(t *testing.T) {
	doc := description(t)
	for name, d := range everyDesign(t) {
		if errs := conforms(doc, "Design", text(t, d)); len(errs) > 0 {
			t.Errorf("%s: %v", name, errs)
		}
	}
	if errs := conforms(doc, "RevisionRequest", "{}"); len(errs) > 0 {
		t.Errorf("a revision without a note: %v", errs)
	}
	files, err := filepath.Glob("../testdata/malformed/422-*.json")
	if err != nil || len(files) < 15 {
		t.Fatalf("%d files: %v", len(files), err)
	}
	for _, file := range files {
		body, err := os.ReadFile(file)
		if err != nil {
			t.Fatal(err)
		}
		if errs := conforms(doc, "BudgetRequest", string(body)); len(errs) == 0 {
			t.Errorf("the schema takes %s", file)
		}
	}
}

// TestSchemaRefusesWhatValidationRefuses covers each keyword of the schema.
func TestSchemaRefusesWhatValidationRefuses(t *testing.T) {
	doc := description(t)
	for name, change := range map[string]func(*budget.Design){
		"format":      func(d *budget.Design) { d.Format = "lossbook/2" },
		"enum":        func(d *budget.Design) { d.Topology = "sepic" },
		"above zero":  func(d *budget.Design) { d.Frequency = budget.N(0) },
		"below zero":  func(d *budget.Design) { d.Switch.RGate = budget.N(-1) },
		"at most":     func(d *budget.Design) { d.Inductor.Core.Alpha = budget.N(11) },
		"required":    func(d *budget.Design) { d.Switch.RdsOn = budget.Num{} },
		"nested":      func(d *budget.Design) { d.Input.Nominal = budget.Num{} },
		"part":        func(d *budget.Design) { d.Inductor = nil },
		"rectifier":   func(d *budget.Design) { d.Rectifier = "synchronous" },
		"list member": func(d *budget.Design) { d.Series[0].Location = "nowhere" },
		"list length": func(d *budget.Design) { d.Series = make([]budget.SeriesResistance, budget.MaxRows+1) },
	} {
		d := sample(t, "frost")
		change(d)
		if errs := conforms(doc, "Design", text(t, d)); len(errs) == 0 {
			t.Errorf("%s: the schema takes it", name)
		}
		if wrong := budget.Validate(d); len(wrong) == 0 && name != "list length" {
			t.Errorf("%s: the validation takes it", name)
		}
	}
}

// TestAnswersAreAsDescribed checks what the server really sends.
func TestAnswersAreAsDescribed(t *testing.T) {
	s, doc := seeded(t), description(t)
	frost := text(t, designRequest{sample(t, "frost")})
	points := strings.TrimSuffix(frost, "}\n") + `,"points":[{"vin":12,"iout":1},{"vin":30,"iout":1},{"vin":12,"iout":0,"ambient":200}]}`
	for _, c := range []struct {
		schema, method, path, body string
		status                     int
	}{
		{"Answer", "POST", "/api/v1/budget", frost, 200},
		{"Answer", "POST", "/api/v1/budget", points, 200},
		{"Problem", "POST", "/api/v1/budget", "{}", 422},
		{"DesignResource", "GET", "/api/v1/designs/1", "", 200},
		{"Revision", "GET", "/api/v1/designs/1/revisions/1", "", 200},
		{"Problem", "GET", "/api/v1/designs/9", "", 404},
		{"Problem", "PUT", "/api/v1/designs/1", strings.TrimSuffix(frost, "}\n") + `,"version":7}`, 409},
	} {
		w := s.want(c.status, c.method, c.path, c.body)
		if errs := conforms(doc, c.schema, w.Body.String()); len(errs) > 0 {
			t.Errorf("%s %s: %v", c.method, c.path, errs)
		}
	}
}

// conforms checks a JSON text against a schema of the description. It knows the
// keywords used there and fails on any other, so that none is passed over.
func conforms(doc map[string]any, name, body string) []string {
	var value any
	if err := json.Unmarshal([]byte(body), &value); err != nil {
		return []string{err.Error()}
	}
	c := checker{schemas: doc["components"].(map[string]any)["schemas"].(map[string]any)}
	c.check(name, c.schemas[name].(map[string]any), value)
	return c.errs
}

type checker struct {
	schemas map[string]any
	errs    []string
}

func (c *checker) wrong(at, format string, args ...any) {
	c.errs = append(c.errs, at+": "+fmt.Sprintf(format, args...))
}

func (c *checker) fits(schema any, value any) bool {
	inner := checker{schemas: c.schemas}
	inner.check("", schema.(map[string]any), value)
	return len(inner.errs) == 0
}

func (c *checker) check(at string, schema map[string]any, value any) {
	for keyword, rule := range schema {
		switch keyword {
		case "description", "title", "default", "x-unit", "format", "then":
		case "$ref":
			name := strings.TrimPrefix(rule.(string), "#/components/schemas/")
			c.check(at, c.schemas[name].(map[string]any), value)
		case "type":
			if got := typeOf(value); got != rule && !(rule == "number" && got == "integer") {
				c.wrong(at, "is %s, not %s", got, rule)
			}
		case "const":
			if value != rule {
				c.wrong(at, "is not %v", rule)
			}
		case "enum":
			if !slices.Contains(rule.([]any), value) {
				c.wrong(at, "%v is none of %v", value, rule)
			}
		case "if":
			if c.fits(rule, value) {
				c.check(at, schema["then"].(map[string]any), value)
			}
		case "allOf":
			for _, part := range rule.([]any) {
				c.check(at, part.(map[string]any), value)
			}
		case "anyOf":
			if !slices.ContainsFunc(rule.([]any), func(part any) bool { return c.fits(part, value) }) {
				c.wrong(at, "fits none")
			}
		default:
			c.sized(at, keyword, schema, rule, value)
		}
	}
}

func typeOf(value any) string {
	switch v := value.(type) {
	case nil:
		return "null"
	case bool:
		return "boolean"
	case string:
		return "string"
	case []any:
		return "array"
	case map[string]any:
		return "object"
	case float64:
		if v == float64(int64(v)) {
			return "integer"
		}
	}
	return "number"
}

func (c *checker) sized(at, keyword string, schema map[string]any, rule, value any) {
	switch v := value.(type) {
	case float64:
		limit, _ := rule.(float64)
		if keyword == "minimum" && v < limit || keyword == "exclusiveMinimum" && v <= limit || keyword == "maximum" && v > limit {
			c.wrong(at, "%v is beyond %s %v", v, keyword, limit)
		}
	case []any:
		c.list(at, keyword, rule, v)
	case map[string]any:
		c.members(at, keyword, schema, rule, v)
	}
	if !slices.Contains([]string{"minimum", "maximum", "exclusiveMinimum", "items", "prefixItems", "minItems", "maxItems", "properties", "required", "additionalProperties"}, keyword) {
		c.wrong(at, "the schema has the keyword %s, which this check does not know", keyword)
	}
}

func (c *checker) list(at, keyword string, rule any, list []any) {
	for i, element := range list {
		if keyword == "items" {
			c.check(fmt.Sprintf("%s[%d]", at, i), rule.(map[string]any), element)
		}
		if parts, ok := rule.([]any); ok && keyword == "prefixItems" && i < len(parts) {
			c.check(fmt.Sprintf("%s[%d]", at, i), parts[i].(map[string]any), element)
		}
	}
	if n := float64(len(list)); keyword == "minItems" && n < rule.(float64) || keyword == "maxItems" && n > rule.(float64) {
		c.wrong(at, "has %v entries", n)
	}
}

func (c *checker) members(at, keyword string, schema map[string]any, rule any, members map[string]any) {
	properties, _ := schema["properties"].(map[string]any)
	switch keyword {
	case "required":
		for _, name := range rule.([]any) {
			if _, there := members[name.(string)]; !there {
				c.wrong(at, "%s is absent", name)
			}
		}
	case "properties":
		for name, value := range members {
			if property, known := properties[name]; known {
				c.check(at+"."+name, property.(map[string]any), value)
			}
		}
	case "additionalProperties":
		for name, value := range members {
			if _, known := properties[name]; !known && rule == false {
				c.wrong(at, "%s is unknown", name)
			} else if other, ok := rule.(map[string]any); ok && !known {
				c.check(at+"."+name, other, value)
			}
		}
	}
}
