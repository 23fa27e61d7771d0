package render

import (
	"image/color"
	"strings"
)

// paragraph sets text over the width of the page.
func (d *document) paragraph(text string) {
	for _, p := range strings.Split(text, "\n") {
		d.block(p, left, textW, regular, sizeBody, ink)
		d.down(1.8)
	}
}

// note is what explains a table or chart.
func (d *document) note(text string) {
	d.block(text, left, textW, regular, sizeSmall, soft)
	d.down(2.2)
}

// block sets text in a column, over as many pages as it needs.
func (d *document) block(text string, x, w float64, f face, size float64, c color.RGBA) {
	step := lead(size)
	for _, l := range d.lines(f, size, w, text) {
		d.room(step)
		d.down(step)
		d.font(f, size)
		d.text(x, d.y-step*0.26, l, c)
	}
}

// height is what block would take.
func (d *document) height(text string, w float64, f face, size float64) float64 {
	return float64(len(d.lines(f, size, w, text))) * lead(size)
}

// linked is a note that leads to a section.
func (d *document) linked(text, key string) {
	h := d.height(text, textW, regular, sizeSmall)
	d.room(h)
	d.leadTo(key, left, d.y, textW, h)
	d.block(text, left, textW, regular, sizeSmall, signal)
	d.down(2.2)
}

// bullets sets a list.
func (d *document) bullets(items []string) {
	for _, item := range items {
		d.room(lead(sizeBody))
		d.font(bold, sizeBody)
		d.text(left+0.6, d.y+lead(sizeBody)*0.74, "•", accent)
		d.block(item, left+5, textW-5, regular, sizeBody, ink)
		d.down(1.1)
	}
	d.down(1.2)
}

const labelW = 46.0

// A pair is a label and what is said of it.
type pair struct{ label, value string }

// pairs sets labels and values in two columns; pairs without a value are left out.
func (d *document) pairs(list []pair) {
	step := lead(sizeBody)
	for _, p := range list {
		if p.value == "" {
			continue
		}
		names := d.lines(regular, sizeTable, labelW-3, p.label)
		values := d.lines(regular, sizeBody, textW-labelW, p.value)
		d.room(min(float64(max(len(names), len(values))), 3) * step)
		for i := range max(len(names), len(values)) {
			d.room(step)
			d.down(step)
			if i < len(names) {
				d.font(regular, sizeTable)
				d.text(left, d.y-step*0.26, names[i], soft)
			}
			if i < len(values) {
				d.font(regular, sizeBody)
				d.text(left+labelW, d.y-step*0.26, values[i], ink)
			}
		}
		d.down(0.7)
	}
	d.down(2)
}

// commands sets what is to be typed into a terminal; a line that is too long goes on after a backslash.
func (d *document) commands(list []string) {
	const size, inside = sizeSmall, textW - 8
	var set []string
	for _, l := range list {
		set = append(set, d.folded(l, inside, size)...)
	}
	step := lead(size) * 1.06
	for len(set) > 0 {
		d.room(step*2 + 4)
		n := min(len(set), max(1, int((lowest-d.y-4)/step)))
		d.rect(left, d.y, textW, float64(n)*step+3.4, shade)
		y := d.y + 1.7
		for _, l := range set[:n] {
			y += step
			d.font(mono, size)
			d.text(left+4, y-step*0.28, l, ink)
		}
		d.y = y + 3.4
		set = set[n:]
	}
	d.down(1)
}

func (d *document) folded(text string, w, size float64) []string {
	words := strings.Fields(text)
	var list []string
	line := ""
	for _, word := range words {
		next := word
		if line != "" {
			next = line + " " + word
		}
		if line != "" && d.ruler.width(mono, size, next+" \\") > w {
			list = append(list, line+" \\")
			next = "    " + word
		}
		line = next
	}
	return append(list, line)
}

// shorten cuts text that is too wide for its place and says so with dots.
func (d *document) shorten(text string, w float64) string {
	text = d.clean(d.face, text)
	if d.wide(text) <= w {
		return text
	}
	for len(text) > 0 && d.wide(text+"…") > w {
		r := []rune(text)
		text = string(r[:len(r)-1])
	}
	return strings.TrimRight(text, " ") + "…"
}

// fit sets one line in the present font, shortened to its place.
func (d *document) fit(x, y, w float64, text string, c color.RGBA) {
	d.text(x, y, d.shorten(text, w), c)
}

// end marks where the document is over.
func (d *document) end(text string) {
	d.room(8)
	d.down(6)
	d.font(bold, sizeBody)
	d.text(left, d.y, "■  "+text, ink)
}
