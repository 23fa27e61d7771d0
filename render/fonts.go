package render

import (
	"fmt"
	"strings"
	"sync"
	"unicode/utf8"

	"codeberg.org/go-fonts/dejavu/dejavusanscondensed"
	"codeberg.org/go-fonts/dejavu/dejavusanscondensedbold"
	"codeberg.org/go-fonts/dejavu/dejavusansmono"
	"golang.org/x/image/font/opentype"
	"golang.org/x/image/font/sfnt"
	"gonum.org/v1/plot"
	"gonum.org/v1/plot/font"
	"gonum.org/v1/plot/text"
)

// One family serves text and charts, so that a sign looks the same everywhere.
const (
	family = "DejaVu"
	mono   = "DejaVuMono"
)

// faces are the parsed fonts; parsing them once is enough for all documents.
type faces struct {
	regular, bold, mono *sfnt.Font
	text                text.Handler // of the charts
}

var loadFaces = sync.OnceValue(func() *faces {
	f := &faces{parse(dejavusanscondensed.TTF), parse(dejavusanscondensedbold.TTF), parse(dejavusansmono.TTF), nil}
	cache := font.NewCache(font.Collection{{Font: font.Font{Typeface: family}, Face: f.regular}})
	f.text = text.Plain{Fonts: cache}
	return f
})

func parse(ttf []byte) *opentype.Font {
	f, err := opentype.Parse(ttf)
	if err != nil {
		panic("render: internal error: embedded font: " + err.Error())
	}
	return f
}

// newPlot is an empty chart in the documents' font.
func newPlot() *plot.Plot {
	h := loadFaces().text
	p := plot.New()
	p.TextHandler = h
	small := font.Font{Typeface: family, Size: 6.5}
	p.Title.TextStyle.Handler, p.Title.TextStyle.Font = h, small
	for _, a := range []*plot.Axis{&p.X, &p.Y} {
		a.Label.TextStyle.Handler, a.Label.TextStyle.Font = h, small
		a.Tick.Label.Handler, a.Tick.Label.Font = h, small
		a.LineStyle.Width, a.Tick.LineStyle.Width = 0.5, 0.5
		a.LineStyle.Color, a.Tick.LineStyle.Color = ink, ink
		a.Tick.Label.Color, a.Label.TextStyle.Color = ink, ink
		a.Tick.Length = 2.5
		a.Padding = 2
	}
	p.Legend.TextStyle.Handler, p.Legend.TextStyle.Font = h, small
	return p
}

// clean makes text fit to be drawn: control characters and what the font lacks become visible substitutes, never silent boxes.
func clean(s string) string {
	f := loadFaces().regular
	ok := utf8.ValidString(s)
	for _, r := range s {
		if !ok || !drawable(f, r) {
			ok = false
			break
		}
	}
	if ok {
		return s
	}
	var b strings.Builder
	for _, r := range s {
		switch {
		case r == '\n' || r == '\t':
			b.WriteByte(' ')
		case r == utf8.RuneError:
			b.WriteString("\uFFFD")
		case !drawable(f, r):
			fmt.Fprintf(&b, "[U+%04X]", r)
		default:
			b.WriteRune(r)
		}
	}
	return b.String()
}

// drawable tells whether the font has a sign for r, and the PDF library can set it.
func drawable(f *sfnt.Font, r rune) bool {
	if r < 0x20 || r == 0x7f || r > 0xffff {
		return false
	}
	if r < 0x7f {
		return true
	}
	var buf sfnt.Buffer
	i, err := f.GlyphIndex(&buf, r)
	return err == nil && i != 0
}
