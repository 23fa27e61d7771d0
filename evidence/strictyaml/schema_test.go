package strictyaml

import (
	"bytes"
	"encoding/json"
	"fmt"
	"reflect"
	"strings"
	"testing"

	"github.com/santhosh-tekuri/jsonschema/v6"
	"go.yaml.in/yaml/v4"
)

// compiled checks a schema against the published meta-schema (draft 2020-12) and compiles it.
func compiled(t testing.TB, data []byte) *jsonschema.Schema {
	t.Helper()
	doc, err := jsonschema.UnmarshalJSON(bytes.NewReader(data))
	if err != nil {
		t.Fatal(err)
	}
	c := jsonschema.NewCompiler()
	if err := c.AddResource("schema.json", doc); err != nil {
		t.Fatal(err)
	}
	s, err := c.Compile("schema.json")
	if err != nil {
		t.Fatal(err)
	}
	return s
}

func kitSchema(t testing.TB) *jsonschema.Schema {
	t.Helper()
	data, err := Schema("urn:example:kit:1", "A kit", kit{})
	if err != nil {
		t.Fatal(err)
	}
	return compiled(t, data)
}

// generic reads YAML as an editor does: by the core schema of YAML 1.2, times as text.
func generic(n *yaml.Node) any {
	switch n.Kind {
	case yaml.DocumentNode:
		return generic(n.Content[0])
	case yaml.AliasNode:
		return generic(n.Alias)
	case yaml.MappingNode:
		m := map[string]any{}
		for i := 0; i+1 < len(n.Content); i += 2 {
			m[n.Content[i].Value] = generic(n.Content[i+1])
		}
		return m
	case yaml.SequenceNode:
		list := make([]any, len(n.Content))
		for i, c := range n.Content {
			list[i] = generic(c)
		}
		return list
	}
	switch n.Tag {
	case "!!null":
		return nil
	case "!!bool":
		return strings.EqualFold(n.Value, "true")
	case "!!int", "!!float":
		var v any
		if err := json.Unmarshal([]byte(strings.TrimPrefix(n.Value, "+")), &v); err == nil {
			if _, ok := v.(float64); ok {
				return v
			}
		}
		var f float64
		if n.Decode(&f) == nil {
			return f
		}
	}
	return n.Value
}

func validates(t testing.TB, s *jsonschema.Schema, text string) error {
	t.Helper()
	var n yaml.Node
	if err := yaml.Unmarshal([]byte(text), &n); err != nil {
		t.Fatal(err)
	}
	return s.Validate(generic(&n))
}

func TestSchemaAcceptsWhatBindAccepts(t *testing.T) {
	s := kitSchema(t)
	for _, text := range []string{
		goodKit, altered("15 %", "0.15"), altered("15 %", "0"), altered("1.2 ug/mL", `"1.2 µg/ml"`), altered("lot: 007", "lot: true"), altered("lot: 007", "lot: 2026-03-14"),
		altered("factor: 2.5", "factor: 1e-3"), altered(`documents\leaflet.pdf`, "a/.b/..c/d.e"), altered("wait: 90 s\n", ""), altered("+01:00", ".123Z"),
	} {
		if _, problems := Bind("kit.yaml", []byte(text), new(kit)); len(problems) > 0 {
			t.Errorf("Bind: %v", problems)
		}
		if err := validates(t, s, text); err != nil {
			t.Errorf("schema: %v\n%s", err, text)
		}
	}
}

// TestBothRefuse: each kind of fault that a schema can express is refused by Bind and by the schema.
func TestBothRefuse(t *testing.T) {
	s := kitSchema(t)
	for _, c := range [][2]string{
		{"vials: 12", "vials: 12\ncolour: red"}, {"    volume: 5 µL", "    volume: 5 µL\n    size: 3"}, {"lot: 007\n", ""}, {"  width: 10 cm\n", ""}, {"  clause: \"section 7\"\n", ""},
		{"lot: 007", "lot: null"}, {"lot: 007", `lot: ""`}, {"lot: 007", "lot: [7]"}, {"lot: 007", "lot: {a: b}"}, {"tags: [a, b]", "tags: a"}, {"tags: [a, b]", "tags: []"}, {"tags: [a, b]", "tags: [a, c]"},
		{"kit/1", "kit/2"}, {"amber", "Amber"}, {"kit-a", "Kit A"}, {"used: false", "used: no"}, {"used: false", "used: 'false'"}, {"vials: 12", "vials: 12.5"}, {"vials: 12", `vials: "12"`},
		{"vials: 12", "vials: 41"}, {"vials: 12", "vials: 0"}, {"factor: 2.5", "factor: 2,5"}, {"factor: 2.5", "factor: 0"}, {"factor: 2.5", "factor: 11"},
		{"1.2 ug/mL", "1200"}, {"1.2 ug/mL", "1.2 mL"}, {"1.2 ug/mL", "1.2 UG/ML"}, {"1.2 ug/mL", "1,2 ug/mL"}, {"1.2 ug/mL", ".5 ug/mL"}, {"90 s", "90"}, {"90 s", "90 sec"},
		{"15 %", "15"}, {"15 %", "1"}, {"15 %", "'15'"}, {"2026-03-14T16:20:00+01:00", "14.03.2026"}, {"2026-03-14T16:20:00+01:00", "2026-03-14T16:20:00"},
		{"2026-03-14T16:20:00+01:00", "2026-03-14T16:20:00+99:00"}, {"2027-01-31", "31/01/2027"}, {`documents\leaflet.pdf`, "/leaflet.pdf"}, {`documents\leaflet.pdf`, `C:\leaflet.pdf`},
		{`documents\leaflet.pdf`, `..\leaflet.pdf`}, {`documents\leaflet.pdf`, "a/../b"}, {`documents\leaflet.pdf`, "./a"}, {`documents\leaflet.pdf`, "a//b"}, {"  keep\n  cool", "  kp"},
	} {
		text := altered(c[0], c[1])
		if _, problems := Bind("kit.yaml", []byte(text), new(kit)); len(problems) == 0 {
			t.Errorf("Bind accepts %q for %q", c[1], c[0])
		}
		if validates(t, s, text) == nil {
			t.Errorf("the schema accepts %q for %q", c[1], c[0])
		}
	}
}

