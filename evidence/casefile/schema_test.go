package casefile

import (
	"bytes"
	"encoding/csv"
	"encoding/json"
	"reflect"
	"slices"
	"strings"
	"testing"

	"github.com/santhosh-tekuri/jsonschema/v6"
	"go.yaml.in/yaml/v4"
)

// schema compiles a schema, checked against the meta-schema of its draft.
func schema(t testing.TB, name string) *jsonschema.Schema {
	t.Helper()
	data, err := SchemaJSON(name)
	if err != nil {
		t.Fatal(err)
	}
	doc, err := jsonschema.UnmarshalJSON(bytes.NewReader(data))
	if err != nil {
		t.Fatal(err)
	}
	c := jsonschema.NewCompiler()
	if err := c.AddResource(name+".json", doc); err != nil {
		t.Fatal(err)
	}
	s, err := c.Compile(name + ".json")
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// generic reads YAML as an editor does; times stay text.
func generic(t testing.TB, text string) any {
	t.Helper()
	var n yaml.Node
	if err := yaml.Unmarshal([]byte(text), &n); err != nil {
		t.Fatal(err)
	}
	var plain func(n *yaml.Node)
	plain = func(n *yaml.Node) {
		if n.Tag == "!!timestamp" {
			n.Tag = "!!str"
		}
		for _, c := range n.Content {
			plain(c)
		}
	}
	plain(&n)
	var v any
	if err := n.Decode(&v); err != nil {
		t.Fatal(err)
	}
	data, err := json.Marshal(v)
	if err != nil {
		t.Fatal(err)
	}
	out, err := jsonschema.UnmarshalJSON(bytes.NewReader(data))
	if err != nil {
		t.Fatal(err)
	}
	return out
}

// table reads the sequence as an array of objects, one a row.
func table(t testing.TB, text string) []any {
	t.Helper()
	records, err := csv.NewReader(strings.NewReader(text)).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	var rows []any
	for _, r := range records[1:] {
		row := map[string]any{}
		for i, name := range records[0] {
			row[name] = r[i]
		}
		rows = append(rows, row)
	}
	return rows
}

func TestSchemasAcceptTheSmallCase(t *testing.T) {
	c := generic(t, smallCase)
	for name, v := range map[string]any{
		"case": c, "method": generic(t, smallMethod), "sequence": table(t, smallSequence), "custody": c.(map[string]any)["custody"], "study": generic(t, smallStudy),
	} {
		if err := schema(t, name).Validate(v); err != nil {
			t.Errorf("%s: %v", name, err)
		}
	}
	if got := SchemaNames(); !reflect.DeepEqual(got, []string{"case", "method", "sequence", "custody", "study"}) {
		t.Errorf("names %q", got)
	}
	if _, err := SchemaJSON("letter"); err == nil || !strings.Contains(err.Error(), "case, method, sequence, custody, study") {
		t.Errorf("a schema that there is not: %v", err)
	}
}

// TestSchemasRefuse: faults of form that Load refuses are refused by the schema too, so that an editor shows them.
func TestSchemasRefuse(t *testing.T) {
	inSchema := map[string]int{}
	for file, faults := range map[string][]fault{"case.yaml": caseFaults, "method.yaml": methodFaults} {
		s := schema(t, strings.TrimSuffix(file, ".yaml"))
		for _, f := range faults {
			ofForm := slices.Contains([]string{"unknown version", "unknown key", "key that is near", "missing key", "volume without a unit", "volume as a concentration", "pH out of range",
				"specific gravity out of range", "local date", "no signatory", "other meaning", "no custody", "integration of no trace", "integration not approved", "unit in a key", "no qualifier",
				"fraction without its sign", "other model", "other weights", "unit for people"}, f.name)
			if !ofForm || f.changes[0].file != file {
				continue
			}
			inSchema[file]++
			if s.Validate(generic(t, string(changed(t, f.changes...)[file].Data))) == nil {
				t.Errorf("%s: the schema accepts: %s", file, f.name)
			}
		}
	}
	if inSchema["case.yaml"] < 14 || inSchema["method.yaml"] < 6 {
		t.Errorf("too few faults were tried: %v", inSchema)
	}
	s := schema(t, "sequence")
	for _, c := range [][2]string{{"calibrator,low", "calibratr,low"}, {"raw/c1", "../c1"}, {"raw/c1", "C:/c1"}, {"2026-03-18T08:10:00+01:00", "18.03.2026"}, {"62.5", "much"}, {"62.5", "-62.5"},
		{"[ng/mL]", "[mL]"}, {",note,", ",notes,"}, {"injection,", "id,"}, {",2.5,", ",two,"}, {"X1,", ","}} {
		text := strings.Replace(smallSequence, c[0], c[1], 1)
		if text == smallSequence {
			t.Fatalf("the sequence does not hold %q", c[0])
		}
		if s.Validate(table(t, text)) == nil {
			t.Errorf("the schema of the sequence accepts %q for %q", c[1], c[0])
		}
	}
}

// TestColumnsOfTheSchema: the schema of the sequence has the columns that the reader knows.
func TestColumnsOfTheSchema(t *testing.T) {
	data, err := SchemaJSON("sequence")
	if err != nil {
		t.Fatal(err)
	}
	var s struct {
		Items struct {
			Properties map[string]any
			Required   []string
		}
	}
	if err := json.Unmarshal(data, &s); err != nil {
		t.Fatal(err)
	}
	var names []string
	for n := range s.Items.Properties {
		names = append(names, n)
	}
	slices.Sort(names)
	want := slices.Sorted(slices.Values(slices.Concat(requiredColumns, optionalColumns)))
	if !slices.Equal(names, want) {
		t.Errorf("columns %q, want %q", names, want)
	}
	required := slices.Sorted(slices.Values(s.Items.Required))
	if want := slices.Sorted(slices.Values(requiredColumns)); !slices.Equal(required, want) {
		t.Errorf("required %q, want %q", required, want)
	}
	var enum []string
	for _, r := range roles {
		enum = append(enum, string(r))
	}
	f, _ := reflect.TypeFor[Injection]().FieldByName("Role")
	if f.Tag.Get("enum") != strings.Join(enum, "|") {
		t.Errorf("the roles of the schema are %s, those of the reader %q", f.Tag.Get("enum"), enum)
	}
}

// TestEveryKeyIsExplained: each key has a line for people, and is the name in the record without its unit.
func TestEveryKeyIsExplained(t *testing.T) {
	units := []string{"_ng_per_ml", "_ml_per_min", "_min", "_ml", "_ul", "_mm", "_mz"}
	seen := map[reflect.Type]bool{}
	var walk func(typ reflect.Type)
	walk = func(typ reflect.Type) {
		for typ.Kind() == reflect.Pointer || typ.Kind() == reflect.Slice {
			typ = typ.Elem()
		}
		if typ.Kind() != reflect.Struct || seen[typ] {
			return
		}
		seen[typ] = true
		for i := range typ.NumField() {
			f := typ.Field(i)
			walk(f.Type)
			key, ok := f.Tag.Lookup("key")
			if !ok {
				continue
			}
			key, _, _ = strings.Cut(key, ",")
			record, _, _ := strings.Cut(f.Tag.Get("json"), ",")
			for _, u := range units {
				if f.Type.Kind() != reflect.String && strings.HasSuffix(record, u) {
					record = strings.TrimSuffix(record, u)
					break
				}
			}
			if key != record {
				t.Errorf("%s.%s: key %q, name in the record %q", typ.Name(), f.Name, key, record)
			}
			if strings.HasSuffix(typ.PkgPath(), "casefile") && f.Tag.Get("doc") == "" {
				t.Errorf("%s.%s has no line for people", typ.Name(), f.Name)
			}
		}
	}
	walk(reflect.TypeFor[Folder]())
	if len(seen) < 20 {
		t.Errorf("%d structs seen", len(seen))
	}
}
