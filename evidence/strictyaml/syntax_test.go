package strictyaml

import (
	"bytes"
	"strings"
	"testing"
)

// TestNotYAML: what is no YAML, or more than one file should hold, gives one problem with its place and advice.
func TestNotYAML(t *testing.T) {
	tests := []struct {
		name, text   string
		line, column int
		want         string // in the message or the hint
	}{
		{"empty", "", 1, 1, "an empty file"},
		{"blank", " \n\n", 1, 1, "an empty file"},
		{"comments only", "# nothing\n", 1, 1, "an empty file"},
		{"byte-order mark only", "\ufeff", 1, 1, "an empty file"},
		{"not UTF-8", "a: 1\nb: caf\xe9\n", 2, 7, "the byte 0xe9"},
		{"UTF-16", "\xff\xfea\x00", 1, 1, "encoding UTF-8"},
		{"NUL", "a: 1\nb: \x00\n", 2, 4, "U+0000"},
		{"control character", "a: \x1b[1m\n", 1, 4, "U+001B"},
		{"line separator", "a: x\u2028y\n", 1, 5, "U+2028"},
		{"turned text", "a: 1\r\nb: x\u202ey\n", 2, 5, "U+202E"},
		{"byte-order mark inside", "a: 1\n\ufeffb: 2\n", 2, 1, "U+FEFF"},
		{"lost character", "a: caf\ufffd\n", 1, 7, "U+FFFD"},
		{"tab", "a:\n\tb: 1\n", 2, 1, "replace each tab by two spaces"},
		{"tab after blanks", "a:\n  \tb: 1\n", 2, 3, "a tab in the indentation"},
		{"tab after CR", "a:\r\tb: 1\r", 2, 1, "a tab in the indentation"},
		{"second document", "a: 1\n---\nb: 2\n", 2, 1, "a second document"},
		{"second document after the end", "a: 1\n...\nb: 2\n", 3, 1, "a second document"},
		{"second document that is wrong", "a: 1\n---\nb: [1\n", 4, 1, "bracket"},
		{"open quotation mark", "a: 1\nb: \"x\nc: 2\n", 2, 4, "opened and not closed"},
		{"open bracket", "a: [1, 2\nb: 3\n", 2, 2, "a bracket is opened and not closed"},
		{"open brace", "a: {b: 1\n", 2, 1, "a bracket is opened and not closed"},
		{"colon in a value", "a: b: c\n", 1, 5, "in quotes"},
		{"indented too far", "a: 1\n b: 2\n", 2, 3, "indented further"},
		{"indented too little", "a:\n  b: 1\n c: 2\n", 3, 2, "begin in the same column"},
		{"list and keys", "- a\nb: c\n", 2, 1, "every item of the list"},
		{"list beside its key", "a: - b\n", 1, 4, "on the line below its key"},
		{"at sign", "a: @x\n", 1, 4, "in quotes"},
		{"per cent sign", "a: %x\n", 1, 4, "in quotes"},
		{"star", "a: *x\n", 1, 4, "in quotes"},
		{"backslash", "a: \"raw\\q\"\n", 1, 8, "single quotes"},
		{"text after a quotation", "a: 'x' y\n", 1, 8, "nothing follows a closing quotation mark"},
		{"key without a colon", "a: 1\nb\nc: 2\n", 2, 1, "a colon and a space follow each key"},
		{"directive", "%FOO x\n---\na: 1\n", 1, 5, "begins with %"},
		{"version", "%YAML 1.2\n---\na: 1\n", 1, 1, "begins with %"},
	}
	for _, tt := range tests {
		t.Run(tt.name, func(t *testing.T) {
			var got kit
			doc, problems := Bind("kit.yaml", []byte(tt.text), &got)
			if doc != nil || len(problems) != 1 {
				t.Fatalf("%v, %v", doc, problems)
			}
			p := problems[0]
			if p.Line != tt.line || p.Column != tt.column || p.File != "kit.yaml" {
				t.Errorf("at %s:%d:%d, want %d:%d", p.File, p.Line, p.Column, tt.line, tt.column)
			}
			if !strings.Contains(p.Error()+"\n"+p.Hint, tt.want) || p.Want == "" {
				t.Errorf("got %q with the hint %q, want %q in them", p.Error(), p.Hint, tt.want)
			}
		})
	}
}

// TestBounds: files that are too big or nested too deep are refused, and aliases that would multiply are never followed.
func TestBounds(t *testing.T) {
	var got kit
	if _, problems := Bind("kit.yaml", bytes.Repeat([]byte("#"), MaxBytes+1), &got); len(problems) != 1 || !strings.Contains(problems.Error(), "bytes, want at most") {
		t.Errorf("too big: %v", problems)
	}
	for _, open := range []string{"[", "{a: ", "- "} {
		if _, problems := Bind("kit.yaml", []byte("box: "+strings.Repeat(open, 20000)), &got); len(problems) == 0 {
			t.Errorf("20000 times %q was accepted", open)
		}
	}
	bomb := "a: &a [x, x, x, x, x, x, x, x, x]\n"
	for c := 'b'; c <= 'i'; c++ {
		bomb += string(c) + ": &" + string(c) + " [" + strings.TrimSuffix(strings.Repeat("*"+string(c-1)+", ", 9), ", ") + "]\n"
	}
	if _, problems := Bind("kit.yaml", []byte(bomb), &got); len(problems) == 0 {
		t.Error("aliases of aliases were accepted")
	}

	type nest struct {
		Inner []*nest `key:"inner,optional"`
	}
	deep := func(n int) string { return strings.Repeat("{inner: [", n) + strings.Repeat("]}", n) }
	if _, problems := Bind("nest.yaml", []byte(deep(maxDepth/2-1)), new(nest)); len(problems) > 0 {
		t.Errorf("%d levels: %v", maxDepth-2, problems)
	}
	if _, problems := Bind("nest.yaml", []byte(deep(maxDepth)), new(nest)); len(problems) != 1 || !strings.Contains(problems.Error(), "too deep") {
		t.Errorf("%d levels: %v", 2*maxDepth, problems)
	}
}

// TestHiddenText tells what shows from what does not.
func TestHiddenText(t *testing.T) {
	for _, s := range []string{"plain", "two\nlines", "Größe 5 µL", "尿", "a\u00a0b", "\U0001f9ea", "क्‍ष"} {
		if Hidden(s) {
			t.Errorf("%q was refused", s)
		}
	}
	for _, s := range []string{"\x00", "a\tb", "a\rb", "\x7f", "\u0085", "\u200b", "\u200f", "\u202a", "\u2066", "\u2060", "\ufeff", "\ufffd", "\ufffe", "\U0001ffff"} {
		if !Hidden(s) {
			t.Errorf("%q was accepted", s)
		}
	}
}
