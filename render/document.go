package render

import (
	"fmt"
	"image/color"
	"io"
	"strings"
	"time"

	"codeberg.org/go-fonts/dejavu/dejavusanscondensed"
	"codeberg.org/go-fonts/dejavu/dejavusanscondensedbold"
	"codeberg.org/go-fonts/dejavu/dejavusansmono"
	"github.com/jung-kurt/gofpdf"

	"assaywrit/evidence"
)

// A document is one PDF in the making.
type document struct {
	pdf     *gofpdf.Fpdf
	in      Input
	words   words
	title   string // in the footer
	section string // shown in the header
	toc     []tocEntry
	links   map[string]int
}

type tocEntry struct {
	level int
	text  string
	page  int
	link  int
}

// newDocument begins a PDF whose bytes depend on its content alone: dates come from the record.
func newDocument(in Input, w words, title string) *document {
	pdf := gofpdf.New("P", "mm", "A4", "")
	pdf.SetCatalogSort(true)
	at := latest(in.Record)
	pdf.SetCreationDate(at)
	pdf.SetModificationDate(at)
	pdf.SetMargins(left, top, right)
	pdf.SetAutoPageBreak(false, bottom)
	pdf.AddUTF8FontFromBytes(family, "", dejavusanscondensed.TTF)
	pdf.AddUTF8FontFromBytes(family, "B", dejavusanscondensedbold.TTF)
	pdf.AddUTF8FontFromBytes(mono, "", dejavusansmono.TTF)
	pdf.SetFont(family, "", sizeBody)
	c := in.Record.Case
	pdf.SetTitle(clean(title+" "+c.Number), true)
	pdf.SetSubject(clean("sample "+c.Sample.Code), true)
	pdf.SetCreator(clean(in.Record.Engine.Name+" "+in.Record.Engine.Version), true)
	return &document{pdf: pdf, in: in, words: w, title: title, links: map[string]int{}}
}

// latest is the last time that the record tells of, in UTC: PDF dates are written without their zone.
func latest(rec *evidence.Record) time.Time {
	last := time.Date(2000, 1, 1, 0, 0, 0, 0, time.UTC)
	see := func(text string) {
		if t, err := time.Parse(time.RFC3339, text); err == nil && t.After(last) {
			last = t.UTC()
		}
	}
	for _, e := range rec.Case.Custody {
		see(e.At)
	}
	for _, r := range rec.Sequence {
		see(r.AcquiredAt)
	}
	for _, m := range rec.Case.Manual {
		see(m.At)
	}
	return last
}

// finish puts header and footer on every page and writes the file.
func (d *document) finish(w io.Writer) (int, error) {
	n := d.pdf.PageCount()
	for p := 1; p <= n; p++ {
		d.pdf.SetPage(p)
		d.furniture(p, n)
	}
	return n, d.pdf.Output(w)
}

// furniture is what every page carries: case, sample, identity of the evidence, page n of N, and the mark of a demonstration.
func (d *document) furniture(p, n int) {
	c := d.in.Record.Case
	d.font("", 6) // another size first: the library must write the font anew on a page that it comes back to
	d.font("", sizeSmall)
	d.color(soft)
	if c.Demonstration {
		d.demonstration()
	}
	d.put(left, 18.5, fmt.Sprintf("case %s  ·  sample %s", c.Number, c.Sample.Code))
	d.putRight(pageW-right, 18.5, "evidence "+d.in.EvidenceSHA256[:min(16, len(d.in.EvidenceSHA256))])
	d.line(left, 20, pageW-right, 20, rule, 0.2)
	d.line(left, pageH-14, pageW-right, pageH-14, rule, 0.2)
	d.put(left, pageH-10, d.title+"  ·  "+c.Laboratory.Code)
	d.putRight(pageW-right, pageH-10, fmt.Sprintf("page %d of %d", p, n))
}

// demonstration is the band of an example.
func (d *document) demonstration() {
	d.fill(accent)
	d.pdf.Rect(left, 7, textW, 6.2, "F")
	d.font("B", 6)
	d.font("B", 9.5)
	d.color(color.RGBA{255, 255, 255, 255})
	text := d.words.get("demonstration")
	d.put(pageW/2-d.width(text)/2, 11.4, text)
	d.font("", 6)
	d.font("", sizeSmall)
	d.color(soft)
}

// Drawing helpers, in millimetres from the top left.

func (d *document) font(style string, size float64) { d.pdf.SetFont(family, style, size) }

func (d *document) color(c color.RGBA) { d.pdf.SetTextColor(int(c.R), int(c.G), int(c.B)) }

func (d *document) fill(c color.RGBA) { d.pdf.SetFillColor(int(c.R), int(c.G), int(c.B)) }

func (d *document) line(x1, y1, x2, y2 float64, c color.RGBA, w float64) {
	d.pdf.SetDrawColor(int(c.R), int(c.G), int(c.B))
	d.pdf.SetLineWidth(w)
	d.pdf.Line(x1, y1, x2, y2)
}

