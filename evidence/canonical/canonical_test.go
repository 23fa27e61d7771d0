package canonical_test

import (
	"bufio"
	"bytes"
	"compress/gzip"
	"encoding/json"
	"math"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"testing"

	"assaywrit/evidence/canonical"
)

const vectors = "../../testdata/jcs"

// TestPublishedPairs: RFC 8785 pairs as published with it, and more from an ECMAScript engine; see testdata/SOURCES.md.
func TestPublishedPairs(t *testing.T) {
	n := 0
	for _, folder := range []string{vectors, filepath.Join(vectors, "own")} {
		inputs, err := filepath.Glob(filepath.Join(folder, "input", "*.json"))
		if err != nil {
			t.Fatal(err)
		}
		for _, in := range inputs {
			n++
			text, err := os.ReadFile(in)
			if err != nil {
				t.Fatal(err)
			}
			want, err := os.ReadFile(filepath.Join(folder, "output", filepath.Base(in)))
			if err != nil {
				t.Fatal(err)
			}
			var v any
			if err := json.Unmarshal(text, &v); err != nil {
				t.Fatal(err)
			}
			got, err := canonical.Marshal(v)
			if err != nil || !bytes.Equal(got, bytes.TrimSuffix(want, []byte("\n"))) {
				t.Errorf("%s: %v\ngot  %q\nwant %q", in, err, got, want)
			}
			again, err := canonical.Marshal(json.RawMessage(got))
			if err != nil || !bytes.Equal(again, got) {
				t.Errorf("%s: not the same when done again: %q, %v", in, again, err)
			}
		}
	}
	if n != 8 {
		t.Errorf("%d pairs were found, want 8", n)
	}
}

// TestPublishedNumbers: the published sequence of 10,000 doubles and their ECMAScript form.
func TestPublishedNumbers(t *testing.T) {
	f, err := os.Open(filepath.Join(vectors, "es6testfile10k.txt.gz"))
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	z, err := gzip.NewReader(f)
	if err != nil {
		t.Fatal(err)
	}
	n := 0
	for lines := bufio.NewScanner(z); lines.Scan(); n++ {
		hex, want, _ := strings.Cut(lines.Text(), ",")
		bits, err := strconv.ParseUint(hex, 16, 64)
		if err != nil {
			t.Fatal(err)
		}
		got, err := canonical.Marshal(math.Float64frombits(bits))
		if err != nil || string(got) != want {
			t.Errorf("%s: %s, %v, want %s", hex, got, err, want)
		}
	}
	if n != 10000 {
		t.Errorf("%d lines, want 10000", n)
	}
}

func TestRefusedValues(t *testing.T) {
	for _, v := range []any{math.NaN(), math.Inf(1), func() {}, map[bool]int{true: 1}} {
		if got, err := canonical.Marshal(v); err == nil {
			t.Errorf("%v became %s", v, got)
		}
	}
}
