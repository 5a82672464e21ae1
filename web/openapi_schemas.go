package web

import (
	"encoding/json"
	"reflect"
	"strings"
	"time"

	"lossbook/budget"
)

// schemas describes what goes in and out: the design from the table of fields,
// everything else from the types that are read and written.
func schemas() object {
	all := object{"Design": designSchema()}
	for name, t := range map[string]reflect.Type{
		"BudgetRequest": reflect.TypeFor[budgetRequest](), "DesignRequest": reflect.TypeFor[designRequest](),
		"ChangeRequest": reflect.TypeFor[changeRequest](), "RevisionRequest": reflect.TypeFor[revisionRequest](),
		"Answer": reflect.TypeFor[Answer](), "DesignResource": reflect.TypeFor[designResource](),
		"DesignHead": reflect.TypeFor[designHead](), "RevisionHead": reflect.TypeFor[revisionHead](),
		"Point": reflect.TypeFor[Point](), "Finding": reflect.TypeFor[Finding](),
		"Weights":  reflect.TypeFor[weightsAnswer](),
		"Revision": reflect.TypeFor[Revision](), "Problem": reflect.TypeFor[problem](),
		"ShareRequest": reflect.TypeFor[shareRequest](), "ShareMade": reflect.TypeFor[shareMade](), "ShareHead": reflect.TypeFor[shareHead](),
	} {
		all[name] = structSchema(t, requiredOf(t))
	}
	revision := all["Revision"].(object)["properties"].(object)
	revision["design"] = ref("Design")
	revision["points"] = object{"type": "array", "items": ref("Point")}
	revision["findings"] = object{"type": "array", "items": ref("Finding")}
	resource := all["DesignResource"].(object)["properties"].(object)
	resource["design"] = object{"anyOf": []object{ref("Design"), {"type": "null"}}}
	point := all["Point"].(object)["properties"].(object)
	point["state"] = object{"type": "string", "enum": []string{"settled", "out_of_reach", "runaway"}}
	point["mode"] = object{"type": "string", "enum": []string{"ccm", "dcm"}}
	return all
}

// requiredOf names the members of a type that are always there: in an answer
// those without omitempty, in a request the few that have no default.
func requiredOf(t reflect.Type) []string {
	switch t {
	case reflect.TypeFor[budgetRequest](), reflect.TypeFor[designRequest]():
		return []string{"design"}
	case reflect.TypeFor[changeRequest]():
		return []string{"design", "version"}
	case reflect.TypeFor[requestPoint]():
		return []string{"vin", "iout"}
	case reflect.TypeFor[revisionRequest](), reflect.TypeFor[shareRequest]():
		return nil
	}
	var names []string
	for _, f := range reflect.VisibleFields(t) {
		if len(f.Index) == 1 && !f.Anonymous && !strings.Contains(f.Tag.Get("json"), ",omit") {
			names = append(names, jsonName(f))
		}
	}
	return names
}

func structSchema(t reflect.Type, required []string) object {
	properties := object{}
	for _, f := range reflect.VisibleFields(t) {
		if !f.Anonymous {
			properties[jsonName(f)] = typeSchema(f.Type)
		}
	}
	schema := object{"type": "object", "properties": properties, "additionalProperties": false}
	if len(required) > 0 {
		schema["required"] = required
	}
	return schema
}

func typeSchema(t reflect.Type) object {
	switch t {
	case reflect.TypeFor[*budget.Design]():
		return ref("Design")
	case reflect.TypeFor[Point]():
		return ref("Point")
	case reflect.TypeFor[Finding]():
		return ref("Finding")
	case reflect.TypeFor[budget.Num]():
		return object{"type": "number"}
	case reflect.TypeFor[time.Time]():
		return object{"type": "string", "format": "date-time"}
	case reflect.TypeFor[json.RawMessage]():
		return object{}
	}
	switch t.Kind() {
	case reflect.Pointer:
		return typeSchema(t.Elem())
	case reflect.Struct:
		return structSchema(t, requiredOf(t))
	case reflect.Slice:
		list := object{"type": "array", "items": typeSchema(t.Elem())}
		if t == reflect.TypeFor[[]requestPoint]() {
			list["maxItems"] = maxPoints
		}
		return list
	case reflect.String:
		return object{"type": "string"}
	case reflect.Bool:
		return object{"type": "boolean"}
	case reflect.Int, reflect.Int64:
		return object{"type": "integer"}
	}
	return object{"type": "number"}
}

