package bundle

import (
	"errors"
	"fmt"
	"strings"
	"unicode"
	"unicode/utf8"

	"golang.org/x/text/unicode/norm"
)

const maxNameBytes = 1024

// reservedNames are devices on Windows, whatever extension follows.
var reservedNames = map[string]bool{"con": true, "prn": true, "aux": true, "nul": true}

// CheckPath reports why a path, relative with forward slashes, cannot be in a bundle. A path must come out the same on
// Linux, Windows and macOS, stay inside the folder it is unpacked to, and be written alike by BagIt and sha256sum:
// so no '%', which RFC 8493 encodes, and no '\', which sha256sum escapes.
func CheckPath(path string) error {
	switch {
	case path == "":
		return errors.New("the name is empty")
	case len(path) > maxNameBytes:
		return fmt.Errorf("the name has %d bytes, want %d at most", len(path), maxNameBytes)
	case !utf8.ValidString(path):
		return errors.New("the name is not UTF-8")
	case strings.HasPrefix(path, "/"):
		return errors.New("the name is absolute")
	case strings.HasPrefix(path, "~"):
		return errors.New("the name begins with '~', which stands for a home folder")
	}
	for _, r := range path {
		if strings.ContainsRune(`\%:*?"<>|`, r) || unicode.IsControl(r) || unicode.Is(unicode.Bidi_Control, r) || r == '\ufeff' || r == utf8.RuneError || r == '\u2028' || r == '\u2029' {
			return fmt.Errorf(`the name holds %q, want none of \ %% : * ? " < > | and no control characters`, r)
		}
	}
	for _, segment := range strings.Split(path, "/") {
		if err := checkSegment(segment); err != nil {
			return err
		}
	}
	return nil
}

func checkSegment(s string) error {
	switch {
	case s == "":
		return errors.New("the name has an empty part")
	case s == "." || s == "..":
		return fmt.Errorf("the name holds the part %q", s)
	case len(s) > 255:
		return fmt.Errorf("a part of the name has %d bytes, want 255 at most", len(s))
	case strings.HasPrefix(s, " ") || strings.HasSuffix(s, " ") || strings.HasSuffix(s, "."):
		return fmt.Errorf("the part %q of the name begins or ends with a space, or ends with a dot", s)
	}
	stem, _, _ := strings.Cut(strings.ToLower(s), ".")
	stem = strings.TrimRight(stem, " ")
	digit := len(stem) == 4 && (strings.HasPrefix(stem, "com") || strings.HasPrefix(stem, "lpt")) && stem[3] >= '0' && stem[3] <= '9'
	if reservedNames[stem] || digit {
		return fmt.Errorf("the part %q of the name is reserved for a device on some systems", s)
	}
	return nil
}

// folded gives the same text for names that some file systems do not tell apart: canonical decomposition (UAX #15), then
// simple case folding, then composition.
func folded(name string) string {
	fold := func(r rune) rune {
		least := r
		for x := unicode.SimpleFold(r); x != r; x = unicode.SimpleFold(x) {
			least = min(least, x)
		}
		return least
	}
	return norm.NFC.String(strings.Map(fold, norm.NFD.String(name)))
}

// names gathers the paths of a bundle and finds those that collide.
type names struct {
	files   map[string]bool   // as written
	spelled map[string]string // files and folders: folded name to the name as first written
	folders map[string]bool
}

func newNames() *names {
	return &names{files: map[string]bool{}, spelled: map[string]string{}, folders: map[string]bool{}}
}

// add takes a path in. It refuses one that is there already, one that differs from another in case or Unicode form alone
// (in any of its folders too), and a file that is also a folder.
func (n *names) add(path string) error {
	if n.files[path] {
		return errors.New("the name is there twice")
	}
	if n.folders[path] {
		return errors.New("the name is that of a file and of a folder")
	}
	n.files[path] = true
	for i, r := range path {
		if r == '/' {
			folder := path[:i]
			if n.files[folder] {
				return fmt.Errorf("the folder %q of the name is a file", folder)
			}
			n.folders[folder] = true
			if err := n.spell(folder); err != nil {
				return err
			}
		}
	}
	return n.spell(path)
}

func (n *names) spell(name string) error {
	key := folded(name)
	if other, ok := n.spelled[key]; ok && other != name {
		return fmt.Errorf("the name differs from %q in case or Unicode form alone", other)
	}
	n.spelled[key] = name
	return nil
}
