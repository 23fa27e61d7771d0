package render

import (
	"fmt"
)

// A section is a chapter (level 0) or a part of one (level 1), with its place in the contents and the outline. All sections are known
// before the first page is set, so that the text can name them by number and the contents know their own length.
type section struct {
	key   string
	title string
	level int
	need  float64 // millimetres that the heading and what must stand with it take
	fresh bool    // begins a page
	quiet bool    // draws its own heading
	draw  func()
}

// number gives each section its number and the document its list.
func (d *document) number(list []section) {
	d.sections = list
	chapter, part := 0, 0
	for _, s := range list {
		if s.level == 0 {
			chapter, part = chapter+1, 0
			d.numbers[s.key] = fmt.Sprint(chapter)
			continue
		}
		part++
		d.numbers[s.key] = fmt.Sprintf("%d.%d", chapter, part)
	}
}

// play sets all sections.
func (d *document) play() {
	for _, s := range d.sections {
		switch {
		case s.level == 0:
			d.chapter = s.title
			d.newPage()
		case s.fresh:
			d.newPage()
		default:
			d.room(max(s.need, 26))
		}
		d.anchor(s.key)
		d.mark(s.level, d.numbers[s.key]+"  "+s.title)
		if !s.quiet {
			d.heading(s.level, d.numbers[s.key], s.title)
		}
		s.draw()
	}
}

// heading sets a chapter's or a part's title with its number.
func (d *document) heading(level int, number, title string) {
	size, before := sizeH1*1.0, 0.0
	if level > 0 {
		size, before = sizeH2, 3.5
		if d.y < top+1 {
			before = 0
		}
	}
	d.font(bold, size)
	indent := 0.0
	d.down(before)
	if number != "" {
		indent = max(d.wide(number)+4, 11)
	}
	for i, l := range d.lines(bold, size, textW-indent, title) {
		d.down(size * mmPerPoint * 1.25)
		d.font(bold, size)
		if i == 0 && number != "" {
			d.text(left, d.y, number, soft)
		}
		d.text(left+indent, d.y, l, ink)
	}
	d.down(1.6)
	if level == 0 {
		d.line(left, d.y+0.8, left+28, d.y+0.8, accent, 2, whole)
		d.down(5.5)
	}
}

// ref names a section by its number.
func (d *document) ref(key string) string {
	n, ok := d.numbers[key]
	if !ok {
		panic(fmt.Sprintf("render: internal error: no section %q", key))
	}
	return n
}

// see leads to a section, in words.
func (d *document) see(key string) string { return d.t("see", "section", d.ref(key)) }

// The contents: lines of a chapter take more room than those of its parts.
const (
	contentsChapter = 6.4
	contentsPart    = 4.15
	contentsTop     = 14.0
)

func (s section) contentsHeight() float64 {
	if s.level == 0 {
		return contentsChapter
	}
	return contentsPart
}

// contentsPages are the pages that the contents take.
func (d *document) contentsPages() int {
	pages, used := 1, 0.0
	for _, s := range d.sections {
		if used+s.contentsHeight() > lowest-top-contentsTop {
			pages, used = pages+1, 0
		}
		used += s.contentsHeight()
	}
	return pages
}

// contents fills the pages that were left for it, once it is known where everything is.
func (d *document) contents(page int) {
	d.toPage(page)
	y := d.contentsHead()
	for _, s := range d.sections {
		h := s.contentsHeight()
		if y+h > lowest {
			page++
			d.toPage(page)
			y = d.contentsHead()
		}
		y += h
		indent, numberW := 10.0, 0.0
		d.font(bold, sizeBody)
		if s.level > 0 {
			indent, numberW = 20, 10
			d.font(regular, 8.5)
		}
		d.text(left+numberW, y, d.numbers[s.key], soft)
		size := d.size
		text := d.shorten(s.title, textW-indent-16)
		d.text(left+indent, y, text, ink)
		end := left + indent + d.wide(text) + 2
		d.font(regular, size)
		d.textRight(pageW-right, y, fmt.Sprint(d.anchors[s.key].page), ink)
		d.line(end, y-0.3, pageW-right-9, y-0.3, rule, 0.7, dots)
		d.areas = append(d.areas, area{page, left, y - h*0.75, textW, h, s.key})
	}
}

func (d *document) contentsHead() float64 {
	d.font(bold, sizeH1)
	d.text(left, top+7, d.t("contents"), ink)
	d.line(left, top+9.4, left+28, top+9.4, accent, 2, whole)
	return top + contentsTop
}
