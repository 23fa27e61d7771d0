package mzml

import (
	"bytes"
	"fmt"
	"strconv"
	"strings"
	"unicode/utf8"
)

// An attribute of the start tag read last. Its value is checked when read, and decoded when asked for.
type attribute struct {
	name string
	raw  []byte
}

// declaration reads the XML declaration, for the encoding. Without one the text is UTF-8.
func (s *scanner) declaration() error {
	rest := s.data[s.at:]
	if !bytes.HasPrefix(rest, []byte("<?xml")) || len(rest) < 6 || !isSpace(rest[5]) {
		return nil
	}
	from := s.at
	if err := s.skip("?>"); err != nil {
		return err
	}
	_, after, found := strings.Cut(string(s.data[from:s.at]), "encoding")
	if !found {
		return nil
	}
	after = strings.TrimLeft(after, " \t\r\n=")
	name := ""
	if after != "" && (after[0] == '"' || after[0] == '\'') {
		name, _, _ = strings.Cut(after[1:], after[:1])
	}
	switch strings.ToLower(name) {
	case "utf-8", "utf8", "us-ascii", "ascii":
	case "iso-8859-1", "latin1":
		s.latin1 = true
	default:
		return s.fail(s.base+from, fmt.Sprintf("text in the encoding %q", name), "UTF-8 or ISO-8859-1", "")
	}
	return nil
}

// attribute reads one attribute of a start tag.
func (s *scanner) attribute(element string) error {
	from := s.at
	key, ok := s.word()
	s.spaces()
	if !ok || s.at >= len(s.data) || s.data[s.at] != '=' {
		return s.fail(s.base+from, fmt.Sprintf("%q in the tag %q", s.data[from:min(from+20, len(s.data))], element), "an attribute with a value", cutHint)
	}
	s.at++
	s.spaces()
	if s.at >= len(s.data) || s.data[s.at] != '"' && s.data[s.at] != '\'' {
		return s.fail(s.base+from, fmt.Sprintf("the attribute %q without quotes", key), "a quoted value", cutHint)
	}
	i := bytes.IndexByte(s.data[s.at+1:], s.data[s.at])
	if i < 0 {
		return s.fail(s.base+from, fmt.Sprintf("the attribute %q, which is cut", key), "its closing quote", cutHint)
	}
	raw := s.data[s.at+1 : s.at+1+i]
	s.at += i + 2
	if len(s.attrs) >= maxAttributes {
		return s.fail(s.base+from, fmt.Sprintf("a tag %q with more than %d attributes", element, maxAttributes), "fewer", "")
	}
	for _, a := range s.attrs {
		if a.name == key {
			return s.fail(s.base+from, fmt.Sprintf("the attribute %q a second time in %q", key, element), "each once", "")
		}
	}
	if got, want := s.wrongValue(raw); want != "" {
		return s.fail(s.base+from, fmt.Sprintf("%s in the attribute %q", got, key), want, cutHint)
	}
	s.attrs = append(s.attrs, attribute{key, raw})
	return nil
}

// wrongValue tells what is wrong with the value of an attribute; want is "" where nothing is.
func (s *scanner) wrongValue(raw []byte) (got, want string) {
	entities, beyondASCII := false, false
	for _, c := range raw {
		switch {
		case c == '<':
			return "<", "&lt;"
		case c == '&':
			entities = true
		case c >= 0x80:
			beyondASCII = true
		case c < ' ' && !isSpace(c):
			return fmt.Sprintf("the control character %#02x", c), "text"
		}
	}
	if beyondASCII && !s.latin1 && !utf8.Valid(raw) {
		return "text that is not UTF-8", "UTF-8, or an XML declaration of ISO-8859-1"
	}
	if entities {
		if _, bad := unescape(string(raw)); bad != "" {
			return fmt.Sprintf("the entity %q", bad), "&amp; &lt; &gt; &quot; &apos; or a character number"
		}
	}
	return "", ""
}

// unescape replaces the five predefined entities and character numbers; there are no others without a document type. bad is the
// first that is something else.
func unescape(text string) (value, bad string) {
	var b strings.Builder
	for {
		before, after, found := strings.Cut(text, "&")
		b.WriteString(before)
		if !found {
			return b.String(), ""
		}
		entity, rest, closed := strings.Cut(after, ";")
		r, ok := entityRune(entity)
		if !closed || !ok {
			return "", "&" + entity[:min(20, len(entity))]
		}
		b.WriteRune(r)
		text = rest
	}
}

var predefined = map[string]rune{"amp": '&', "lt": '<', "gt": '>', "quot": '"', "apos": '\''}

// entityRune is the character that an entity stands for, if XML 1.0 allows it.
func entityRune(entity string) (rune, bool) {
	if r, ok := predefined[entity]; ok {
		return r, true
	}
	digits, numeric := strings.CutPrefix(entity, "#")
	base := 10
	if hex, ok := strings.CutPrefix(digits, "x"); ok {
		digits, base = hex, 16
	}
	n, err := strconv.ParseUint(digits, base, 21)
	r := rune(n)
	return r, numeric && err == nil && utf8.ValidRune(r) && r != 0xfffe && r != 0xffff && (r >= ' ' || r == '\t' || r == '\n' || r == '\r')
}

// attr returns an attribute of the start tag read last, or "".
func (s *scanner) attr(name string) string {
	for _, a := range s.attrs {
		if a.name == name {
			return s.value(a.raw)
		}
	}
	return ""
}

// raw returns an attribute of the start tag read last as the file writes it, or nil.
func (s *scanner) raw(name string) []byte {
	for _, a := range s.attrs {
		if a.name == name {
			return a.raw
		}
	}
	return nil
}

// value decodes the checked value of an attribute. Line ends and tabs in it are spaces (XML 1.0, section 3.3.3).
func (s *scanner) value(raw []byte) string {
	plain := true
	for _, c := range raw {
		plain = plain && c >= ' ' && c < 0x80 && c != '&'
	}
	if plain {
		return s.intern(raw)
	}
	text := strings.NewReplacer("\r\n", " ", "\r", " ", "\n", " ", "\t", " ").Replace(string(raw))
	if s.latin1 {
		wide := make([]rune, len(text))
		for i := range len(text) {
			wide[i] = rune(text[i])
		}
		text = string(wide)
	}
	text, _ = unescape(text)
	return text
}
