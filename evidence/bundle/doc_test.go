package bundle

import (
	"bytes"
	"os"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
)

// documented is the bundle whose statement the package comment shows.
func documented() (Header, []Payload) {
	h := testHeader()
	h.Signatories = h.Signatories[1:]
	return h, []Payload{{"evidence/evidence.json", []byte("{}")}, {"inputs/case/case.yaml", []byte("case: C-0417\n")}}
}

// TestDocumentedStatement reads the statement that the package comment shows, and writes it. Its hashes, root and id were
// computed with a few lines of Python (hashlib, uuid) from the same files, not with this program.
func TestDocumentedStatement(t *testing.T) {
	source, err := os.ReadFile("doc.go")
	if err != nil {
		t.Fatal(err)
	}
	var text strings.Builder
	for _, line := range strings.Split(string(source), "\n") {
		if part, ok := strings.CutPrefix(line, "//\t"); ok && (strings.HasPrefix(part, "{") || text.Len() > 0 && !strings.HasSuffix(text.String(), "\n")) {
			text.WriteString(strings.TrimLeft(part, " "))
			if strings.HasSuffix(part, "\"}") {
				text.WriteString("\n")
			}
		}
	}
	shown := strings.TrimSuffix(text.String(), "\n")
	if _, err := parseStatement([]byte(shown)); err != nil {
		t.Errorf("%v: %s", err, shown)
	}
	h, payload := documented()
	var out bytes.Buffer
	if _, err := Write(&out, h, payload); err != nil {
		t.Fatal(err)
	}
	if d := cmp.Diff(string(opened(t, out.Bytes()).StatementBytes()), shown); d != "" {
		t.Error(d)
	}
}
