package render

import (
	"image"
	"image/color"
	"math"
	"strconv"

	"github.com/jung-kurt/gofpdf"
	"gonum.org/v1/plot/font"
	"gonum.org/v1/plot/vg"
)

// A canvas draws charts on a page of the PDF: gonum/plot writes to it, and it writes PDF operators. Both have their origin at the
// bottom left and count in points, so coordinates go through one matrix of our own and nothing else.
type canvas struct {
	pdf    *gofpdf.Fpdf
	height float64 // of the page, points
	state  canvasState
	stack  []canvasState
	out    []byte
}

type canvasState struct {
	m     [6]float64 // x' = m0·x + m2·y + m4, y' = m1·x + m3·y + m5
	width float64
	dash  []vg.Length
	phase vg.Length
	color color.Color
}

const pointsPerMM = 72 / 25.4

// newCanvas is a canvas whose origin lies at the bottom left of a rectangle, given in millimetres from the top of the page.
func newCanvas(pdf *gofpdf.Fpdf, x, y, h float64) *canvas {
	_, pageH := pdf.GetPageSize()
	c := &canvas{pdf: pdf, height: pageH * pointsPerMM}
	c.state = canvasState{m: [6]float64{1, 0, 0, 1, x * pointsPerMM, (pageH - y - h) * pointsPerMM}, width: 1, color: color.Black}
	return c
}

func (c *canvas) SetLineWidth(w vg.Length) { c.state.width = float64(w) }
func (c *canvas) SetLineDash(dash []vg.Length, phase vg.Length) {
	c.state.dash, c.state.phase = dash, phase
}
func (c *canvas) SetColor(col color.Color) {
	if col == nil {
		col = color.Black
	}
	c.state.color = col
}

func (c *canvas) Rotate(rad float64) {
	s, k := math.Sincos(rad)
	c.concat([6]float64{k, s, -s, k, 0, 0})
}
func (c *canvas) Translate(p vg.Point) { c.concat([6]float64{1, 0, 0, 1, float64(p.X), float64(p.Y)}) }
func (c *canvas) Scale(x, y float64)   { c.concat([6]float64{x, 0, 0, y, 0, 0}) }

func (c *canvas) concat(n [6]float64) {
	m := c.state.m
	c.state.m = [6]float64{
		m[0]*n[0] + m[2]*n[1], m[1]*n[0] + m[3]*n[1],
		m[0]*n[2] + m[2]*n[3], m[1]*n[2] + m[3]*n[3],
		m[0]*n[4] + m[2]*n[5] + m[4], m[1]*n[4] + m[3]*n[5] + m[5],
	}
}

func (c *canvas) Push() { c.stack = append(c.stack, c.state) }
func (c *canvas) Pop() {
	c.state = c.stack[len(c.stack)-1]
	c.stack = c.stack[:len(c.stack)-1]
}

// at transforms a point.
func (c *canvas) at(p vg.Point) (x, y float64) {
	m := &c.state.m
	return m[0]*float64(p.X) + m[2]*float64(p.Y) + m[4], m[1]*float64(p.X) + m[3]*float64(p.Y) + m[5]
}

func (c *canvas) num(v float64) {
	c.out = strconv.AppendFloat(c.out, math.Round(v*100)/100, 'f', -1, 64)
	c.out = append(c.out, ' ')
}

func (c *canvas) op(s string) { c.out = append(c.out, s...) }

func (c *canvas) flush() {
	c.pdf.RawWriteStr(string(c.out))
	c.out = c.out[:0]
}

func (c *canvas) rgb(op string) {
	r, g, b, _ := c.state.color.RGBA()
	for _, v := range []uint32{r, g, b} {
		c.num(float64(v) / 0xffff)
	}
	c.op(op)
}

func (c *canvas) Stroke(p vg.Path) {
	if c.state.width <= 0 || len(p) == 0 {
		return
	}
	c.op("q ")
	c.rgb("RG ")
	c.num(c.state.width)
	c.op("w 1 J 1 j ")
	if len(c.state.dash) > 0 {
		c.op("[")
		for _, d := range c.state.dash {
			c.num(float64(d))
		}
		c.op("] ")
		c.num(float64(c.state.phase))
		c.op("d ")
	}
	c.path(p)
	c.op("S Q")
	c.flush()
}

func (c *canvas) Fill(p vg.Path) {
	if len(p) == 0 {
		return
	}
	c.op("q ")
	c.rgb("rg ")
	c.path(p)
	c.op("f Q")
	c.flush()
}

func (c *canvas) path(p vg.Path) {
	var last vg.Point
	for _, comp := range p {
		switch comp.Type {
		case vg.MoveComp:
			c.point(comp.Pos, "m ")
		case vg.LineComp:
			c.point(comp.Pos, "l ")
		case vg.CurveComp:
			c.curve(last, comp)
		case vg.ArcComp:
			c.arc(comp)
		case vg.CloseComp:
			c.op("h ")
		}
		last = comp.Pos
	}
}

func (c *canvas) point(p vg.Point, op string) {
	x, y := c.at(p)
	c.num(x)
	c.num(y)
	c.op(op)
}

// curve writes a cubic, or a quadratic as the cubic that it is.
func (c *canvas) curve(from vg.Point, comp vg.PathComp) {
	a, b := comp.Control[0], comp.Control[len(comp.Control)-1]
	if len(comp.Control) == 1 {
		third := func(p, q vg.Point) vg.Point {
			return vg.Point{X: p.X + (q.X-p.X)*2/3, Y: p.Y + (q.Y-p.Y)*2/3}
		}
		a, b = third(from, comp.Control[0]), third(comp.Pos, comp.Control[0])
	}
	c.point(a, "")
	c.point(b, "")
	c.point(comp.Pos, "c ")
}

// arc writes an arc as a polygon fine enough for the small marks that charts have.
func (c *canvas) arc(comp vg.PathComp) {
	const steps = 16
	for i := range steps + 1 {
		s, k := math.Sincos(comp.Start + comp.Angle*float64(i)/steps)
		op := "l "
		if i == 0 {
			op = "m "
		}
		c.point(vg.Point{X: comp.Pos.X + comp.Radius*vg.Length(k), Y: comp.Pos.Y + comp.Radius*vg.Length(s)}, op)
	}
}

// FillString uses the PDF library's own text, so that signs get into the embedded font and stay text. Text that is turned is set
// through a transformation.
func (c *canvas) FillString(f font.Face, p vg.Point, s string) {
	x, y := c.at(p)
	angle := math.Atan2(c.state.m[1], c.state.m[0]) * 180 / math.Pi
	mmX, mmY := x/pointsPerMM, (c.height-y)/pointsPerMM
	r, g, b, _ := c.state.color.RGBA()
	c.pdf.SetFont(family, "", f.Font.Size.Points())
	c.pdf.SetTextColor(int(r>>8), int(g>>8), int(b>>8))
	if math.Abs(angle) < 0.01 {
		c.pdf.Text(mmX, mmY, clean(s))
		return
	}
	c.pdf.TransformBegin()
	c.pdf.TransformRotate(angle, mmX, mmY)
	c.pdf.Text(mmX, mmY, clean(s))
	c.pdf.TransformEnd()
}

// DrawImage is part of the interface; charts here are lines and text.
func (c *canvas) DrawImage(vg.Rectangle, image.Image) {
	panic("render: internal error: no images in charts")
}
