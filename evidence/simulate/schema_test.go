package simulate

import (
	"bytes"
	"encoding/xml"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"
)

// A node is an element of XML with its children.
type node struct {
	name     string
	attrs    map[string]string
	children []*node
	text     string
}

func (n *node) all(name string) []*node {
	var list []*node
	for _, c := range n.children {
		if c.name == name {
			list = append(list, c)
		}
	}
	return list
}

func (n *node) first(path ...string) *node {
	for _, name := range path {
		list := n.all(name)
		if len(list) == 0 {
			return &node{}
		}
		n = list[0]
	}
	return n
}

func (n *node) walk(f func(*node)) {
	f(n)
	for _, c := range n.children {
		c.walk(f)
	}
}

// parse reads XML with the standard library, which knows nothing of the writer.
func parse(data []byte) (*node, error) {
	d := xml.NewDecoder(bytes.NewReader(data))
	d.CharsetReader = func(_ string, r io.Reader) (io.Reader, error) { return r, nil } // the schemas are ASCII where it matters
	d.Strict = true
	root := &node{}
	stack := []*node{root}
	for {
		tok, err := d.Token()
		if err == io.EOF {
			return root.children[0], nil
		}
		if err != nil {
			return nil, err
		}
		top := stack[len(stack)-1]
		switch tok := tok.(type) {
		case xml.StartElement:
			n := &node{name: tok.Name.Local, attrs: map[string]string{}}
			for _, a := range tok.Attr {
				n.attrs[a.Name.Local] = a.Value
			}
			top.children = append(top.children, n)
			stack = append(stack, n)
		case xml.EndElement:
			stack = stack[:len(stack)-1]
		case xml.CharData:
			top.text += string(tok)
		}
	}
}

// A schema is the part of XML Schema that mzML's own uses: sequences of elements, attributes, extensions.
type schema struct {
	types map[string]*node
	roots map[string]*node
}

func schemas(t testing.TB, names ...string) *schema {
	t.Helper()
	s := &schema{types: map[string]*node{}, roots: map[string]*node{}}
	for _, name := range names {
		data, err := os.ReadFile(filepath.Join("../../testdata/simulate", name))
		if err != nil {
			t.Fatal(err)
		}
		root, err := parse(data)
		if err != nil {
			t.Fatalf("%s: %v", name, err)
		}
		for _, c := range root.all("complexType") {
			s.types[c.attrs["name"]] = c
		}
		for _, e := range root.all("element") {
			s.roots[e.attrs["name"]] = e
		}
	}
	return s
}

// typeOf is the complex type of an element's declaration, or nil for a simple one.
func (s *schema) typeOf(declaration *node) *node {
	if ref := declaration.attrs["ref"]; ref != "" {
		declaration = s.roots[strings.TrimPrefix(ref, "dx:")]
	}
	if inner := declaration.all("complexType"); len(inner) > 0 {
		return inner[0]
	}
	return s.types[strings.TrimPrefix(declaration.attrs["type"], "dx:")]
}

// content gathers the sequence and the attributes of a type, those of what it extends first.
func (s *schema) content(typ *node) (sequence, attributes []*node) {
	for _, kind := range []string{"complexContent", "simpleContent"} {
		if ext := typ.first(kind, "extension"); ext.name != "" {
			if base := s.types[strings.TrimPrefix(ext.attrs["base"], "dx:")]; base != nil {
				sequence, attributes = s.content(base)
			}
			return append(sequence, ext.first("sequence").all("element")...), append(attributes, ext.all("attribute")...)
		}
	}
	return typ.first("sequence").all("element"), typ.all("attribute")
}

// problems lists what an element has against its type.
func (s *schema) problems(n *node, typ *node, path string) (list []string) {
	if typ == nil {
		if len(n.children) > 0 {
			list = append(list, path+": elements where there is text only")
		}
		return list
	}
	sequence, attributes := s.content(typ)
	known := []string{"schemaLocation", "xmlns", "xsi"}
	for _, a := range attributes {
		known = append(known, a.attrs["name"])
		if _, ok := n.attrs[a.attrs["name"]]; !ok && a.attrs["use"] == "required" {
			list = append(list, path+": without the attribute "+a.attrs["name"])
		}
	}
	for name := range n.attrs {
		if !slices.Contains(known, name) {
			list = append(list, path+": the unknown attribute "+name)
		}
	}
	at := 0
	for _, e := range sequence {
		name := strings.TrimPrefix(e.attrs["name"]+e.attrs["ref"], "dx:")
		low, high, count := 1, 1, 0
		if e.attrs["minOccurs"] != "" {
			fmt.Sscan(e.attrs["minOccurs"], &low)
		}
		switch v := e.attrs["maxOccurs"]; v {
		case "unbounded":
			high = 1 << 30
		case "":
		default:
			fmt.Sscan(v, &high)
		}
		for at < len(n.children) && n.children[at].name == name {
			list = append(list, s.problems(n.children[at], s.typeOf(e), path+"/"+name)...)
			at++
			count++
		}
		if count < low || count > high {
			list = append(list, fmt.Sprintf("%s: %d of %s", path, count, name))
		}
	}
	if at < len(n.children) {
		list = append(list, path+": "+n.children[at].name+" does not belong here")
	}
	if c, ok := n.attrs["count"]; ok && c != fmt.Sprint(len(n.children)) {
		list = append(list, fmt.Sprintf("%s: count is %s, there are %d", path, c, len(n.children)))
	}
	return append(list, attributeForms(n, attributes, path)...)
}

