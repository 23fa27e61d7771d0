package render

import (
	"fmt"
	"io"
	"strings"

	"assaywrit/decision"
	"assaywrit/evidence"
	"assaywrit/evidence/casefile"
)

// Package writes package.pdf: the whole file of the case, down to every trace. It returns the number of pages.
func Package(w io.Writer, in Input) (int, error) {
	words, err := loadWords("en")
	if err != nil {
		return 0, err
	}
	pages := contentsPages(3*len(in.Record.Analytes)*3 + 2*len(in.Record.Injections) + 20) // a guess that is seldom off
	for {
		d := newDocument(in, words, words.get("package-title"))
		need := d.lay(pages)
		if need == pages {
			return d.finish(w)
		}
		pages = need
	}
}

// lay sets the whole document with so many pages for the contents, and returns how many they need.
func (d *document) lay(pages int) int {
	in := d.in
	d.cover()
	contents := d.pdf.PageNo() + 1
	for range pages {
		d.newPage()
	}
	d.summary()
	d.requestAndCustody()
	d.methodAndCriteria()
	d.batch()
	for k := range in.Record.Analytes {
		d.analyte(k)
	}
	d.deviations()
	d.allChecks()
	d.chromatograms()
	d.filesAndChecking()
	d.glossary()
	need := contentsPages(d.tocUnits())
	if need == pages {
		d.contents(contents)
	}
	return need
}

// The contents are measured in units of half a line of a subheading.
const unitsPerPage = 110

func contentsPages(units int) int { return max(1, (units+unitsPerPage-1)/unitsPerPage) }

func (d *document) tocUnits() int {
	n := 0
	for _, e := range d.toc {
		n += tocStep(e)
	}
	return n
}

func tocStep(e tocEntry) int {
	if e.level == 0 {
		return 3
	}
	return 2
}

func (d *document) cover() {
	d.pdf.AddPage()
	d.pdf.SetXY(left, 48)
	d.block(d.words.get("package-title"), left, textW, 26, "B", ink)
	d.down(2)
	d.block(d.words.get("package-subtitle"), left, textW, 12, "", soft)
	d.down(3)
	d.line(left, d.y(), left+40, d.y(), accent, 1)
	d.down(10)
	c := d.in.Record.Case
	d.pairs([][2]string{
		{"Case", c.Number},
		{"Sample code", c.Sample.Code},
		{"Laboratory's code for it", c.Sample.LaboratoryCode},
		{"Laboratory", c.Laboratory.Name + " (" + c.Laboratory.Code + "), " + c.Laboratory.Address},
		{"Work done at", c.Laboratory.Site},
		{"For", c.Customer.Name},
		{"Contact", c.Customer.Contact},
		{"Their reference", c.Customer.Reference},
		{"Collected, received", when(c.Sample.CollectedAt) + ", " + when(c.Sample.ReceivedAt)},
		{"Batch acquired", span(d.in.Record)},
		{"Criteria", d.in.Finding.Criteria.ID + ", " + d.in.Finding.Criteria.Edition},
		{"Replaces", supersedes(c)},
	})
	d.down(4)
	d.font("B", sizeH2)
	d.color(ink)
	d.put(left, d.y(), "Signatures")
	d.down(3)
	d.paragraph(d.words.get("authenticity"))
	var rows [][]string
	for _, s := range c.Signatories {
		rows = append(rows, []string{s.Person, position(c, s.Person), s.Meaning})
	}
	d.table(table{columns: []column{{head: "Person", share: 1}, {head: "Position", share: 3}, {head: "Meaning of the signature", share: 2}}, rows: rows})
	d.paragraph(d.words.get("confidential"))
}

func span(rec *evidence.Record) string {
	if len(rec.Sequence) == 0 {
		return ""
	}
	return when(rec.Sequence[0].AcquiredAt) + " to " + when(rec.Sequence[len(rec.Sequence)-1].AcquiredAt)
}

func supersedes(c casefile.Case) string {
	if c.Supersedes == nil {
		return ""
	}
	return c.Supersedes.Root + ": " + c.Supersedes.Reason
}

func position(c casefile.Case, code string) string {
	for _, p := range c.People {
		if p.Code == code {
			return p.Position
		}
	}
	return ""
}

