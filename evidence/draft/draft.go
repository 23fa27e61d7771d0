// Package draft begins a case folder from its raw files: what the files state is filled in, and everything else is the mark of package
// strictyaml, with what is wanted in a comment beside it. casefile.Load finds the marks in a draft and nothing else.
//
// Nothing that a finding rests on is chosen here: roles, amounts, limits, compounds and criteria are for a person. The traces that all
// files have in common are listed under analytes, those of one precursor together; which of them are internal standards is not known.
// Times are in minutes, m/z as the files state them. The package reads and writes no files.
package draft

import (
	"strings"

	"assaywrit/evidence/casefile"
	"assaywrit/evidence/strictyaml"
	"assaywrit/evidence/trace"
)

// Names of the files that case.yaml of a draft names.
const (
	MethodFile   = "method.yaml"
	SequenceFile = "sequence.csv"
)

// A Raw is one raw file: its path in the case folder, with forward slashes, and what it holds. File is nil for delimited text, whose
// layout is still to be declared.
type Raw struct {
	Path string
	File *trace.File
}

// Texts are the three files of a draft, and the number of marks in them.
type Texts struct {
	Case, Method, Sequence []byte
	Marks                  int
}

// Write drafts the case of some raw files, with the paths of its documents. criteria are the names of the criteria sets that can be
// had by name; they are told, none is chosen. The same files give the same draft, in whatever order they come.
func Write(raws []Raw, documents, criteria []string) Texts {
	raws = ordered(raws)
	var t Texts
	var marks [3]int
	t.Case, marks[0] = caseOf(documents, criteria).Write(casefile.Case{})
	p := planOf(raws)
	t.Method, marks[1] = methodOf(raws, p).Write(casefile.Method{})
	t.Sequence, marks[2] = sequenceOf(raws, p.analytes())
	t.Marks = marks[0] + marks[1] + marks[2]
	return t
}

// head is what stands above the two YAML files.
var head = []string{
	"A draft. Each " + strictyaml.Mark + " stands for what only a person knows; the comment beside it says what is wanted.",
	"assaywrit check lists those that are left. Keys behind a # may be left out; take the # away to use one.",
}

// usable tells whether a text from a raw file can stand in the case as it is: on one line, with nothing that does not show and no
// blanks around it, as those would be taken away.
func usable(text string) bool {
	return text != "" && text == strings.TrimSpace(text) && !strings.Contains(text, "\n") && !strictyaml.Hidden(text)
}
