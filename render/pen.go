package render

import (
	"image/color"
	"math"
	"strconv"

	"github.com/jung-kurt/gofpdf"
)

// A pen draws on the current page, in millimetres from its top left. It writes PDF operators itself, and only those that change
// something: of the library's own text operator it needs no more than that it takes up each sign into the embedded font.
type pen struct {
	*ruler
	pdf *gofpdf.Fpdf
	ops []byte // not handed to the page yet

	face face
	size float64

	// What the page has at this point; unset after a change of page.
	setFace       face
	setSize       float64
	fill, stroke  color.RGBA
	filled, lined bool
	width         float64
	dashed        dash
	registered    [faceCount][]uint64 // signs that the embedded font holds, a bit each
}

// A dash is a pattern of strokes and gaps, points; the zero value is a whole line.
type dash struct{ on, off float64 }

var (
	whole  = dash{}
	dashes = dash{4, 2}
	dots   = dash{1.2, 1.4}
)

func newPen(pdf *gofpdf.Fpdf) *pen {
	p := &pen{ruler: newRuler(), pdf: pdf, setFace: -1}
	for f := range p.registered {
		p.registered[f] = make([]uint64, 0x10000/64)
	}
	return p
}

// flush hands what was drawn to the page.
func (p *pen) flush() {
	if len(p.ops) > 0 {
		p.pdf.RawWriteStr(string(p.ops[:len(p.ops)-1]))
		p.ops = p.ops[:0]
	}
}

// forget makes no assumption about what the page has.
func (p *pen) forget() {
	p.setFace, p.setSize = -1, 0
	p.filled, p.lined = false, false
	p.width, p.dashed = 0, whole
}

func (p *pen) addPage() {
	p.flush()
	p.pdf.AddPage()
	p.forget()
	p.op("0 J 1 j\n")
}

func (p *pen) toPage(n int) {
	p.flush()
	p.pdf.SetPage(n)
	p.forget()
	p.op("[] 0 d 0 J 1 j\n")
}

func (p *pen) op(s string) { p.ops = append(p.ops, s...) }

// num writes a number with two decimals, which is a hundredth of a point.
func (p *pen) num(v float64) { p.ops = append(appendFixed(p.ops, v), ' ') }

func appendFixed(b []byte, v float64) []byte {
	if math.IsNaN(v) || math.Abs(v) > 1e9 {
		panic("render: internal error: coordinate " + strconv.FormatFloat(v, 'g', -1, 64))
	}
	n := int64(math.Round(v * 100))
	if n < 0 {
		b = append(b, '-')
		n = -n
	}
	b = strconv.AppendInt(b, n/100, 10)
	if rest := n % 100; rest > 0 {
		b = append(b, '.', byte('0'+rest/10))
		if rest%10 > 0 {
			b = append(b, byte('0'+rest%10))
		}
	}
	return b
}

func (p *pen) rgb(c color.RGBA, op string) {
	p.num(float64(c.R) / 255)
	p.num(float64(c.G) / 255)
	p.num(float64(c.B) / 255)
	p.op(op)
}

func (p *pen) setFill(c color.RGBA) {
	if !p.filled || p.fill != c {
		p.fill, p.filled = c, true
		p.rgb(c, "rg\n")
	}
}

// setLine sets colour, width (points) and pattern of what is stroked.
func (p *pen) setLine(c color.RGBA, width float64, d dash) {
	if !p.lined || p.stroke != c {
		p.stroke, p.lined = c, true
		p.rgb(c, "RG\n")
	}
	if p.width != width {
		p.width = width
		p.num(width)
		p.op("w\n")
	}
	if p.dashed != d {
		p.dashed = d
		p.op("[")
		if d != whole {
			p.num(d.on)
			p.num(d.off)
		}
		p.op("] 0 d\n")
	}
}

func (p *pen) point(x, y float64, op string) {
	p.num(x * pointsPerMM)
	p.num((pageH - y) * pointsPerMM)
	p.op(op)
}

func (p *pen) line(x1, y1, x2, y2 float64, c color.RGBA, width float64, d dash) {
	p.setLine(c, width, d)
	p.point(x1, y1, "m ")
	p.point(x2, y2, "l S\n")
}

func (p *pen) rect(x, y, w, h float64, c color.RGBA) {
	p.setFill(c)
	p.point(x, y+h, "")
	p.num(w * pointsPerMM)
	p.num(h * pointsPerMM)
	p.op("re f\n")
}

func (p *pen) frame(x, y, w, h float64, c color.RGBA, width float64) {
	p.setLine(c, width, whole)
	p.point(x, y+h, "")
	p.num(w * pointsPerMM)
	p.num(h * pointsPerMM)
	p.op("re S\n")
}

func (p *pen) font(f face, size float64) { p.face, p.size = f, size }

// wide is the width of text in the pen's font.
func (p *pen) wide(s string) float64 { return p.ruler.width(p.face, p.size, p.clean(p.face, s)) }

// text sets a line; x, y is the left end of its baseline.
func (p *pen) text(x, y float64, s string, c color.RGBA) {
	s = p.clean(p.face, s)
	if s == "" {
		return
	}
	p.setFill(c)
	p.useFont()
	if !p.register(s) {
		p.flush()
		p.pdf.Text(x, y, s)
		return
	}
	p.op("BT ")
	p.point(x, y, "Td (")
	p.ops = appendUTF16(p.ops, s)
	p.op(") Tj ET\n")
}

func (p *pen) textRight(x, y float64, s string, c color.RGBA)  { p.text(x-p.wide(s), y, s, c) }
func (p *pen) textCentre(x, y float64, s string, c color.RGBA) { p.text(x-p.wide(s)/2, y, s, c) }

func (p *pen) useFont() {
	if p.setFace != p.face || p.setSize != p.size {
		p.flush()
		p.pdf.SetFont(familyOf[p.face], styleOf[p.face], p.size)
		p.setFace, p.setSize = p.face, p.size
	}
}

// register tells whether the embedded font has all signs of s, and notes that it will have.
func (p *pen) register(s string) bool {
	set, had := p.registered[p.face], true
	for _, c := range s {
		word, bit := c/64, uint64(1)<<(c%64)
		if set[word]&bit == 0 {
			set[word] |= bit
			had = false
		}
	}
	return had
}

// appendUTF16 writes a string as the embedded fonts read it: two bytes a sign, with those escaped that end or bend a PDF string.
func appendUTF16(b []byte, s string) []byte {
	for _, c := range s {
		for _, o := range [2]byte{byte(c >> 8), byte(c)} {
			switch o {
			case '\\', '(', ')':
				b = append(b, '\\', o)
			case '\r':
				b = append(b, '\\', 'r')
			default:
				b = append(b, o)
			}
		}
	}
	return b
}
