package casefile

import (
	"fmt"
	"strings"

	"assaywrit/evidence/strictyaml"
)

// SchemaNames lists the kinds of files, or parts of them, that have a JSON Schema.
func SchemaNames() []string { return []string{"case", "method", "sequence", "custody"} }

// SchemaJSON returns the JSON Schema of one of SchemaNames. That of the sequence describes its rows as objects.
func SchemaJSON(name string) ([]byte, error) {
	id := "urn:assaywrit:schema:" + name + ":1"
	switch name {
	case "case":
		return strictyaml.Schema(id, "A case (case.yaml)", Case{})
	case "method":
		return strictyaml.Schema(id, "A validated method (method.yaml)", Method{})
	case "sequence":
		return strictyaml.Schema(id, "The injection list (sequence.csv), a row an object", []Injection{})
	case "custody":
		return strictyaml.Schema(id, "Custody events (the list custody of case.yaml)", []CustodyEvent{})
	}
	return nil, fmt.Errorf("there is no schema %q, want one of: %s", name, strings.Join(SchemaNames(), ", "))
}
