package render

import (
	"image/color"
	"strings"
	"unicode/utf8"
)

// A table is set with hairlines between its rows and a head that is repeated on every page. The words of its head stand in the
// templates under "table." and its name.
type table struct {
	name    string
	heads   []string // instead of those of the templates
	columns string   // one letter a column, see kindOf; spaces do not count
	rows    []row
	size    float64 // of the type; 0: sizeTable
	x, w    float64 // place; 0: the width of the text
	bare    bool    // without columns that are empty in every row
}

// A row is a line of cells, or a heading over several rows.
type row struct {
	cells []cell
	over  string // heading over the rows that follow, in place of cells
	bold  bool
	to    string // key of a place that the row leads to
	keep  bool   // stays on the page of the row before it
	open  bool   // without a line above it
}

// A cell is a text, with a note in small type below it.
type cell struct {
	text string
	note string
	to   string // key of a place that the cell leads to
}

func cells(texts ...string) []cell {
	list := make([]cell, len(texts))
	for i, t := range texts {
		list[i].text = t
	}
	return list
}

const (
	padX   = 1.3 // millimetres beside a cell's text
	padY   = 0.75
	noteOf = 0.86 // size of notes in a cell
)

// A layout is a table with its widths found.
type layout struct {
	table
	kinds  []byte
	widths []float64
	points []float64 // width of what follows the decimal point, for decimal columns
}

// A set line of a cell.
type setLine struct {
	text string
	note bool
}

func (d *document) table(t table) {
	if len(t.rows) == 0 {
		return
	}
	l := d.layOut(t)
	body := make([][][]setLine, len(t.rows))
	heights := make([]float64, len(t.rows))
	for i, r := range l.rows {
		body[i], heights[i] = d.breakRow(l, r)
	}
	d.room(d.headHeight(l) + d.together(l, heights, 0))
	d.tableHead(l)
	over := ""
	for i, r := range l.rows {
		if r.over != "" {
			over = r.over
		}
		if !r.keep && d.y+d.together(l, heights, i) > lowest {
			d.line(l.x, d.y, l.x+l.w, d.y, ink, 0.6, whole)
			d.newPage()
			d.tableHead(l)
			if r.over == "" && over != "" {
				d.overRow(l, d.t("continued", "what", over), false)
			}
		} else if i > 0 && !r.open && r.over == "" && l.rows[i-1].over == "" {
			d.line(l.x, d.y, l.x+l.w, d.y, rule, 0.35, whole)
		}
		if r.over != "" {
			d.overRow(l, r.over, i > 0)
			continue
		}
		d.tableRow(l, r, body[i])
	}
	d.line(l.x, d.y, l.x+l.w, d.y, ink, 0.6, whole)
	d.down(4)
}

// together is the height of row i and of those that must stay with it; no more than fits a page.
func (d *document) together(l *layout, heights []float64, i int) float64 {
	h := heights[i]
	for j := i + 1; j < len(l.rows) && (l.rows[j].keep || l.rows[j-1].over != ""); j++ {
		h += heights[j]
	}
	if i == len(l.rows)-2 && i > 0 && h == heights[i] {
		h += heights[i+1] // the last row does not go to another page alone
	}
	if most := lowest - top - d.headHeight(l); h > most {
		h = min(heights[i], most/3)
	}
	return h
}

func (l *layout) line() float64 { return lead(l.size) * 0.97 }

// breakRow breaks the texts of a row into lines, and says how high it is.
func (d *document) breakRow(l *layout, r row) ([][]setLine, float64) {
	if r.over != "" {
		n := len(d.lines(bold, l.size, l.w-2*padX, r.over))
		return nil, float64(n)*l.line() + 2*padY + 0.8
	}
	set, most := make([][]setLine, len(r.cells)), 1
	for i, c := range r.cells {
		if c.text != "" || c.note == "" {
			for _, text := range d.lines(l.faceOf(i, r.bold), l.sizeOf(i), l.widths[i]-2*padX+0.01, c.text) {
				set[i] = append(set[i], setLine{text: text})
			}
		}
		if c.note != "" {
			for _, text := range d.lines(regular, l.size*noteOf, l.widths[i]-2*padX+0.01, c.note) {
				set[i] = append(set[i], setLine{text, true})
			}
		}
		most = max(most, len(set[i]))
	}
	return set, float64(most)*l.line() + r.pad()
}

// pad is the room above and below the text of a row; rows that belong together stand closer.
func (r row) pad() float64 {
	if r.open {
		return padY * 1.2
	}
	return 2 * padY
}

func (l *layout) faceOf(i int, strong bool) face {
	switch {
	case l.kinds[i] == 'm':
		return mono
	case strong:
		return bold
	}
	return regular
}

