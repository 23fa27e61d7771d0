package bundle

import (
	"strings"
	"testing"
)

func TestCheckPath(t *testing.T) {
	for _, good := range []string{
		"a", "a/b/c.txt", "raw/001 blank (2).mzML", "Überprüfung.csv", "U\u0308berpru\u0308fung.csv", "試料.csv", "नमूना.csv", "a..b", ".hidden", "console.txt", "com.txt", "com10",
		"a~b", "x/~y", "data/" + strings.Repeat("a", 255),
	} {
		if err := CheckPath(good); err != nil {
			t.Errorf("%q: %v", good, err)
		}
	}
	for _, bad := range []string{
		"", ".", "..", "/", "/a", "a/", "a//b", "a/./b", "../a", "a/..", "~", "~/a", "~root/a", `a\b`, `\\server\share`, "c:/a", "a:stream", "a*", "a?", `"a"`, "<a>", "a|b",
		"100%", "a\x00", "a\n", "a\r", "a\x7f", "a\u0085", "a\u202eb", "a\u2066b", "\ufeffa", "a\u2028b", "a\ufffdb", "\xff", "a ", " a", "a.", "a./b", "a /b",
		"con", "CON", "Con.txt", "nul.tar.gz", "aux /b", "x/prn", "com1", "COM9.log", "lpt0",
		strings.Repeat("a", 256), strings.Repeat("a/", 512) + "a",
	} {
		if err := CheckPath(bad); err == nil {
			t.Errorf("%q is accepted", bad)
		}
	}
}

func TestCollidingNames(t *testing.T) {
	for _, pair := range [][2]string{
		{"a", "a"}, {"a", "A"}, {"dir/a", "DIR/a"}, {"dir/a", "Dir/b"}, {"straße", "STRAßE"}, {"é", "e\u0301"}, {"É", "e\u0301"}, {"Å", "\u212b"}, {"K", "\u212a"}, {"k", "\u212a"},
		{"σ", "ς"}, {"Σ", "ς"}, {"가", "\u1100\u1161"}, {"a/b", "a"}, {"a", "a/b"}, {"a/b", "A"}, {"ǆ", "ǅ"}, {"q\u0323\u0307", "q\u0307\u0323"}, {"ｋ", "Ｋ"}, {"豈", "\uf900"},
	} {
		n := newNames()
		if err := n.add(pair[0]); err != nil {
			t.Fatal(err)
		}
		if err := n.add(pair[1]); err == nil {
			t.Errorf("%+q and %+q do not collide", pair[0], pair[1])
		}
	}
	n := newNames()
	for _, name := range []string{"a", "b", "dir/a", "dir/b", "dir2/a", "e", "é", "ab", "a-b", "ss", "ß", "fi", "ﬁ"} {
		if err := n.add(name); err != nil {
			t.Errorf("%q: %v", name, err)
		}
	}
}
