package casefile

import (
	"bytes"
	"encoding/json"
	"fmt"
	"strings"

	"assaywrit/evidence/strictyaml"
	"assaywrit/evidence/units"
)

// SchemaNames lists the kinds of files, or parts of them, that have a JSON Schema.
func SchemaNames() []string { return []string{"case", "method", "sequence", "custody", "study"} }

// SchemaJSON returns the JSON Schema of one of SchemaNames. That of the sequence describes the table as an array of objects, one a
// row, with the names of the columns as keys.
func SchemaJSON(name string) ([]byte, error) {
	id := "urn:assaywrit:schema:" + name + ":1"
	switch name {
	case "case":
		return strictyaml.Schema(id, "A case (case.yaml)", Case{})
	case "method":
		return strictyaml.Schema(id, "A validated method (method.yaml)", Method{})
	case "sequence":
		s, err := strictyaml.Schema(id, "The injection list (sequence.csv), a row an object", []Injection{})
		if err != nil {
			return nil, err
		}
		return withNumbers(s)
	case "study":
		return strictyaml.Schema(id, "A separation study (study.yaml)", Study{})
	case "custody":
		return strictyaml.Schema(id, "Custody events (the list custody of case.yaml)", []CustodyEvent{})
	}
	return nil, fmt.Errorf("there is no schema %q, want one of: %s", name, strings.Join(SchemaNames(), ", "))
}

// withNumbers adds the columns whose numbers are plain, without a unit: dilution, and the nominal amounts with the analyte and the
// unit in their names.
func withNumbers(schema []byte) ([]byte, error) {
	var s map[string]any
	if err := json.Unmarshal(schema, &s); err != nil {
		return nil, err
	}
	items := s["items"].(map[string]any)
	number := func(description string) map[string]any {
		return map[string]any{"type": []string{"string", "number"}, "minimum": 0, "pattern": `^(\d+([.,]\d+)?([eE][+-]?\d+)?)?$`, "description": description}
	}
	items["properties"].(map[string]any)["dilution"] = number("Factor by which the sample was diluted; 1 where it is empty.")
	items["patternProperties"] = map[string]any{
		`^[Nn]ominal +[a-z0-9-]+ *\[` + units.Concentration.SymbolPattern() + `\]$`: number("Amount of the analyte in a calibrator or control, in the unit in brackets."),
	}
	var out bytes.Buffer
	enc := json.NewEncoder(&out)
	enc.SetEscapeHTML(false)
	enc.SetIndent("", "  ")
	if err := enc.Encode(s); err != nil {
		return nil, err
	}
	return out.Bytes(), nil
}
