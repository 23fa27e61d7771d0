package render

import (
	"fmt"
	"math"
	"strings"
	"unicode"
	"unicode/utf8"

	xfont "golang.org/x/image/font"
	"golang.org/x/image/font/sfnt"
	xfixed "golang.org/x/image/math/fixed"
)

// A ruler knows which signs a face has and how wide they are, in thousandths of the size as the PDF counts. It looks each sign up
// once; a document has its own.
type ruler struct {
	buf   sfnt.Buffer
	known [faceCount][]uint16 // by code point below 0x10000; 0: not looked up yet
}

const (
	noGlyph = 1 // the face lacks the sign
	advance = 2 // added to a width
)

func newRuler() *ruler {
	r := &ruler{}
	for f := range r.known {
		r.known[f] = make([]uint16, 0x10000)
	}
	return r
}

func (r *ruler) look(f face, c rune) uint16 {
	if c < 0 || c > 0xffff {
		return noGlyph
	}
	k := r.known[f][c]
	if k == 0 {
		k = r.measure(f, c)
		r.known[f][c] = k
	}
	return k
}

func (r *ruler) measure(f face, c rune) uint16 {
	if c < 0x20 || c == 0x7f || unicode.In(c, unicode.Cc, unicode.Cf, unicode.Co, unicode.Cs) {
		return noGlyph
	}
	font := fonts().fonts[f]
	index, err := font.GlyphIndex(&r.buf, c)
	if err != nil || index == 0 {
		return noGlyph
	}
	w, err := font.GlyphAdvance(&r.buf, index, xfixed.I(1000), xfont.HintingNone)
	if err != nil {
		return noGlyph
	}
	return advance + uint16(math.Round(float64(w)/64))
}

// width is that of clean text, in millimetres.
func (r *ruler) width(f face, size float64, s string) float64 {
	sum := 0
	for _, c := range s {
		if k := r.look(f, c); k >= advance {
			sum += int(k - advance)
		}
	}
	return float64(sum) * size / 1000 * mmPerPoint
}

// clean makes text fit to be set: what the face lacks, control characters and characters that turn the direction of reading become
// visible substitutes, never silent boxes; broken UTF-8 becomes the replacement sign. Line ends and tabs become spaces.
func (r *ruler) clean(f face, s string) string {
	if r.settable(f, s) {
		return s
	}
	var b strings.Builder
	for i, c := range s {
		switch {
		case c == '\n' || c == '\t' || c == '\r':
			b.WriteByte(' ')
		case c == utf8.RuneError && !strings.HasPrefix(s[i:], "\uFFFD"):
			b.WriteString("\uFFFD")
		case r.look(f, c) < advance:
			fmt.Fprintf(&b, "[U+%04X]", c)
		default:
			b.WriteRune(c)
		}
	}
	return b.String()
}

func (r *ruler) settable(f face, s string) bool {
	for i, c := range s {
		if r.look(f, c) < advance || c == utf8.RuneError && !strings.HasPrefix(s[i:], "\uFFFD") {
			return false
		}
	}
	return true
}
