package draft

import (
	"fmt"
	"slices"
	"strings"

	"assaywrit/evidence/strictyaml"
)

func caseOf(documents, criteria []string) strictyaml.Template {
	t := strictyaml.Template{
		Head:   head,
		Values: map[string]any{"format": "assaywrit-case/1", "method": MethodFile, "sequence": SequenceFile},
		Lists:  map[string]int{},
		Notes:  map[string][]string{},
	}
	if len(criteria) > 0 {
		t.Notes["criteria"] = []string{"sets that are built in: " + strings.Join(criteria, ", ")}
	}
	if len(documents) > 0 {
		documents = slices.Sorted(slices.Values(documents))
		t.Lists["documents"] = len(documents)
		for i, d := range documents {
			t.Values[fmt.Sprintf("documents[%d].file", i)] = d
		}
	}
	return t
}