// contents fills the pages that were left for it.
func (d *document) contents(page int) {
	const unit = 2.12 // mm
	used := unitsPerPage
	y := 0.0
	for _, e := range d.toc {
		step := tocStep(e)
		if used+step > unitsPerPage {
			d.pdf.SetPage(page)
			page++
			d.font("", 6)
			d.font("B", sizeH1)
			d.color(ink)
			y = top + 6
			d.put(left, y, "Contents")
			y += 5
			used = 0
		}
		used += step
		y += float64(step) * unit
		size, indent, style := sizeBody, 0.0, "B"
		if e.level > 0 {
			size, indent, style = 8.5, 5, ""
		}
		d.color(ink)
		d.font(style, size)
		d.put(left+indent, y, e.text)
		end := left + indent + d.width(e.text) + 2
		d.font("", size)
		d.putRight(pageW-right, y, fmt.Sprint(e.page))
		d.pdf.SetDashPattern([]float64{0.3, 1.2}, 0)
		d.line(end, y-0.4, pageW-right-8, y-0.4, rule, 0.25)
		d.pdf.SetDashPattern(nil, 0)
		d.pdf.Link(left, y-3.5, textW, float64(step)*unit, e.link)
	}
}

func (d *document) summary() {
	f := d.in.Finding
	d.chapter("summary", d.words.get("summary-title"))
	d.paragraph(d.words.with("summary-intro", "criteria", f.Criteria.ID, "edition", f.Criteria.Edition))
	d.down(2)
	for _, a := range f.Analytes {
		d.outcome(a)
	}
	required, advisory := failures(f)
	if len(required) > 0 || len(advisory) > 0 {
		d.heading(1, "summary-raised", "Checks that were not met")
		rows := [][]string{}
		for _, c := range required {
			rows = append(rows, []string{"required", c.ID, c.Sentence})
		}
		for _, c := range advisory {
			rows = append(rows, []string{"advisory", c.ID, c.Sentence})
		}
		d.table(table{columns: []column{{head: "Kind", share: 1.1}, {head: "Check", share: 3.4}, {head: "What was found", share: 6}}, rows: rows, size: 7.5})
	}
	d.heading(1, "cautions", d.words.get("cautions-title"))
	d.bullets(f.Cautions)
}

// outcome is the block of one analyte in a summary.
func (d *document) outcome(a decision.AnalyteFinding) {
	d.room(30)
	y := d.y()
	d.font("B", sizeH2)
	d.color(ink)
	d.put(left+4, y+4.5, a.Name)
	d.font("B", sizeBody)
	d.color(accent)
	d.putRight(pageW-right, y+4.5, a.Label)
	d.pdf.SetY(y + 7)
	d.block(a.Sentence, left+4, textW-4, sizeBody, "", ink)
	n, failed := 0, 0
	for _, c := range a.Checks {
		if c.Result != decision.NotApplicable {
			n++
		}
		if c.Result == decision.Failed && c.Required {
			failed++
		}
	}
	d.block(fmt.Sprintf("%d checks were applied, %d required ones were not met. Details: chapter %s.", n, failed, a.Name), left+4, textW-4, sizeSmall, "", soft)
	d.pdf.Link(left, y, textW, d.y()-y, d.link("analyte/"+a.Analyte))
	d.line(left, y+0.5, left, d.y()-1.5, accent, 0.9)
	d.down(3)
}

func failures(f *decision.Finding) (required, advisory []decision.Check) {
	all := [][]decision.Check{f.Batch}
	for _, a := range f.Analytes {
		all = append(all, a.Checks)
	}
	for _, list := range all {
		for _, c := range list {
			switch {
			case c.Result != decision.Failed:
			case c.Required:
				required = append(required, c)
			default:
				advisory = append(advisory, c)
			}
		}
	}
	return required, advisory
}