// designSchema writes the table of fields as a schema.
func designSchema() object {
	root := emptyObject()
	child(root, "format", object{"const": budget.Format}, true)
	for _, part := range budget.Parts() {
		within := root
		if part.Path != "" {
			within = descend(root, part)
		}
		for _, f := range part.Fields {
			at := within
			steps := strings.Split(f.Key, ".")
			for _, step := range steps[:len(steps)-1] {
				at = nested(at, step, f.Required)
			}
			child(at, steps[len(steps)-1], fieldSchema(part, f), f.Required)
		}
	}
	child(root, "sources", object{"type": "object", "additionalProperties": object{"type": "string"},
		"description": "path of a value → where it comes from"}, false)
	root["allOf"] = []object{needs("diode", "diode"), needs("synchronous", "sync_switch")}
	return root
}

// needs says which part a rectifier needs.
func needs(rectifier, part string) object {
	return object{
		"if":   object{"properties": object{"rectifier": object{"const": rectifier}}},
		"then": object{"required": []string{part}},
	}
}

// descend finds or makes the object of a part.
func descend(root object, part budget.Part) object {
	at := root
	for _, step := range strings.Split(part.Path, ".") {
		if part.List {
			list := object{"type": "array", "maxItems": budget.MaxRows, "title": part.Name, "items": emptyObject()}
			child(at, step, list, false)
			return list["items"].(object)
		}
		at = nested(at, step, part.Needed)
	}
	at["title"] = part.Name
	return at
}

func emptyObject() object {
	return object{"type": "object", "properties": object{}, "additionalProperties": false}
}

func nested(parent object, name string, required bool) object {
	if known, ok := parent["properties"].(object)[name].(object); ok {
		return known
	}
	made := emptyObject()
	child(parent, name, made, required)
	return made
}

func child(parent object, name string, schema object, required bool) {
	parent["properties"].(object)[name] = schema
	if required {
		names, _ := parent["required"].([]string)
		parent["required"] = append(names, name)
	}
}

func fieldSchema(part budget.Part, f budget.Field) object {
	schema := object{"description": f.Name + ": " + f.Where}
	switch f.Kind {
	case budget.Text:
		schema["type"] = "string"
	case budget.Choice:
		describeChoice(schema, f)
	case budget.Rows:
		row := object{"type": "array", "minItems": 2, "maxItems": 2, "prefixItems": []object{
			{"type": "number", "title": f.XName, "x-unit": f.XUnit}, {"type": "number", "title": f.YName, "x-unit": f.Unit}}}
		schema["type"], schema["items"], schema["maxItems"] = "array", row, budget.MaxRows
	case budget.Number:
		describeNumber(schema, f)
		if f.Required || part.Path == "inductor.core" || f.Domain == budget.Positive && f.Default == 0 {
			break // a core's entries stand in sets, without defaults
		}
		schema["default"] = f.Default
	}
	return schema
}

func describeChoice(schema object, f budget.Field) {
	var values []string
	for _, option := range f.Options {
		values = append(values, option.Value)
	}
	schema["type"], schema["enum"] = "string", values
	if !f.Required {
		schema["default"] = values[0]
	}
}

func describeNumber(schema object, f budget.Field) {
	schema["type"], schema["x-unit"] = "number", f.Unit
	switch f.Domain {
	case budget.Positive:
		schema["exclusiveMinimum"] = 0
	case budget.NotNegative:
		schema["minimum"] = 0
	case budget.NotPositive:
		schema["maximum"] = 0
	}
	if f.Below != 0 {
		schema["maximum"] = f.Below
	}
}
