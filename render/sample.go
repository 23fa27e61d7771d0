package render

import (
	"fmt"
	"sort"
	"strings"
	"time"

	"assaywrit/evidence"
)

func (d *document) request() {
	c := d.in.Record.Case
	d.pairs([]pair{
		{d.t("label.asked"), c.Request.Text},
		{d.t("label.test-type"), joined(", ", c.Request.TestType, c.Request.Activity)},
		{d.t("label.substances"), strings.Join(d.analyteNames(), ", ")},
		{d.t("label.customer"), joined(", ", c.Customer.Name, c.Customer.Contact)},
		{d.t("label.customer-reference"), c.Customer.Reference},
	})
}

func (d *document) analyteNames() []string {
	var names []string
	for _, a := range d.in.Record.Analytes {
		names = append(names, a.Name)
	}
	return names
}

func (d *document) receipt() {
	s := d.in.Record.Case.Sample
	stated := func(v *float64, write func(float64) string) string {
		if v == nil {
			return d.t("not-stated")
		}
		return write(*v)
	}
	irregular := strings.Join(s.Irregularities, "; ")
	if irregular == "" {
		irregular = d.t("none-stated")
	}
	d.pairs([]pair{
		{d.t("label.codes"), s.Code + "  ↔  " + s.LaboratoryCode},
		{d.t("label.container"), joined(", ", s.Container, s.Matrix)},
		{d.t("label.collected"), when(s.CollectedAt)},
		{d.t("label.received"), when(s.ReceivedAt)},
		{d.t("label.condition"), s.Condition},
		{d.t("label.irregularities"), irregular},
		{d.t("label.volume"), stated(s.VolumeML, func(v float64) string { return plain(v) + " mL" })},
		{d.t("label.ph"), stated(s.PH, plain)},
		{d.t("label.gravity"), stated(s.SpecificGravity, func(v float64) string { return fixed(v, 3) })},
		{d.t("label.appearance"), s.Appearance},
		{d.t("label.storage"), s.Storage},
	})
}

func (d *document) custody() {
	var rows []row
	for _, e := range d.in.Record.Case.Custody {
		rows = append(rows, row{cells: cells(when(e.At), e.Item, e.Event, e.From, e.To, e.Location, joined("; ", e.Seal, e.Note))})
	}
	d.table(table{name: "custody", columns: "llwllww", rows: rows, bare: true})
	d.note(d.t("custody.note"))
}

// An occasion is an entry of the chronology.
type occasion struct {
	at, what, who, key string
}

// occasions are the dated events of a case in the order of time; what has no readable time comes last.
func (d *document) occasions() []occasion {
	rec := d.in.Record
	c := rec.Case
	list := []occasion{{c.Sample.CollectedAt, d.t("chronology.collected"), "", "receipt"}, {c.Sample.ReceivedAt, d.t("chronology.received"), "", "receipt"}}
	if t := c.InitialTest; t != nil {
		list = append(list, occasion{t.At, d.t("chronology.initial", "aliquot", t.Aliquot), t.By, "initial"})
	}
	if n := len(rec.Sequence); n > 0 {
		list = append(list, occasion{rec.Sequence[0].AcquiredAt, d.t("chronology.first", "id", rec.Sequence[0].ID), rec.Sequence[0].Operator, "batch"},
			occasion{rec.Sequence[n-1].AcquiredAt, d.t("chronology.last", "id", rec.Sequence[n-1].ID), rec.Sequence[n-1].Operator, "batch"})
	}
	for _, m := range c.Manual {
		list = append(list, occasion{m.At, d.t("chronology.manual", "compound", m.Compound, "trace", m.Trace, "id", m.Injection), m.By, "manual"})
	}
	for _, x := range c.Deviations {
		if x.At != "" {
			list = append(list, occasion{x.At, d.t("chronology.deviation"), x.ApprovedBy, "deviations"})
		}
	}
	instant := func(text string) time.Time {
		t, err := time.Parse(time.RFC3339, text)
		if err != nil {
			return time.Unix(1<<40, 0)
		}
		return t
	}
	sort.SliceStable(list, func(i, j int) bool { return instant(list[i].at).Before(instant(list[j].at)) })
	return list
}

