package main

import (
	"bytes"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/santhosh-tekuri/jsonschema/v6"
	"go.yaml.in/yaml/v4"

	"assaywrit/decision"
)

// compiled is a published schema in a general-purpose JSON Schema library.
func compiled(t *testing.T, name string) *jsonschema.Schema {
	t.Helper()
	data, err := schemaNamed(name)
	if err != nil {
		t.Fatal(err)
	}
	doc, err := jsonschema.UnmarshalJSON(bytes.NewReader(data))
	if err != nil {
		t.Fatalf("%s: %v", name, err)
	}
	c := jsonschema.NewCompiler()
	if err := c.AddResource("mem:///"+name, doc); err != nil {
		t.Fatal(err)
	}
	s, err := c.Compile("mem:///" + name)
	if err != nil {
		t.Fatalf("%s: %v", name, err)
	}
	return s
}

// asJSON reads YAML as a general-purpose library does, dates left as the text they are.
func asJSON(t *testing.T, data []byte) any {
	t.Helper()
	var node yaml.Node
	if err := yaml.Unmarshal(data, &node); err != nil {
		t.Fatal(err)
	}
	var walk func(n *yaml.Node)
	walk = func(n *yaml.Node) {
		if n.Tag == "!!timestamp" {
			n.Tag = "!!str"
		}
		for _, c := range n.Content {
			walk(c)
		}
	}
	walk(&node)
	var v any
	if err := node.Decode(&v); err != nil {
		t.Fatal(err)
	}
	return v
}

// TestSchemasAcceptAndRefuse holds the published schemas against the demo's files and the built-in criteria sets, by a
// general-purpose library, and shows that they refuse what check refuses.
func TestSchemasAcceptAndRefuse(t *testing.T) {
	folder := filepath.Join(demoFolder(t), "case")
	good := map[string][]byte{}
	for name, file := range map[string]string{"case": "case.yaml", "method": "method.yaml"} {
		data, err := os.ReadFile(filepath.Join(folder, file))
		if err != nil {
			t.Fatal(err)
		}
		good[name] = data
	}
	for _, set := range decision.BuiltInNames() {
		data, _ := decision.BuiltIn(set)
		if err := compiled(t, "criteria").Validate(asJSON(t, data)); err != nil {
			t.Errorf("%s: %v", set, err)
		}
	}
	for name, data := range good {
		if err := compiled(t, name).Validate(asJSON(t, data)); err != nil {
			t.Errorf("%s: %v", name, err)
		}
	}
	for _, tt := range []struct{ schema, old, bad string }{
		{"case", "laboratory_code:", "laboratory_cod:"},
		{"case", "ph: 6.1", "ph: 16.1"},
		{"case", "volume: 92 mL", "volume: 92 ng/mL"},
		{"case", "collected: 2026-03-14T16:20:00+01:00", "collected: 14.03.2026"},
		{"case", "meaning: reviewed", "meaning: seen"},
		{"method", "kind: presence", "kind: maybe"},
		{"method", "expected_retention: 2.30 min", "expected_retention: 2.30"},
		{"method", "weighting: 1/x2", "weighting: 1/y"},
	} {
		data := strings.Replace(string(good[tt.schema]), tt.old, tt.bad, 1)
		if data == string(good[tt.schema]) {
			t.Fatalf("%s does not hold %q", tt.schema, tt.old)
		}
		if err := compiled(t, tt.schema).Validate(asJSON(t, []byte(data))); err == nil {
			t.Errorf("the schema %s accepts %q", tt.schema, tt.bad)
		}
		dir := copyCase(t)
		edit(t, dir, tt.schema+".yaml", tt.old, tt.bad)
		var out, errs bytes.Buffer
		if status := run([]string{"check", dir}, nil, &out, &errs); status != exitRefused || !strings.Contains(errs.String(), tt.schema+".yaml:") {
			t.Errorf("check with %q: status %d\n%s", tt.bad, status, errs.String())
		}
	}
}

// TestSequenceAsSpreadsheetsSaveIt: the variants of sequence.csv that spreadsheet programs write give the same evidence.
func TestSequenceAsSpreadsheetsSaveIt(t *testing.T) {
	want := demoAssessment(t).evaluation.Record.Sequence
	original, err := os.ReadFile(filepath.Join(demoFolder(t), "case", "sequence.csv"))
	if err != nil {
		t.Fatal(err)
	}
	utf16 := func(s string) string {
		var b strings.Builder
		b.WriteString("\xff\xfe")
		for _, r := range s {
			b.WriteByte(byte(r))
			b.WriteByte(byte(r >> 8))
		}
		return b.String()
	}
	semicolon := strings.ReplaceAll(strings.ReplaceAll(string(original), ",", ";"), ".", ",")
	for _, path := range []string{",mzML"} {
		semicolon = strings.ReplaceAll(semicolon, path, ".mzML")
	}
	for name, text := range map[string]string{
		"byte-order mark and CRLF":     "\xef\xbb\xbf" + strings.ReplaceAll(string(original), "\n", "\r\n"),
		"semicolons, decimal commas":   semicolon,
		"tabs":                         strings.ReplaceAll(string(original), ",", "\t"),
		"UTF-16 with tabs":             utf16(strings.ReplaceAll(string(original), ",", "\t")),
		"backslashes in file names":    strings.ReplaceAll(string(original), "raw/", `raw\`),
		"empty rows and columns":       strings.ReplaceAll(string(original), "\n", ",,\n") + ",,,,\n\n",
		"line ends of old Macintoshes": strings.ReplaceAll(string(original), "\n", "\r"),
	} {
		dir := copyCase(t)
		if err := os.WriteFile(filepath.Join(dir, "sequence.csv"), []byte(text), 0o666); err != nil {
			t.Fatal(err)
		}
		a, err := assess(os.DirFS(dir), chosenCriteria)
		if err != nil {
			t.Errorf("%s: %v", name, err)
			continue
		}
		got := a.evaluation.Record.Sequence
		for i := range want {
			if got[i].File != want[i].File || got[i].Dilution != want[i].Dilution || len(got[i].Nominal) != len(want[i].Nominal) || got[i].AcquiredAt != want[i].AcquiredAt {
				t.Errorf("%s: row %d is %+v, want %+v", name, i+1, got[i], want[i])
				continue
			}
			for k := range want[i].Nominal {
				if got[i].Nominal[k] != want[i].Nominal[k] {
					t.Errorf("%s: row %d: %v, want %v", name, i+1, got[i].Nominal[k], want[i].Nominal[k])
				}
			}
		}
	}
}
