package demo

import (
	"bytes"
	"crypto/sha256"
	"fmt"
	"io/fs"
	"regexp"
	"strings"
	"testing"
	"testing/fstest"

	"assaywrit/evidence/casefile"
)

func made(t testing.TB) []File {
	t.Helper()
	files, err := Files()
	if err != nil {
		t.Fatal(err)
	}
	return files
}

func folder(files []File) fs.FS {
	m := fstest.MapFS{}
	for _, f := range files {
		m[f.Path] = &fstest.MapFile{Data: f.Data}
	}
	return m
}

// regressionGuard is the SHA-256 over path and content of every file, as this program first wrote them: it says that nothing has
// changed, not that anything is right.
const regressionGuard = "e719e67ce719a3c08f533f3431788197a00df37d39ebd0386d0143428fa4a222"

func TestSameBytes(t *testing.T) {
	first, second := made(t), made(t)
	h := sha256.New()
	for i, f := range first {
		if second[i].Path != f.Path || !bytes.Equal(second[i].Data, f.Data) {
			t.Errorf("%s: not the same twice", f.Path)
		}
		if i > 0 && first[i-1].Path >= f.Path {
			t.Errorf("%s comes after %s", f.Path, first[i-1].Path)
		}
		fmt.Fprintf(h, "%s\x00%d\x00%s", f.Path, len(f.Data), f.Data)
	}
	if got := fmt.Sprintf("%x", h.Sum(nil)); got != regressionGuard {
		t.Errorf("the example has changed: its SHA-256 is %s, it was %s", got, regressionGuard)
	}
}

// TestCaseLoads reads the example as any case is read: without a problem.
func TestCaseLoads(t *testing.T) {
	f, err := casefile.Load(folder(made(t)))
	if err != nil {
		t.Fatal(err)
	}
	if !f.Case.Demonstration || len(f.Injections) != len(batch) || len(f.Method.Analytes) != len(compounds) {
		t.Errorf("demonstration %v, %d injections, %d analytes", f.Case.Demonstration, len(f.Injections), len(f.Method.Analytes))
	}
	for _, a := range f.Method.Analytes {
		if _, ok := Truth()[a.ID]; !ok {
			t.Errorf("the truth about %s is not known", a.ID)
		}
	}
}

// TestBatchAsDescribed: the order of the sequence that the example promises.
func TestBatchAsDescribed(t *testing.T) {
	f, err := casefile.Load(folder(made(t)))
	if err != nil {
		t.Fatal(err)
	}
	var order []string
	for _, r := range f.Injections {
		order = append(order, strings.TrimSpace(fmt.Sprintf("%s %s%s", r.Role, r.Level, r.Aliquot)))
	}
	const want = "solvent-blank, matrix-blank, zero, calibrator C1, calibrator C2, calibrator C3, calibrator C4, calibrator C5, calibrator C6, calibrator C7, " +
		"carryover-blank, control low, control high, negative-control, matrix-blank, sample A1, sample A2, sample A3, carryover-blank, control low, control high"
	if got := strings.Join(order, ", "); got != want {
		t.Errorf("the sequence is %s", got)
	}
}

// TestNothingReal: codes instead of names, marked as invented, and no word that says whether anyone broke a rule.
func TestNothingReal(t *testing.T) {
	judging := regexp.MustCompile(`(?i)\b(guilty|cheat\w*|offen[cd]\w*|innocent|clean)\b`)
	for _, f := range made(t) {
		if strings.HasPrefix(f.Path, "raw/") {
			continue
		}
		if w := judging.Find(f.Data); w != nil {
			t.Errorf("%s says %q", f.Path, w)
		}
		if f.Path != "sequence.csv" && !bytes.Contains(f.Data, []byte("invented")) {
			t.Errorf("%s does not say that it is invented", f.Path)
		}
		if strings.HasSuffix(f.Path, "case.yaml") && bytes.Contains(f.Data, []byte("name: P-")) {
			t.Errorf("%s has a name", f.Path)
		}
	}
}

func BenchmarkFiles(b *testing.B) {
	b.Run("injections=21/traces=252", func(b *testing.B) {
		for b.Loop() {
			if _, err := Files(); err != nil {
				b.Fatal(err)
			}
		}
	})
}
