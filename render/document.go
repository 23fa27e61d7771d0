package render

import (
	"bytes"
	"fmt"
	"io"
	"time"

	"github.com/jung-kurt/gofpdf"

	"assaywrit/decision"
	"assaywrit/evidence"
)

// A document is one PDF in the making.
type document struct {
	*pen
	in    Input
	words words
	title string // in the footer

	y        float64  // where the next thing is set
	chapter  string   // being set
	chapters []string // of each page, from 1
	sections []section
	numbers  map[string]string // of sections, by key
	byID     map[string]*decision.Check
	anchors  map[string]place
	areas    []area
	marks    []bookmark
}

// A place is a page and a height on it.
type place struct {
	page int
	y    float64
}

// An area leads to a place by its key.
type area struct {
	page       int
	x, y, w, h float64
	key        string
}

// newDocument begins a PDF whose bytes depend on its content alone: dates come from the record.
func newDocument(in Input, w words, title string) *document {
	pdf := gofpdf.New("P", "mm", "A4", "")
	pdf.SetCatalogSort(true)
	at := latest(in.Record)
	pdf.SetCreationDate(at)
	pdf.SetModificationDate(at)
	pdf.SetMargins(0, 0, 0)
	pdf.SetAutoPageBreak(false, 0)
	for f := range faceCount {
		pdf.AddUTF8FontFromBytes(familyOf[f], styleOf[f], ttfOf[f])
	}
	c := in.Record.Case
	d := &document{pen: newPen(pdf), in: in, words: w, title: title, numbers: map[string]string{}, anchors: map[string]place{}, byID: indexChecks(in.Finding), chapters: []string{""}}
	pdf.SetTitle(d.clean(regular, title+" "+c.Number), true)
	pdf.SetSubject(d.clean(regular, d.t("subject", "sample", c.Sample.Code)), true)
	pdf.SetAuthor(d.clean(regular, c.Laboratory.Name), true)
	pdf.SetCreator(d.clean(regular, in.Record.Engine.Name+" "+in.Record.Engine.Version), true)
	return d
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
	for _, x := range rec.Case.Deviations {
		see(x.At)
	}
	if t := rec.Case.InitialTest; t != nil {
		see(t.At)
	}
	return last
}

// newPage begins a page.
func (d *document) newPage() {
	d.addPage()
	d.chapters = append(d.chapters, d.chapter)
	d.y = top
}

func (d *document) page() int { return len(d.chapters) - 1 }

// room begins a new page unless so many millimetres are left on this one.
func (d *document) room(mm float64) {
	if d.y+mm > lowest {
		d.newPage()
	}
}

func (d *document) down(mm float64) { d.y += mm }

// anchor makes the present place one that areas can lead to.
func (d *document) anchor(key string) { d.anchors[key] = place{d.page(), d.y} }

// leadTo makes an area of the page lead to a place, wherever it is in the document.
func (d *document) leadTo(key string, x, y, w, h float64) {
	d.areas = append(d.areas, area{d.page(), x, y, w, h, key})
}

// finish sets what every page carries and writes the file.
func (d *document) finish(w io.Writer) (int, error) {
	n := d.page()
	for p := 1; p <= n; p++ {
		d.toPage(p)
		d.furniture(p, n)
	}
	d.flush()
	d.connect()
	d.pdf.SetPage(n)
	var out bytes.Buffer
	if err := d.pdf.Output(&out); err != nil {
		return 0, fmt.Errorf("writing the PDF: %w", err)
	}
	data := out.Bytes()
	if err := openOutline(data, d.marks); err != nil {
		return 0, err
	}
	_, err := w.Write(data)
	return n, err
}

// connect writes the links. One that leads nowhere is a fault of ours.
func (d *document) connect() {
	ids := map[string]int{}
	for _, l := range d.areas {
		to, ok := d.anchors[l.key]
		if !ok {
			panic(fmt.Sprintf("render: internal error: a link to %q, which is nowhere", l.key))
		}
		id, ok := ids[l.key]
		if !ok {
			id = d.pdf.AddLink()
			d.pdf.SetLink(id, max(0, to.y-4), to.page)
			ids[l.key] = id
		}
		d.pdf.SetPage(l.page)
		d.pdf.Link(l.x, l.y, l.w, l.h, id)
	}
}

// furniture is what every page carries: case, sample, identity of the evidence, page n of N, and the mark of a demonstration.
func (d *document) furniture(p, n int) {
	c := d.in.Record.Case
	if c.Demonstration {
		d.rect(left, 7.5, textW, 6, accent)
		d.font(bold, 9.5)
		d.textCentre(pageW/2, 11.8, d.t("demonstration"), paper)
	}
	d.font(regular, sizeSmall)
	id := d.in.EvidenceSHA256[:min(16, len(d.in.EvidenceSHA256))]
	d.fit(left, 19, 112, d.t("header", "case", c.Number, "sample", c.Sample.Code, "laboratory", c.Sample.LaboratoryCode), soft)
	d.font(regular, sizeSmall)
	d.textRight(pageW-right, 19, d.t("header-evidence", "hash", id), soft)
	d.line(left, 20.6, pageW-right, 20.6, rule, 0.5, whole)
	d.line(left, pageH-14, pageW-right, pageH-14, rule, 0.5, whole)
	d.fit(left, pageH-10, 140, d.footer(p), soft)
	d.font(regular, sizeSmall)
	d.textRight(pageW-right, pageH-10, d.t("page-of", "n", fmt.Sprint(p), "total", fmt.Sprint(n)), soft)
}

func (d *document) footer(p int) string {
	text := d.title + "  ·  " + d.in.Record.Case.Laboratory.Code
	if d.chapters[p] != "" {
		text += "  ·  " + d.chapters[p]
	}
	return text
}
