package render

// A table is set with a header row that is repeated on every page.
type table struct {
	columns []column
	rows    [][]string
	size    float64  // of the type; 0: sizeTable
	links   []string // key of a place each row links to, or ""
	bold    map[int]bool
}

// A column has a width as a share of the table's, and an alignment.
type column struct {
	head  string
	share float64
	right bool
	mono  bool
}

const cellPad = 1.5

// table sets t over the width of the text.
func (d *document) table(t table) {
	if t.size == 0 {
		t.size = sizeTable
	}
	total := 0.0
	for _, c := range t.columns {
		total += c.share
	}
	widths := make([]float64, len(t.columns))
	for i, c := range t.columns {
		widths[i] = textW * c.share / total
	}
	d.room(18)
	d.tableHead(t, widths)
	for i, row := range t.rows {
		cells, lines := d.cells(t, widths, row, t.bold[i])
		h := float64(lines)*t.size*0.44 + 1.7
		if d.y()+h > pageH-bottom {
			d.line(left, d.y(), left+textW, d.y(), rule, 0.2)
			d.newPage()
			d.tableHead(t, widths)
		}
		if i%2 == 1 {
			d.fill(shade)
			d.pdf.Rect(left, d.y(), textW, h, "F")
		}
		if i < len(t.links) && t.links[i] != "" {
			d.pdf.Link(left, d.y(), textW, h, d.link(t.links[i]))
		}
		d.tableRow(t, widths, cells, t.bold[i])
		d.pdf.SetY(d.y() + h)
	}
	d.line(left, d.y(), left+textW, d.y(), ink, 0.25)
	d.down(3.5)
}

func (d *document) tableHead(t table, widths []float64) {
	heads := make([]string, len(t.columns))
	for i, c := range t.columns {
		heads[i] = c.head
	}
	plain := t
	plain.columns = make([]column, len(t.columns))
	for i, c := range t.columns {
		plain.columns[i] = column{right: c.right}
	}
	cells, lines := d.cells(plain, widths, heads, true)
	h := float64(lines)*t.size*0.44 + 1.9
	d.line(left, d.y(), left+textW, d.y(), ink, 0.25)
	d.tableRow(plain, widths, cells, true)
	d.pdf.SetY(d.y() + h)
	d.line(left, d.y(), left+textW, d.y(), ink, 0.25)
}

// cells breaks the texts of a row into lines and says how many the tallest has.
func (d *document) cells(t table, widths []float64, row []string, bold bool) ([][]string, int) {
	cells, most := make([][]string, len(row)), 1
	for i, text := range row {
		d.cellFont(t, i, bold)
		cells[i] = d.split(text, widths[i]-2*cellPad)
		most = max(most, len(cells[i]))
	}
	return cells, most
}

func (d *document) cellFont(t table, i int, bold bool) {
	switch {
	case t.columns[i].mono:
		d.pdf.SetFont(mono, "", t.size-1)
	case bold:
		d.font("B", t.size)
	default:
		d.font("", t.size)
	}
}

func (d *document) tableRow(t table, widths []float64, cells [][]string, bold bool) {
	x, y0 := left, d.y()
	for i, lines := range cells {
		d.cellFont(t, i, bold)
		d.color(ink)
		y := y0 + 0.7
		for _, l := range lines {
			y += t.size * 0.44
			if len(l) > 1 && (l[:min(3, len(l))] == "✗") {
				d.color(accent)
			}
			if t.columns[i].right {
				d.putRight(x+widths[i]-cellPad, y-0.6, l)
			} else {
				d.put(x+cellPad, y-0.6, l)
			}
		}
		x += widths[i]
	}
	d.pdf.SetY(y0)
}

// pairs sets labels and values in two columns.
func (d *document) pairs(rows [][2]string) {
	const labelW = 46.0
	for _, r := range rows {
		if r[1] == "" {
			continue
		}
		d.font("", sizeBody)
		lines := d.split(r[1], textW-labelW)
		h := float64(len(lines))*sizeBody*0.47 + 0.9
		d.room(h)
		y := d.y()
		d.font("", sizeTable)
		d.color(soft)
		d.put(left, y+sizeBody*0.36, r[0])
		d.font("", sizeBody)
		d.color(ink)
		for i, l := range lines {
			d.put(left+labelW, y+sizeBody*0.36+float64(i)*sizeBody*0.47, l)
		}
		d.pdf.SetY(y + h)
	}
	d.down(2.5)
}
