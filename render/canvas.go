package render

import (
	"image"
	"image/color"
	"math"

	"gonum.org/v1/plot/font"
	"gonum.org/v1/plot/vg"
)

// A canvas lets gonum/plot draw with a pen. plot and PDF both have their origin at the bottom left and count in points, so
// coordinates go through one matrix of our own and nothing else.
type canvas struct {
	pen   *pen
	state canvasState
	stack []canvasState
}

type canvasState struct {
	m     [6]float64 // x' = m0·x + m2·y + m4, y' = m1·x + m3·y + m5
	width float64
	dash  dash
	color color.RGBA
}

// newCanvas is a canvas whose origin lies at the bottom left of a rectangle, given in millimetres from the top left of the page.
func newCanvas(p *pen, x, y, h float64) *canvas {
	return &canvas{pen: p, state: canvasState{m: [6]float64{1, 0, 0, 1, x * pointsPerMM, (pageH - y - h) * pointsPerMM}, width: 1, color: ink}}
}

func (c *canvas) SetLineWidth(w vg.Length) { c.state.width = float64(w) }

func (c *canvas) SetLineDash(d []vg.Length, _ vg.Length) {
	c.state.dash = whole
	if len(d) > 0 {
		c.state.dash = dash{float64(d[0]), float64(d[len(d)-1])}
	}
}

func (c *canvas) SetColor(col color.Color) {
	c.state.color = ink
	if col != nil {
		c.state.color = color.RGBAModel.Convert(col).(color.RGBA)
	}
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

func (c *canvas) Stroke(p vg.Path) {
	if c.state.width <= 0 || len(p) == 0 {
		return
	}
	c.pen.setLine(c.state.color, c.state.width, c.state.dash)
	c.path(p)
	c.pen.op("S\n")
}

func (c *canvas) Fill(p vg.Path) {
	if len(p) == 0 {
		return
	}
	c.pen.setFill(c.state.color)
	c.path(p)
	c.pen.op("f\n")
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
			c.pen.op("h ")
		}
		last = comp.Pos
	}
}

func (c *canvas) point(p vg.Point, op string) {
	x, y := c.at(p)
	c.pen.num(x)
	c.pen.num(y)
	c.pen.op(op)
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

// FillString sets text level, whatever the canvas was turned by: no chart here turns it, and plot's axes with turned labels are not used.
func (c *canvas) FillString(f font.Face, p vg.Point, s string) {
	if math.Abs(c.state.m[1]) > 1e-9 {
		panic("render: internal error: turned text in a chart: " + s)
	}
	x, y := c.at(p)
	c.pen.font(regular, f.Font.Size.Points())
	c.pen.text(x*mmPerPoint, pageH-y*mmPerPoint, s, c.state.color)
}

// DrawImage is part of the interface; charts here are lines and text.
func (c *canvas) DrawImage(vg.Rectangle, image.Image) {
	panic("render: internal error: no images in charts")
}
