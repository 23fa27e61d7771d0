package render

import (
	"strings"

	"assaywrit/evidence/casefile"
)

// cover is the first page: what this is, whose it is, who answers for it.
func (d *document) cover() {
	c := d.in.Record.Case
	d.newPage()
	d.anchor("cover")
	d.y = 46
	d.block(d.t("package.title"), left, textW, bold, sizeTitle, ink)
	d.down(1)
	d.block(d.t("package.subtitle"), left, textW, regular, 12, soft)
	d.down(4)
	d.line(left, d.y, left+42, d.y, accent, 2.6, whole)
	d.down(9)
	d.coverCodes(c)
	d.pairs([]pair{
		{d.t("label.laboratory"), joined(", ", c.Laboratory.Name+" ("+c.Laboratory.Code+")", c.Laboratory.Address)},
		{d.t("label.site"), c.Laboratory.Site},
		{d.t("label.customer"), joined(", ", c.Customer.Name, c.Customer.Contact)},
		{d.t("label.customer-reference"), c.Customer.Reference},
		{d.t("label.collected-received"), when(c.Sample.CollectedAt) + d.t("and-then") + when(c.Sample.ReceivedAt)},
		{d.t("label.acquired"), d.acquired()},
		{d.t("label.method"), d.methodLine()},
		{d.t("label.criteria"), d.in.Finding.Criteria.ID + ": " + d.in.Finding.Criteria.Edition},
		{d.t("label.status"), d.status()},
	})
	d.down(2)
	d.signatures()
	d.paragraph(d.t("package.confidential"))
}

// coverCodes sets case and codes large: what links this file to one sample.
func (d *document) coverCodes(c casefile.Case) {
	x := left
	for _, p := range []pair{{d.t("label.case"), c.Number}, {d.t("label.sample-code"), c.Sample.Code}, {d.t("label.laboratory-code"), c.Sample.LaboratoryCode}} {
		const w = textW / 3
		d.font(regular, sizeTable)
		d.fit(x, d.y, w-3, p.label, soft)
		d.font(bold, 14)
		d.fit(x, d.y+6.5, w-3, p.value, ink)
		x += w
	}
	d.down(12)
	d.line(left, d.y, left+textW, d.y, rule, 0.5, whole)
	d.down(3)
}

// acquired is the time from the first to the last injection of the batch.
func (d *document) acquired() string {
	rows := d.in.Record.Sequence
	if len(rows) == 0 {
		return ""
	}
	first, last := when(rows[0].AcquiredAt), when(rows[len(rows)-1].AcquiredAt)
	day, hour, ok := strings.Cut(first, " ")
	lastDay, lastHour, _ := strings.Cut(last, " ")
	clock, offset, _ := strings.Cut(hour, "\u00a0")
	if ok && day == lastDay && strings.HasSuffix(lastHour, "\u00a0"+offset) {
		first, last = day+" "+clock, lastHour
	}
	return first + d.t("to") + last
}

// status tells whether this is a first issue, and that the signatures stand beside the file.
func (d *document) status() string {
	c := d.in.Record.Case
	text := d.t("status.first")
	if s := c.Supersedes; s != nil {
		text = d.t("status.replaces", "root", s.Root, "reason", s.Reason)
	}
	if c.Demonstration {
		text = d.t("status.demonstration") + " " + text
	}
	return text
}

// signatures states what the signatories confirm, with room for a hand's signature on a printed copy.
func (d *document) signatures() {
	c := d.in.Record.Case
	d.room(40)
	d.font(bold, sizeH2)
	d.down(5)
	d.text(left, d.y, d.t("signatures.title"), ink)
	d.down(2.5)
	d.paragraph(d.t("signatures.statement"))
	var rows []row
	for _, s := range c.Signatories {
		p := personOf(c, s.Person)
		rows = append(rows, row{cells: []cell{{text: joined(" ", s.Person, p.Name)}, {text: p.Position}, {text: d.words.or("meaning.", s.Meaning)}, {text: "seal/signatures/" + s.Person + "-" + s.Meaning + ".p7s"}, {text: "\n\u00a0"}}})
	}
	d.table(table{name: "signatories", columns: "lllww", rows: rows})
}

func personOf(c casefile.Case, code string) casefile.Person {
	for _, p := range c.People {
		if p.Code == code {
			return p
		}
	}
	return casefile.Person{Code: code}
}

// joined joins what is not empty.
func joined(between string, parts ...string) string {
	var list []string
	for _, p := range parts {
		if p != "" {
			list = append(list, p)
		}
	}
	return strings.Join(list, between)
}