// attributeForms checks the simple types that can go wrong here.
func attributeForms(n *node, attributes []*node, path string) (list []string) {
	for _, a := range attributes {
		v, ok := n.attrs[a.attrs["name"]]
		if !ok {
			continue
		}
		switch a.attrs["type"] {
		case "xs:ID", "xs:IDREF":
			if !ncName.MatchString(v) {
				list = append(list, fmt.Sprintf("%s: %s %q is no name", path, a.attrs["name"], v))
			}
		case "xs:int", "xs:nonNegativeInteger":
			if _, err := fmt.Sscanf(v, "%d", new(int)); err != nil {
				list = append(list, fmt.Sprintf("%s: %s %q is no number", path, a.attrs["name"], v))
			}
		}
	}
	return list
}

// check reads a document and holds it against the schemas; ids must be unique and references lead to one.
func (s *schema) check(t testing.TB, data []byte) []string {
	t.Helper()
	root, err := parse(data)
	if err != nil {
		return []string{err.Error()}
	}
	if s.roots[root.name] == nil {
		return []string{"the root element " + root.name}
	}
	list := s.problems(root, s.typeOf(s.roots[root.name]), root.name)
	ids, refs := map[string]int{}, []string{}
	root.walk(func(n *node) {
		if n.name != "mzML" && n.name != "chromatogram" && n.attrs["id"] != "" { // those two are text, not xs:ID
			ids[n.attrs["id"]]++
		}
		for _, ref := range []string{"ref", "softwareRef", "sampleRef", "defaultInstrumentConfigurationRef", "defaultDataProcessingRef", "cvRef", "unitCvRef"} {
			if v, ok := n.attrs[ref]; ok {
				refs = append(refs, v)
			}
		}
	})
	for _, r := range refs {
		if ids[r] != 1 {
			list = append(list, fmt.Sprintf("the reference %q leads to %d elements", r, ids[r]))
		}
	}
	return list
}

// TestSchemaChecker: the checker itself accepts the written file and refuses it with one thing wrong.
func TestSchemaChecker(t *testing.T) {
	s := schemas(t, "mzML1.1.0.xsd", "mzML1.1.0_idx.xsd")
	good := string(written(t, sampleRun(t)))
	if list := s.check(t, []byte(good)); len(list) > 0 {
		t.Errorf("refused: %s", strings.Join(list, "; "))
	}
	for _, tt := range [][2]string{
		{` defaultArrayLength="181"`, ``},
		{` count="2"`, ` count="3"`},
		{`<softwareRef ref="acquisition"/>`, `<softwareRef ref="other"/>`},
		{`<softwareRef ref="acquisition"/>`, ``},
		{`<sampleList`, `<samplesList`},
		{`</precursor>`, `</precursor><precursor/>`},
		{`<run id="run-1"`, `<run id="1"`},
		{`<run id="run-1"`, `<run id="sample"`},
		{`<activation>`, `<activation colour="red">`},
		{`<fileChecksum>`, `<checksum>`},
		{`<source order="1">`, `<source order="first">`},
	} {
		bad := strings.Replace(good, tt[0], tt[1], 1)
		if tt[0] == `<sampleList` {
			bad = strings.Replace(bad, `</sampleList`, `</samplesList`, 1)
		}
		if tt[0] == `<fileChecksum>` {
			bad = strings.Replace(bad, `</fileChecksum>`, `</checksum>`, 1)
		}
		if bad == good {
			t.Errorf("%q is not in the file", tt[0])
		}
		list := s.check(t, []byte(bad))
		if tt[1] == `` && strings.Contains(tt[0], "softwareRef") {
			if len(list) > 0 { // optional
				t.Errorf("refused without softwareRef: %v", list)
			}
			continue
		}
		if len(list) == 0 {
			t.Errorf("%q instead of %q is accepted", tt[1], tt[0])
		}
	}
}