func (d *document) width(s string) float64 { return d.pdf.GetStringWidth(clean(s)) }

func (d *document) put(x, y float64, s string) { d.pdf.Text(x, y, clean(s)) }

func (d *document) putRight(x, y float64, s string) { d.put(x-d.width(s), y, s) }

func (d *document) y() float64 { return d.pdf.GetY() }

func (d *document) down(mm float64) { d.pdf.SetY(d.y() + mm) }

// room starts a new page unless mm are left on this one.
func (d *document) room(mm float64) {
	if d.y()+mm > pageH-bottom {
		d.newPage()
	}
}

func (d *document) newPage() {
	d.pdf.AddPage()
	d.pdf.SetXY(left, top)
}

// chapter begins a page with a heading that the contents list.
func (d *document) chapter(key, text string) {
	d.newPage()
	d.heading(0, key, text)
}

// heading sets a heading of level 0 or 1, with bookmark, link target and entry in the contents.
func (d *document) heading(level int, key, text string) {
	size, space := float64(sizeH1), 3.0
	if level > 0 {
		size, space = sizeH2, 1.5
		d.room(30)
		d.down(3)
	}
	d.font("B", size)
	d.color(ink)
	link := d.link(key)
	d.pdf.SetLink(link, d.y(), -1)
	d.pdf.Bookmark(clean(text), level, d.y())
	d.toc = append(d.toc, tocEntry{level, text, d.pdf.PageNo(), link})
	for _, l := range d.split(text, textW) {
		d.down(size * 0.42)
		d.put(left, d.y(), l)
	}
	d.down(space)
	if level == 0 {
		d.line(left, d.y(), left+28, d.y(), accent, 0.8)
		d.down(4)
	}
}

// link is the identifier of a place in the document, whether it has been drawn yet or not.
func (d *document) link(key string) int {
	id, ok := d.links[key]
	if !ok {
		id = d.pdf.AddLink()
		d.links[key] = id
	}
	return id
}

// split breaks text into lines that fit, words that are too long included.
func (d *document) split(text string, width float64) []string {
	var lines []string
	for _, para := range strings.Split(clean2(text), "\n") {
		lines = append(lines, d.splitLine(para, width)...)
	}
	return lines
}

// clean2 is clean that keeps line ends.
func clean2(s string) string {
	parts := strings.Split(s, "\n")
	for i := range parts {
		parts[i] = clean(parts[i])
	}
	return strings.Join(parts, "\n")
}

func (d *document) splitLine(text string, width float64) []string {
	var lines []string
	line := ""
	for _, word := range strings.Fields(text) {
		for d.pdf.GetStringWidth(word) > width {
			cut := len(word)
			for cut > 1 && d.pdf.GetStringWidth(word[:cut]) > width {
				cut--
				for cut > 1 && word[cut]&0xc0 == 0x80 {
					cut--
				}
			}
			if line != "" {
				lines = append(lines, line)
				line = ""
			}
			lines = append(lines, word[:cut])
			word = word[cut:]
		}
		next := word
		if line != "" {
			next = line + " " + word
		}
		if line != "" && d.pdf.GetStringWidth(next) > width {
			lines = append(lines, line)
			next = word
		}
		line = next
	}
	return append(lines, line)
}

// paragraph sets text over the width of the page.
func (d *document) paragraph(text string) { d.block(text, left, textW, sizeBody, "", ink) }

func (d *document) note(text string) { d.block(text, left, textW, sizeSmall, "", soft) }

func (d *document) block(text string, x, w, size float64, style string, c color.RGBA) {
	d.font(style, size)
	d.color(c)
	step := size * 0.47
	for _, l := range d.split(text, w) {
		d.room(step + 1)
		d.font(style, size)
		d.color(c)
		d.down(step)
		d.put(x, d.y()-step*0.24, l)
	}
	d.down(1.6)
}

// bullets sets a list.
func (d *document) bullets(items []string) {
	for _, item := range items {
		d.room(6)
		d.font("", sizeBody)
		d.color(accent)
		d.put(left+0.5, d.y()+sizeBody*0.36, "•")
		d.block(item, left+5, textW-5, sizeBody, "", ink)
		d.down(-0.6)
	}
	d.down(1.5)
}

// monospaced sets commands and hashes.
func (d *document) monospaced(lines []string) {
	d.pdf.SetFont(mono, "", sizeSmall)
	var wrapped []string
	for _, l := range lines {
		wrapped = append(wrapped, d.split(l, textW-8)...)
	}
	step := 3.9
	d.room(float64(len(wrapped))*step + 6)
	h := float64(len(wrapped))*step + 4
	d.fill(shade)
	d.pdf.Rect(left, d.y(), textW, h, "F")
	y := d.y() + 2
	d.pdf.SetFont(mono, "", sizeSmall)
	d.color(ink)
	for _, l := range wrapped {
		y += step
		d.put(left+4, y-1, l)
	}
	d.pdf.SetY(y + 4)
}
