package casefile

import (
	"strings"
	"testing"
	"testing/fstest"

	"go.yaml.in/yaml/v4"

	"assaywrit/evidence/strictyaml"
)

// scalars lists the values of a YAML text that are neither keys, nor lists, nor empty.
func scalars(n *yaml.Node) []*yaml.Node {
	switch n.Kind {
	case yaml.ScalarNode:
		return []*yaml.Node{n}
	case yaml.MappingNode:
		var list []*yaml.Node
		for i := 1; i < len(n.Content); i += 2 {
			list = append(list, scalars(n.Content[i])...)
		}
		return list
	}
	var list []*yaml.Node
	for _, c := range n.Content {
		list = append(list, scalars(c)...)
	}
	return list
}

// onlyMark wants one problem alone: the mark, at its place.
func onlyMark(t *testing.T, fsys fstest.MapFS, file string, line, column int, what string) Problem {
	t.Helper()
	problems := problemsOf(t, fsys)
	if len(problems) != 1 || problems[0].File != file || problems[0].Line != line || problems[0].Column != column || problems[0].Got != strictyaml.MarkFound || problems[0].Want == "" || problems[0].Key == "" {
		t.Errorf("%s, %s:%d:%d marked: %v", what, file, line, column, problems)
	}
	return problems[0]
}

// TestMarkInEachValue marks each value of the small case and of its method in turn. Nothing else is reported: no reference to what the
// mark stands for, and no file that is not named any more.
func TestMarkInEachValue(t *testing.T) {
	n := 0
	for file, text := range map[string]string{CaseFile: smallCase, "method.yaml": smallMethod} {
		var doc yaml.Node
		if err := yaml.Unmarshal([]byte(text), &doc); err != nil {
			t.Fatal(err)
		}
		for _, s := range scalars(&doc) {
			lines := strings.Split(text, "\n")
			line := []rune(lines[s.Line-1])
			rest, ok := strings.CutPrefix(string(line[s.Column-1:]), s.Value)
			if !ok {
				t.Fatalf("%s:%d:%d: does not hold %q", file, s.Line, s.Column, s.Value)
			}
			lines[s.Line-1] = string(line[:s.Column-1]) + strictyaml.Mark + rest
			onlyMark(t, changed(t, change{file, text, strings.Join(lines, "\n")}), file, s.Line, s.Column, s.Value)
			n++
		}
	}
	if n < 120 {
		t.Errorf("%d values", n)
	}
}

// sequenceWith is the small sequence with another text in one field.
func sequenceWith(line, index int, text string) (sequence string, column int, old string) {
	lines := strings.Split(strings.ReplaceAll(smallSequence, `"no spray, again"`, "no spray"), "\n")
	fields := strings.Split(lines[line], ",")
	old, column = fields[index], len(strings.Join(fields[:index], ","))+2
	if index == 0 {
		column = 1
	}
	fields[index] = text
	lines[line] = strings.Join(fields, ",")
	return strings.Join(lines, "\n"), column, old
}

func TestMarkInEachField(t *testing.T) {
	header := strings.Split(strings.SplitN(smallSequence, "\n", 2)[0], ",")
	for line := range strings.Count(smallSequence, "\n") {
		for index, name := range header {
			for _, mark := range []string{"FILL-IN", `"FILL-IN"`, " FILL-IN "} {
				text, column, old := sequenceWith(line, index, mark)
				if strings.HasPrefix(mark, " ") {
					column++ // blanks in front do not count
				}
				p := onlyMark(t, changed(t, change{"sequence.csv", smallSequence, text}), "sequence.csv", line+1, column, old)
				want := strings.TrimSuffix(name, " [ng/mL]")
				if line == 0 {
					want = "header"
				}
				if p.Key != want {
					t.Errorf("line %d, %s: key %q", line+1, name, p.Key)
				}
			}
		}
	}
}

// TestMarksBelowMarkedHeader: fields are looked at also where the name of their column is still to be filled in.
func TestMarksBelowMarkedHeader(t *testing.T) {
	text := strings.ReplaceAll(strings.Replace(smallSequence, "nominal salbutamol [ng/mL]", "FILL-IN,FILL-IN", 1), ",P-2,,", ",FILL-IN,,FILL-IN,")
	problems := problemsOf(t, changed(t, change{"sequence.csv", smallSequence, text}))
	if want := strings.Count(text, strictyaml.Mark); len(problems) != want {
		t.Errorf("%d problems, want %d: %v", len(problems), want, problems)
	}
	for _, p := range problems {
		if p.Got != strictyaml.MarkFound {
			t.Error(&p)
		}
	}
}

// TestMarkInsideText: a longer text that holds it is a text.
func TestMarkInsideText(t *testing.T) {
	if _, err := Load(changed(t, change{"sequence.csv", `"no spray, again"`, "no FILL-IN"}, change{CaseFile, "1 Road", "1 FILL-IN Road"})); err != nil {
		t.Error(err)
	}
}