func TestSchemaContents(t *testing.T) {
	data, err := Schema("urn:example:kit:1", "A kit", &kit{})
	if err != nil {
		t.Fatal(err)
	}
	again, err := Schema("urn:example:kit:1", "A kit", kit{})
	if err != nil || !bytes.Equal(data, again) {
		t.Error("a schema is not the same the second time")
	}
	var s struct {
		Schema     string `json:"$schema"`
		ID         string `json:"$id"`
		Title      string
		Properties map[string]struct {
			Description string
			Examples    []string
		}
		Required             []string
		AdditionalProperties *bool
	}
	if err := json.Unmarshal(data, &s); err != nil {
		t.Fatal(err)
	}
	if s.Schema != "https://json-schema.org/draft/2020-12/schema" || s.ID != "urn:example:kit:1" || s.Title != "A kit" || s.AdditionalProperties == nil || *s.AdditionalProperties {
		t.Errorf("%+v", s)
	}
	want := []string{"format", "id", "lot", "kind", "made", "used", "vials", "factor", "amount", "loss", "box", "parts"}
	if !reflect.DeepEqual(s.Required, want) {
		t.Errorf("required %q, want %q", s.Required, want)
	}
	if d := s.Properties["wait"].Description; !strings.Contains(d, "Time to stand.") || !strings.Contains(d, "from 0 min to 60 min") {
		t.Errorf("description %q", d)
	}
	if e := s.Properties["amount"].Examples; !reflect.DeepEqual(e, []string{"150 ng/mL"}) {
		t.Errorf("examples %q", e)
	}
	list, err := Schema("urn:example:parts:1", "Parts", []part{})
	if err != nil {
		t.Fatal(err)
	}
	if err := compiled(t, list).Validate([]any{map[string]any{"name": "vial", "volume": "5 uL"}}); err != nil {
		t.Error(err)
	}
}

// FuzzBind: any bytes are accepted or refused, never more; every problem has its place; what Bind accepts, the schema accepts.
func FuzzBind(f *testing.F) {
	f.Add([]byte(goodKit))
	for _, s := range []string{"", "a: 1", "- 1", "a: &a [*a]", "<<: {a: b}", "\xff\xfe", "%YAML 1.1\n---\n", "a: |\n x\n", "{a: [1, {b: c}]}", "? a\n: b", "lot: !!str 7"} {
		f.Add([]byte(s))
		f.Add([]byte(goodKit + s))
	}
	s := kitSchema(f)
	f.Fuzz(func(t *testing.T, data []byte) {
		var k kit
		doc, problems := Bind("kit.yaml", data, &k)
		for _, p := range problems {
			if p.File != "kit.yaml" || p.Got == "" || p.Want == "" || (p.Line < 1 && len(data) <= MaxBytes) || p.Column < 1 {
				t.Errorf("a problem without its place: %+v", p)
			}
		}
		if len(problems) == 0 {
			if doc == nil {
				t.Fatal("neither problems nor a document")
			}
			if err := validates(t, s, strings.TrimPrefix(string(data), "\ufeff")); err != nil {
				t.Errorf("Bind accepts what the schema refuses: %v", err)
			}
		}
	})
}

func BenchmarkBind(b *testing.B) {
	data := []byte(goodKit)
	b.Run(fmt.Sprintf("bytes=%d", len(data)), func(b *testing.B) {
		b.SetBytes(int64(len(data)))
		for b.Loop() {
			if _, problems := Bind("kit.yaml", data, new(kit)); len(problems) > 0 {
				b.Fatal(problems)
			}
		}
	})
}
