package casefile

import (
	"go/doc/comment"
	"go/parser"
	"go/token"
	"testing"
)

// TestDocumentedExample loads the example in the package comment.
func TestDocumentedExample(t *testing.T) {
	f, err := parser.ParseFile(token.NewFileSet(), "doc.go", nil, parser.ParseComments)
	if err != nil {
		t.Fatal(err)
	}
	var blocks []string
	for _, b := range new(comment.Parser).Parse(f.Doc.Text()).Content {
		if c, ok := b.(*comment.Code); ok {
			blocks = append(blocks, c.Text)
		}
	}
	if len(blocks) != 3 {
		t.Fatalf("%d blocks, want case.yaml, method.yaml and sequence.csv", len(blocks))
	}
	fsys := small()
	for i, name := range []string{"case.yaml", "method.yaml", "sequence.csv"} {
		put(fsys, name, blocks[i])
	}
	if diff := sameFolder(loaded(t, small()), loaded(t, fsys)); diff != "" {
		t.Error(diff)
	}
}