func (l *layout) sizeOf(i int) float64 {
	if l.kinds[i] == 'm' {
		return l.size * 0.84
	}
	return l.size
}

func (d *document) headHeight(l *layout) float64 {
	n := 1
	for i, h := range l.heads {
		n = max(n, len(d.lines(bold, l.size, l.widths[i]-2*padX+0.01, h)))
	}
	return float64(n)*l.line() + 2*padY
}

func (d *document) tableHead(l *layout) {
	h := d.headHeight(l)
	d.line(l.x, d.y, l.x+l.w, d.y, ink, 0.6, whole)
	x := l.x
	for i, text := range l.heads {
		set := d.lines(bold, l.size, l.widths[i]-2*padX+0.01, text)
		y := d.y + h - padY - float64(len(set))*l.line()
		for _, s := range set {
			y += l.line()
			d.font(bold, l.size)
			if l.kinds[i] == 'r' || l.kinds[i] == 'd' {
				d.textRight(x+l.widths[i]-padX, y-l.line()*0.27, s, ink)
			} else {
				d.text(x+padX, y-l.line()*0.27, s, ink)
			}
		}
		x += l.widths[i]
	}
	d.down(h)
	d.line(l.x, d.y, l.x+l.w, d.y, ink, 0.6, whole)
}

func (d *document) overRow(l *layout, text string, lineAbove bool) {
	if lineAbove {
		d.line(l.x, d.y, l.x+l.w, d.y, ink, 0.35, whole)
	}
	set := d.lines(bold, l.size, l.w-2*padX, text)
	d.rect(l.x, d.y, l.w, float64(len(set))*l.line()+2*padY+0.4, shade)
	d.down(padY + 0.2)
	for _, s := range set {
		d.down(l.line())
		d.font(bold, l.size)
		d.text(l.x+padX, d.y-l.line()*0.27, s, ink)
	}
	d.down(padY + 0.2)
}

// tableRow sets a row, over more than one page where it is that long.
func (d *document) tableRow(l *layout, r row, set [][]setLine) {
	most := 1
	for _, c := range set {
		most = max(most, len(c))
	}
	for from := 0; from < most; {
		n := min(most-from, max(1, int((lowest-d.y-r.pad()+0.01)/l.line())))
		if r.to != "" {
			d.leadTo(r.to, l.x, d.y, l.w, float64(n)*l.line()+r.pad())
		}
		x := l.x
		for i := range r.cells {
			d.cell(l, r, i, x, set[i][min(from, len(set[i])):min(from+n, len(set[i]))])
			x += l.widths[i]
		}
		d.down(float64(n)*l.line() + r.pad())
		if from += n; from < most {
			d.newPage()
			d.tableHead(l)
		}
	}
}

func (d *document) cell(l *layout, r row, i int, x float64, set []setLine) {
	y := d.y + r.pad()/2
	c := r.cells[i]
	col := toneOf(c.text, c.to != "" || r.to != "" && i == 0)
	if c.to != "" && len(set) > 0 {
		d.leadTo(c.to, x, d.y, l.widths[i], float64(len(set))*l.line()+2*padY)
	}
	for _, s := range set {
		y += l.line()
		base := y - l.line()*0.27
		if s.note {
			d.font(regular, l.size*noteOf)
			d.text(x+padX, base, s.text, soft)
			continue
		}
		d.font(l.faceOf(i, r.bold || col == accent), l.sizeOf(i))
		switch {
		case l.kinds[i] == 'd' && len(set) == 1:
			head, _ := splitDecimal(s.text)
			d.text(x+l.widths[i]-padX-l.points[i]-d.wide(head), base, s.text, col)
		case l.kinds[i] == 'r' || l.kinds[i] == 'd':
			d.textRight(x+l.widths[i]-padX, base, s.text, col)
		default:
			d.text(x+padX, base, s.text, col)
		}
	}
}

// toneOf is the colour of a cell: what was not met stands out, what leads somewhere is marked.
func toneOf(text string, leads bool) color.RGBA {
	switch {
	case strings.HasPrefix(text, "✗"):
		return accent
	case leads:
		return signal
	}
	return ink
}

// splitDecimal divides a number before its decimal point; what has none, after its last digit.
func splitDecimal(s string) (head, tail string) {
	for i, c := range s {
		if c == '.' {
			return s[:i], s[i:]
		}
		if !(c >= '0' && c <= '9' || c == '−' || c == '+' || c == '-') {
			if i == 0 {
				_, n := utf8.DecodeRuneInString(s)
				if n == len(s) {
					return s, "" // a dash
				}
				continue
			}
			return s[:i], s[i:]
		}
	}
	return s, ""
}