func (d *document) chronology() {
	var rows []row
	for _, o := range d.occasions() {
		rows = append(rows, row{cells: []cell{{text: when(o.at)}, {text: o.what}, {text: o.who}, {text: d.see(o.key), to: o.key}}})
	}
	d.table(table{name: "chronology", columns: "lwll", rows: rows})
	d.note(d.t("chronology.note"))
}

func (d *document) people() {
	c := d.in.Record.Case
	var rows []row
	for _, p := range c.People {
		rows = append(rows, row{cells: cells(p.Code, p.Name, p.Position, strings.Join(d.roles(p.Code), ", "))})
	}
	d.table(table{name: "people", columns: "lllw", rows: rows, bare: true})
}

// roles tells what a person did in the case, each thing once.
func (d *document) roles(code string) []string {
	rec := d.in.Record
	var list []string
	seen := map[string]bool{}
	add := func(ok bool, what string) {
		if ok && !seen[what] {
			seen[what] = true
			list = append(list, what)
		}
	}
	for _, e := range rec.Case.Custody {
		add(e.To == code || e.From == code, d.t("did.custody"))
	}
	add(rec.Case.InitialTest != nil && rec.Case.InitialTest.By == code, d.t("did.initial"))
	for _, r := range rec.Sequence {
		add(r.Operator == code, d.t("did.acquired"))
	}
	for _, m := range rec.Case.Manual {
		add(m.By == code, d.t("did.manual"))
		add(m.ApprovedBy == code, d.t("did.approved-manual"))
	}
	for _, x := range rec.Case.Deviations {
		add(x.ApprovedBy == code, d.t("did.approved-deviation"))
	}
	for _, s := range rec.Case.Signatories {
		add(s.Person == code, d.t("did.signs", "meaning", d.words.or("meaning.", s.Meaning)))
	}
	return list
}

func (d *document) initialTest() {
	t := d.in.Record.Case.InitialTest
	if t == nil {
		d.paragraph(d.t("initial.none"))
		return
	}
	d.pairs([]pair{{d.t("label.time"), when(t.At)}, {d.t("label.method"), t.Method}, {d.t("label.aliquot"), t.Aliquot}, {d.t("label.by"), t.By}, {d.t("label.result"), t.Result}})
}

func (d *document) materials() {
	list := d.in.Record.Case.Materials
	if len(list) == 0 {
		d.paragraph(d.t("materials.none"))
		return
	}
	var rows []row
	for i, m := range list {
		rows = append(rows, row{cells: cells(m.Name, m.Lot, m.Expires, m.Certificate, d.resultOf(fmt.Sprintf("case/material-in-date/%d", i+1)))})
	}
	d.table(table{name: "materials", columns: "wllwl", rows: rows, bare: true})
}

func (d *document) documents() {
	list := d.in.Record.Case.Documents
	if len(list) == 0 {
		d.paragraph(d.t("documents.none"))
		return
	}
	var rows []row
	for _, x := range list {
		rows = append(rows, row{cells: []cell{{text: x.Title}, {text: inputPath(x.File)}, {text: d.shortHash(x.File)}}})
	}
	d.table(table{name: "documents", columns: "wwm", rows: rows})
}

// inputPath is where a file of the case folder lies in the bundle.
func inputPath(file string) string { return "data/inputs/case/" + file }

// hashOf is the SHA-256 of a file of the case folder, or "".
func (d *document) hashOf(file string) string { return hashIn(d.in.Record.Inputs, file) }

func hashIn(inputs []evidence.InputFile, file string) string {
	for _, f := range inputs {
		if f.Path == file {
			return f.SHA256
		}
	}
	return ""
}

// shortHash is the beginning of a file's SHA-256; the whole stands in the list of files.
func (d *document) shortHash(file string) string {
	h := d.hashOf(file)
	if h == "" {
		return missing
	}
	return h[:min(16, len(h))] + "…"
}