func (d *document) requestAndCustody() {
	c := d.in.Record.Case
	d.chapter("request", d.words.get("request-title"))
	d.pairs([][2]string{
		{"Asked", c.Request.Text},
		{"Type of test", c.Request.TestType},
		{"Activity", c.Request.Activity},
		{"Substances", strings.Join(c.Request.Analytes, ", ")},
		{"Container", c.Sample.Container},
		{"Matrix", c.Sample.Matrix},
		{"Collected", when(c.Sample.CollectedAt)},
		{"Received", when(c.Sample.ReceivedAt)},
		{"Condition at receipt", c.Sample.Condition},
		{"Irregularities", orNone(strings.Join(c.Sample.Irregularities, "; "))},
		{"Volume", unit(c.Sample.VolumeML, "mL")},
		{"pH", unit(c.Sample.PH, "")},
		{"Specific gravity", gravity(c.Sample.SpecificGravity)},
		{"Appearance", c.Sample.Appearance},
		{"Storage", c.Sample.Storage},
	})
	d.heading(1, "custody", d.words.get("custody-title"))
	var rows [][]string
	for _, e := range c.Custody {
		rows = append(rows, []string{when(e.At), e.Item, e.Event, e.From, e.To, e.Location, joined(e.Seal, e.Note)})
	}
	d.table(table{columns: []column{{head: "Time", share: 2.9}, {head: "Item", share: 1.3}, {head: "Event", share: 2.2}, {head: "From", share: 0.8}, {head: "To", share: 0.8}, {head: "Place", share: 2.2}, {head: "Seal, note", share: 2.2}}, rows: rows})
	d.heading(1, "people", d.words.get("people-title"))
	rows = nil
	for _, p := range c.People {
		rows = append(rows, []string{p.Code, p.Name, p.Position, strings.Join(roles(d.in.Record, p.Code), ", ")})
	}
	d.table(table{columns: []column{{head: "Code", share: 1}, {head: "Name", share: 2}, {head: "Position", share: 3}, {head: "In this case", share: 5}}, rows: rows})
	d.heading(1, "initial", d.words.get("initial-title"))
	if t := c.InitialTest; t != nil {
		d.pairs([][2]string{{"Time", when(t.At)}, {"Method", t.Method}, {"Aliquot", t.Aliquot}, {"By", t.By}, {"Result", t.Result}})
	} else {
		d.paragraph(d.words.get("initial-none"))
	}
	d.heading(1, "materials", d.words.get("materials-title"))
	if len(c.Materials) == 0 {
		d.paragraph(d.words.get("materials-none"))
	} else {
		rows = nil
		for _, m := range c.Materials {
			rows = append(rows, []string{m.Name, m.Lot, m.Expires, m.Certificate})
		}
		d.table(table{columns: []column{{head: "Name", share: 3}, {head: "Lot", share: 1.2}, {head: "Expires", share: 1.2}, {head: "Certificate", share: 3}}, rows: rows})
	}
	if len(c.Documents) > 0 {
		d.heading(1, "documents", d.words.get("documents-title"))
		rows = nil
		for _, x := range c.Documents {
			rows = append(rows, []string{x.Title, "data/inputs/case/" + x.File})
		}
		d.table(table{columns: []column{{head: "Title", share: 1}, {head: "File", share: 1}}, rows: rows})
	}
}

// roles tells what a person did in the case.
func roles(rec *evidence.Record, code string) []string {
	var list []string
	add := func(ok bool, what string) {
		if ok && (len(list) == 0 || list[len(list)-1] != what) {
			list = append(list, what)
		}
	}
	for _, e := range rec.Case.Custody {
		add(e.To == code || e.From == code, "custody")
	}
	for _, r := range rec.Sequence {
		add(r.Operator == code, "acquired the batch")
	}
	add(rec.Case.InitialTest != nil && rec.Case.InitialTest.By == code, "initial test")
	for _, m := range rec.Case.Manual {
		add(m.By == code, "set integrations by hand")
		add(m.ApprovedBy == code, "approved integrations set by hand")
	}
	for _, s := range rec.Case.Signatories {
		add(s.Person == code, "signs as "+s.Meaning)
	}
	return list
}

func joined(a, b string) string {
	if a == "" || b == "" {
		return a + b
	}
	return a + "; " + b
}

func orNone(s string) string {
	if s == "" {
		return "none stated"
	}
	return s
}

func unit(v *float64, u string) string {
	if v == nil {
		return "not stated"
	}
	return strings.TrimSpace(plain(*v) + " " + u)
}

func gravity(v *float64) string {
	if v == nil {
		return "not stated"
	}
	return fmt.Sprintf("%.3f", *v)
}
