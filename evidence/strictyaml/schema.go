package strictyaml

import (
	"bytes"
	"encoding/json"
	"reflect"
)

// Schema returns the JSON Schema (draft 2020-12) of what Bind accepts for a struct, or for a slice of structs. Quantities are
// strings with their unit in them, by a pattern.
func Schema(id, title string, of any) ([]byte, error) {
	t := reflect.TypeOf(of)
	if t.Kind() == reflect.Pointer {
		t = t.Elem()
	}
	s := schemaOf(field{typ: t})
	s["$schema"] = "https://json-schema.org/draft/2020-12/schema"
	s["$id"] = id
	s["title"] = title
	var out bytes.Buffer
	enc := json.NewEncoder(&out)
	enc.SetEscapeHTML(false)
	enc.SetIndent("", "  ")
	if err := enc.Encode(s); err != nil {
		return nil, err
	}
	return out.Bytes(), nil
}

func schemaOf(f field) map[string]any {
	t := f.typ
	if t.Kind() == reflect.Pointer {
		t = t.Elem()
	}
	s := map[string]any{}
	switch t.Kind() {
	case reflect.Struct:
		s = objectSchema(t)
	case reflect.Slice:
		item := f
		item.typ, item.doc = t.Elem(), ""
		s = map[string]any{"type": "array", "items": schemaOf(item)}
		if f.minItems > 0 {
			s["minItems"] = f.minItems
		}
	case reflect.Bool:
		s["type"] = "boolean"
	case reflect.Int:
		s["type"] = "integer"
		numberLimits(s, f)
	case reflect.Float64:
		numberSchema(s, f)
	default:
		textSchema(s, f)
	}
	if d := description(f); d != "" {
		s["description"] = d
	}
	return s
}

// description: the limits of a quantity are beyond a schema's means, so they are told.
func description(f field) string {
	if f.family == nil || limits(f) == "" {
		return f.doc
	}
	text := "Accepted: " + f.family.Want() + limits(f) + "."
	if f.doc != "" {
		text = f.doc + " " + text
	}
	return text
}

func objectSchema(t reflect.Type) map[string]any {
	properties, required := map[string]any{}, []string{}
	for _, f := range fieldsOf(t) {
		properties[f.key] = schemaOf(f)
		if !f.optional {
			required = append(required, f.key)
		}
	}
	return map[string]any{"type": "object", "properties": properties, "required": required, "additionalProperties": false}
}

// numberSchema: a quantity is a string with its unit; a fraction below 1 may be a number.
func numberSchema(s map[string]any, f field) {
	if f.family == nil {
		s["type"] = "number"
		numberLimits(s, f)
		return
	}
	s["type"], s["pattern"], s["examples"] = "string", f.family.Pattern(), []string{f.family.Example()}
	if f.family.Bare() {
		s["type"], s["exclusiveMaximum"] = []string{"string", "number"}, 1
		if f.min != nil {
			s["minimum"] = *f.min
		}
	}
}

func numberLimits(s map[string]any, f field) {
	if f.min != nil {
		s["minimum"] = *f.min
	}
	if f.max != nil {
		s["maximum"] = *f.max
	}
	if f.above != nil {
		s["exclusiveMinimum"] = *f.above
	}
}

// textSchema: YAML reads a bare 007 or 1.10 as a number, and Bind takes it as the text it is; so does the schema.
func textSchema(s map[string]any, f field) {
	switch {
	case len(f.enum) > 0:
		s["enum"] = f.enum
	case f.format == "rfc3339":
		s["type"], s["pattern"], s["examples"] = "string", timePattern, []string{"2026-03-14T16:20:00+01:00"}
	case f.format == "date":
		s["type"], s["pattern"], s["examples"] = "string", datePattern, []string{"2026-03-14"}
	case f.format == "path":
		s["type"], s["pattern"] = "string", pathPattern
	default:
		s["type"] = []string{"string", "number", "boolean"}
		if f.pattern != nil {
			s["pattern"] = f.pattern.String()
		}
		if f.minLen > 0 || !f.optional {
			s["minLength"] = max(f.minLen, 1)
		}
	}
}
