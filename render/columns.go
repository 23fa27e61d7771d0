package render

import (
	"fmt"
	"strings"
)

// Kinds of a column, the letters of table.columns:
//
//	l  text, at its natural width
//	w  text that takes the room that is left
//	r  at the right
//	d  numbers, aligned at their decimal points
//	m  hashes, in the face of equal widths
func kindOf(columns string) []byte {
	kinds := []byte(strings.ReplaceAll(columns, " ", ""))
	for _, k := range kinds {
		if !strings.ContainsRune("lwrdm", rune(k)) {
			panic(fmt.Sprintf("render: internal error: a column of kind %q", k))
		}
	}
	return kinds
}

// layOut finds the widths of a table's columns from what stands in them.
func (d *document) layOut(t table) *layout {
	if t.size == 0 {
		t.size = sizeTable
	}
	if t.w == 0 {
		t.x, t.w = left, textW
	}
	if t.heads == nil {
		t.heads = d.words.list("table." + t.name)
	}
	l := &layout{table: t, kinds: kindOf(t.columns)}
	if len(l.heads) != len(l.kinds) {
		panic(fmt.Sprintf("render: internal error: table %q has %d columns and %d heads", t.name, len(l.kinds), len(l.heads)))
	}
	for _, r := range t.rows {
		if r.over == "" && len(r.cells) != len(l.kinds) {
			panic(fmt.Sprintf("render: internal error: table %q has %d columns and a row of %d", t.name, len(l.kinds), len(r.cells)))
		}
	}
	if t.bare {
		l.dropEmpty()
	}
	needs := make([]need, len(l.kinds))
	l.points = make([]float64, len(l.kinds))
	for i := range l.kinds {
		needs[i] = d.needOf(l, i)
	}
	l.widths = share(l.kinds, needs, t.w)
	return l
}

// dropEmpty takes out the columns that say nothing.
func (l *layout) dropEmpty() {
	var keep []int
	for i := range l.kinds {
		for _, r := range l.rows {
			if r.over == "" && (r.cells[i].text != "" || r.cells[i].note != "") {
				keep = append(keep, i)
				break
			}
		}
	}
	var kinds []byte
	var heads []string
	for _, i := range keep {
		kinds, heads = append(kinds, l.kinds[i]), append(heads, l.heads[i])
	}
	rows := make([]row, len(l.rows))
	for k, r := range l.rows {
		rows[k] = r
		if r.over != "" {
			continue
		}
		rows[k].cells = nil
		for _, i := range keep {
			rows[k].cells = append(rows[k].cells, r.cells[i])
		}
	}
	l.kinds, l.heads, l.rows = kinds, heads, rows
}

// A need is how wide a column must be for its longest piece, for its cells on one line, and for its head on one line.
type need struct{ least, cells, head float64 }

// needOf measures column i.
func (d *document) needOf(l *layout, i int) need {
	n := need{least: d.widest(bold, l.size, l.heads[i]), head: d.ruler.width(bold, l.size, d.clean(bold, l.heads[i]))}
	heads, tails := 0.0, 0.0
	for _, r := range l.rows {
		if r.over != "" {
			continue
		}
		c, f, size := r.cells[i], l.faceOf(i, r.bold), l.sizeOf(i)
		if strings.HasPrefix(c.text, "✗") {
			f = bold
		}
		if l.kinds[i] == 'd' {
			head, tail := splitDecimal(d.clean(f, c.text))
			heads, tails = max(heads, d.ruler.width(f, size, head)), max(tails, d.ruler.width(f, size, tail))
			continue
		}
		for _, part := range strings.Split(c.text, "\n") {
			n.cells = max(n.cells, d.ruler.width(f, size, d.clean(f, part)))
		}
		n.least = max(n.least, d.widest(f, size, c.text))
		if c.note != "" {
			small := l.size * noteOf
			n.least = max(n.least, d.widest(regular, small, c.note))
			n.cells = max(n.cells, min(d.ruler.width(regular, small, d.clean(regular, c.note)), 40))
		}
	}
	l.points[i] = tails
	n.least = max(n.least, heads+tails) + 2*padX
	n.cells = max(n.least, max(n.cells, heads+tails)+2*padX)
	n.head = max(n.cells, n.head+2*padX)
	return n
}

// share divides the width of a table among its columns. Cells come first: all columns but the wide ones get what keeps their cells on
// one line, the wide ones get what is left. Room that nobody needs goes to heads, and then to all.
func share(kinds []byte, needs []need, width float64) []float64 {
	w := make([]float64, len(kinds))
	var least, cellsFixed, leastFixed, leastWide float64
	for i, n := range needs {
		w[i] = n.least
		least += n.least
		if kinds[i] == 'w' {
			leastWide += n.least
		} else {
			leastFixed += n.least
			cellsFixed += n.cells
		}
	}
	if least >= width { // too narrow for the longest words: all give way
		for i := range w {
			w[i] *= width / least
		}
		return w
	}
	part := 1.0
	if cellsFixed+leastWide > width {
		part = (width - least) / (cellsFixed - leastFixed)
	}
	room := width
	for i, n := range needs {
		if kinds[i] != 'w' {
			w[i] += (n.cells - n.least) * part
			room -= w[i]
		}
	}
	pour(kinds, w, needs, room)
	spend(kinds, w, needs, width)
	return w
}

// pour divides a width among the wide columns: those that need less than an even part get what they need, the others share the rest.
func pour(kinds []byte, w []float64, needs []need, room float64) {
	open := 0
	for i := range w {
		if kinds[i] == 'w' {
			open++
		}
	}
	held := make([]bool, len(w))
	hold := func(i int, v float64) {
		w[i], held[i] = v, true
		room -= v
		open--
	}
	for again := true; again && open > 0; {
		again = false
		even := room / float64(open)
		for i, n := range needs {
			if kinds[i] == 'w' && !held[i] && n.cells <= even {
				hold(i, n.cells)
				again = true
			}
		}
		for i, n := range needs {
			if kinds[i] == 'w' && !held[i] && !again && n.least > even {
				hold(i, n.least)
				again = true
			}
		}
	}
	for i := range w {
		if kinds[i] == 'w' && !held[i] {
			w[i] = room / float64(open)
		}
	}
}

// spend gives away what is left of a table's width.
func spend(kinds []byte, w []float64, needs []need, width float64) {
	spare, want, wide := width, 0.0, 0.0
	for i, n := range needs {
		spare -= w[i]
		want += max(0, n.head-w[i])
		if kinds[i] == 'w' {
			wide += w[i]
		}
	}
	if spare <= 0 {
		return
	}
	if want > 0 {
		part := min(1, spare/want)
		for i, n := range needs {
			more := max(0, n.head-w[i]) * part
			w[i] += more
			spare -= more
		}
	}
	total := 0.0
	for i := range w {
		if wide == 0 || kinds[i] == 'w' {
			total += w[i]
		}
	}
	for i := range w {
		if wide == 0 || kinds[i] == 'w' {
			w[i] += spare * w[i] / total
		}
	}
}
